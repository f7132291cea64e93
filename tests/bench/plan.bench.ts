import { readdirSync, readFileSync } from 'node:fs'
import { join } from 'node:path'
import { planDesign } from '#shared/design/plan-design.ts'
import type { Row } from './picker.bench.ts'
import { factorLu, solveLu } from '#shared/numerics/lu.ts'

const examples = join(import.meta.dirname, '../../docs/examples')
const TURNS = 5

/** A whole plan of each example, warm, in milliseconds and as a multiple of a dense LU of 13 unknowns of the same run. */
export function run(): Row[] {
  const unit = timeOfLu()
  const medians = readdirSync(examples)
    .filter((file) => file.endsWith('.json'))
    .map((file) => {
      const document: unknown = JSON.parse(readFileSync(join(examples, file), 'utf8'))
      planDesign(document)
      const times = Array.from({ length: TURNS }, () => milliseconds(() => planDesign(document)))
      return { file, median: times.sort((a, b) => a - b)[Math.floor(TURNS / 2)] ?? NaN }
    })
  const all = medians.map(({ median }) => median).sort((a, b) => a - b)
  const middle = all[Math.floor(all.length / 2)] ?? NaN
  const largest = all.at(-1) ?? NaN
  return [
    ...medians.map(({ file, median }): Row => ({
      what: `plan of ${file}, multiple of the LU (${median.toFixed(1)} ms)`,
      value: median / unit,
      unit: '×',
      required: '',
      met: null,
    })),
    { what: 'plans, median', value: middle, unit: 'ms', required: 'at most 20', met: middle <= 20 },
    { what: 'plans, largest', value: largest, unit: 'ms', required: 'at most 50', met: largest <= 50 },
  ]
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

function milliseconds(work: () => unknown): number {
  const start = performance.now()
  work()
  return performance.now() - start
}
