import { spawnSync } from 'node:child_process'
import { existsSync, readFileSync, rmSync } from 'node:fs'
import { join } from 'node:path'
import { ensureBuild, ensureDebian, ensureDeps, root } from '../server/bin/setup.mjs'

/*
 * Runs every test on a fresh clone and says in its last line how many passed. Arguments go on to vitest:
 * `npm test -- tests/shared/units` runs one folder.
 */

ensureDeps()
ensureDebian({ chromium: 'chromium', pdftotext: 'poppler-utils' })
ensureBuild('client')
ensureBuild('server')

const report = join(root, 'test-results/vitest.json')
rmSync(report, { force: true })
const { status } = spawnSync(
  process.execPath,
  [
    join(root, 'node_modules/vitest/vitest.mjs'),
    'run',
    '--config',
    join(root, 'vite.config.ts'),
    '--reporter=default',
    '--reporter=json',
    `--outputFile.json=${report}`,
    ...process.argv.slice(2),
  ],
  { cwd: root, stdio: 'inherit', env: { ...process.env, NODE_ENV: 'test' } },
)

if (!existsSync(report)) {
  console.log('0 passed, 1 failed')
  process.exit(1)
}

const result = JSON.parse(readFileSync(report, 'utf8'))
// A file that cannot even be imported holds no failed test, but it is a failure.
const broken = result.testResults.filter(
  (file) => file.status === 'failed' && !file.assertionResults.some((test) => test.status === 'failed'),
).length
const failed = result.numFailedTests + broken
const nothingRan = result.numPassedTests + failed === 0
const skipped = result.numPendingTests + (result.numTodoTests ?? 0)
const hasFailed = failed > 0 || nothingRan || status !== 0
console.log(
  `${result.numPassedTests} passed, ${hasFailed ? Math.max(failed, 1) : 0} failed${skipped ? `, ${skipped} skipped` : ''}`,
)
process.exit(hasFailed ? 1 : 0)
