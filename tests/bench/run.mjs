import { spawnSync } from 'node:child_process'
import { join } from 'node:path'
import { ensureDeps, root } from '../../server/bin/setup.mjs'

// Prints the measured rows of every bench; ratios compare things measured in this one run.
ensureDeps()
const { status } = spawnSync(
  process.execPath,
  ['--import', 'tsx', join(root, 'tests/bench/print.ts'), ...process.argv.slice(2)],
  { cwd: root, stdio: 'inherit' },
)
process.exit(status ?? 1)
