import { existsSync, readFileSync, writeFileSync } from 'node:fs'
import { cpus, totalmem } from 'node:os'
import { join } from 'node:path'
import { parseArgs } from 'node:util'
import { run as runAccuracy } from './accuracy.bench.ts'
import { run as runPicker } from './picker.bench.ts'
import { run as runPlan } from './plan.bench.ts'
import { toReadme } from './readme-table.ts'
import { written, type Row } from './rows.ts'
import { run as runSpread } from './spread.bench.ts'

/*
 * Measures, prints each row with what is required of it, and writes all of them as JSON. Says plainly where a figure
 * falls short; never fails a build.
 *
 *   npm run bench -- [results.json] [--readme] [--only plan]
 */

const root = join(import.meta.dirname, '../..')

interface Bench {
  name: string
  title: string
  run(): Row[] | Promise<Row[]>
}

const benches: Bench[] = [
  { name: 'picker', title: 'Picker', run: runPicker },
  { name: 'plan', title: 'Whole plan', run: runPlan },
  { name: 'spread', title: 'Spread of boards', run: runSpread },
  { name: 'accuracy', title: 'Accuracy', run: runAccuracy },
]

function print(title: string, rows: readonly Row[]): void {
  console.log(`\n${title}`)
  for (const { what, value, unit, required, met } of rows) {
    const figure = `${written(value)} ${unit}`
    const verdict = met === null ? '' : met ? `  met: ${required}` : `  SHORT: ${required} required`
    console.log(`  ${what.padEnd(72)} ${figure.padStart(16)}${verdict}`)
  }
}

/** The machine in general words: enough to judge milliseconds by. */
function machine(): string {
  const memory = Math.round(totalmem() / 2 ** 30)
  const [major] = process.versions.node.split('.')
  return `${cpus().length} processor cores, ${memory} GB of memory, Node ${major}, ${process.platform} on ${process.arch}`
}

const { values, positionals } = parseArgs({
  allowPositionals: true,
  options: { readme: { type: 'boolean', default: false }, only: { type: 'string' } },
})
const wanted = benches.filter(({ name }) => values.only === undefined || name === values.only)
if (wanted.length === 0)
  throw new Error(
    `There is no bench "${values.only}"; there are ${benches.map(({ name }) => name).join(', ')}`,
  )
if (values.readme && values.only !== undefined)
  throw new Error('The table in README takes all benches: leave --only out')

const results: { bench: string; rows: Row[] }[] = []
for (const { name, title, run } of wanted) {
  const rows = await run()
  print(title, rows)
  results.push({ bench: name, rows })
}
const file = positionals[0] ?? join(root, 'bench-results.json')
writeFileSync(file, `${JSON.stringify({ machine: machine(), results }, null, 2)}\n`)
console.log(`\nWritten: ${file}`)

if (values.readme) {
  const readme = join(root, 'README.md')
  const before = existsSync(readme) ? readFileSync(readme, 'utf8') : ''
  const rows = results.flatMap((result) => result.rows)
  writeFileSync(readme, toReadme(before, rows, machine()))
  console.log('Written: the table in README.md')
}
