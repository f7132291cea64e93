import { spawnSync } from 'node:child_process'
import { readdirSync, readFileSync } from 'node:fs'
import { join } from 'node:path'
import { planDesign } from '#shared/design/plan-design.ts'
import { factorLu, solveLu } from '#shared/numerics/lu.ts'
import { arrangementDesigns } from '#tests/support/designs.ts'
import { milliseconds, quantile, toRow, type Row } from './rows.ts'

const examples = join(import.meta.dirname, '../../docs/examples')
const TURNS = 5
const FRESH = 3

/**
 * Whole plans (every arrangement, headroom, model check, budget), warm: the examples, and one design for each
 * arrangement with the choice left to the plan. Each design counts with the median of its runs; beside milliseconds
 * stands the multiple of a dense LU of 13 unknowns measured in the same run. Then the first plan of a fresh process.
 */
export function run(): Row[] {
  const unit = timeOfLu()
  const timed = designs().map(([name, document]) => ({ name, median: medianOf(document) }))
  const sorted = timed.map(({ median }) => median).sort((a, b) => a - b)
  const [middle, slow] = [quantile(sorted, 0.5), quantile(sorted, 0.95)]
  const first = timeOfFirst()
  return [
    ...timed.map(({ name, median }) => toRow(`plan of ${name}`, median, 'ms', {})),
    toRow('dense LU of 13 unknowns, factored and solved', unit * 1e3, 'µs', {}),
    toRow(`plans of ${timed.length} designs, median`, middle, 'ms', { most: 20 }, 'Whole plan, warm: median'),
    toRow(
      `plans of ${timed.length} designs, 95th percentile`,
      slow,
      'ms',
      { most: 50 },
      'Whole plan, warm: 95 %',
    ),
    toRow('plans, median, multiple of the LU', middle / unit, '×', {}, 'Whole plan, multiple of a dense LU'),
    toRow('first plan of a fresh process', first, 'ms', { most: 200 }, 'First plan in a fresh process'),
  ]
}

function designs(): [string, unknown][] {
  const files = readdirSync(examples).filter((file) => file.endsWith('.json'))
  return [
    ...files.map((file): [string, unknown] => [file, JSON.parse(readFileSync(join(examples, file), 'utf8'))]),
    ...arrangementDesigns.map(([id, { choose: _, ...document }]): [string, unknown] => [id, document]),
  ]
}

function medianOf(document: unknown): number {
  planDesign(document)
  const times = Array.from({ length: TURNS }, () => milliseconds(() => planDesign(document)))
  return quantile(
    times.sort((a, b) => a - b),
    0.5,
  )
}

/** Milliseconds of one factorisation and solution of a well-conditioned matrix of 13 unknowns. */
function timeOfLu(): number {
  const size = 13
  const matrix = Float64Array.from({ length: size * size }, (_, i) =>
    i % (size + 1) === 0 ? size : Math.sin(i),
  )
  const source = Float64Array.from({ length: size }, (_, i) => i)
  const turns = 20_000
  const work = () => {
    for (let i = 0; i < turns; i++) solveLu(factorLu(matrix.slice(), size), source)
  }
  work()
  return milliseconds(work) / turns
}

/** Milliseconds of the first plan in a process that has loaded the engine and planned nothing; median of a few. */
function timeOfFirst(): number {
  const script = join(import.meta.dirname, 'first-plan.ts')
  const times = Array.from({ length: FRESH }, () => {
    const { stdout, stderr } = spawnSync(process.execPath, ['--import', 'tsx', script], { encoding: 'utf8' })
    const found = Number.parseFloat(stdout)
    if (!Number.isFinite(found)) throw new Error(`The fresh process said nothing: ${stderr}`)
    return found
  })
  return quantile(
    times.sort((a, b) => a - b),
    0.5,
  )
}
