import {
  formRefs,
  idealValues,
  type PickRequest,
  pickValues,
  type ValueForm,
} from '#shared/amplifiers/picker/index.ts'
import { toProblem } from '#shared/amplifiers/picker/problem.ts'
import { type SeriesName, standardValues } from '#shared/parts/series.ts'
import { seeded } from '#tests/shared/picker/scenarios.ts'
import { milliseconds, quantile, toRow, type Bound, type Row } from './rows.ts'

type Random = () => number
type Pair = [number, number]

const REFERENCES = [2.048, 2.5, 3, 3.3, 4.096, 5]
const TARGETS = 200
/** Each target counts with its fastest run, so that other work on the machine does not. */
const REPEATS = 15
/** Rounds before anything is timed: the picker is measured as it runs while a person types, not as it starts. */
const WARM = 5

interface Kind {
  name: string
  resistors: number
  inverts?: boolean
  make: (random: Random, source: number, reference: number) => ValueForm
}

const bipolar = (random: Random, scale = 1): Pair => {
  const size = scale * (0.1 + random())
  return [-size, size]
}

/** Usual sensor spans for each arrangement. */
const kinds: Kind[] = [
  {
    name: 'non-inverting, offset up',
    resistors: 4,
    make: (random, source, reference) => ({
      kind: 'non-inverting-up',
      signal: bipolar(random),
      source,
      reference,
    }),
  },
  {
    name: 'non-inverting, offset down',
    resistors: 4,
    make: (random, _, reference) => ({
      kind: 'non-inverting-down',
      signal: [0.2 + random() * 0.5, 0.8 + random() * 0.7],
      reference,
    }),
  },
  {
    name: 'weighted difference',
    resistors: 4,
    make: (random, source, reference) => ({
      kind: 'weighted-difference',
      signal: [1 + random(), 2.5 + random() * 3],
      source,
      reference,
    }),
  },
  {
    name: 'inverting, offset up',
    resistors: 4,
    inverts: true,
    make: (random, source, reference) => ({
      kind: 'inverting-up',
      signal: bipolar(random),
      source,
      reference,
    }),
  },
  {
    name: 'difference with divider',
    resistors: 4,
    make: (random, source, reference) => ({
      kind: 'difference',
      signal: bipolar(random),
      source,
      level: { reference },
    }),
  },
  {
    name: 'three-amplifier with divider',
    resistors: 4,
    make: (random, _, reference) => ({
      kind: 'gain-pair',
      signal: bipolar(random, 0.1),
      level: { reference },
    }),
  },
  {
    name: 'level shift',
    resistors: 3,
    make: (random, source, reference) => ({
      kind: 'level-shift',
      signal: random() < 0.5 ? [-10, 10] : [-5, 5 + random() * 5],
      source,
      reference,
    }),
  },
  {
    name: 'inverting, offset down',
    resistors: 3,
    inverts: true,
    make: (random, source, reference) => ({
      kind: 'inverting-down',
      signal: [-(2 + random()), -(0.2 + random())],
      source,
      reference,
    }),
  },
]

/** Measures the picker: lists, time per target, and the ratio to exhaustive search timed in the same run. */
export function run(): Row[] {
  const rows = [listsRow()]
  for (const kind of kinds) rows.push(...kindRows(kind))
  return rows
}

/** Building what is kept per series, window and constraints: a demand never seen before makes a new table. */
function listsRow(): Row {
  const random = seeded(1)
  const base = realistic(kinds[0] as Kind, random, 'E96', 0.001)
  pickValues(base)
  const times = Array.from({ length: 5 }, (_, i) =>
    milliseconds(() => pickValues({ ...base, pairs: [{ refs: ['Rf', 'Rg'], minimumSum: 1 + i }] })),
  )
  const value = Math.min(...times)
  return toRow('picker: table of E96 pairs, three decades', value, 'ms', { most: 30 }, 'Picker: lists, once')
}

function kindRows(kind: Kind): Row[] {
  const [coarse, fine] = (['E24', 'E96'] as const).map((series) => {
    const random = seeded(5)
    return Array.from({ length: TARGETS }, () => realistic(kind, random, series, 0.001))
  }) as [PickRequest[], PickRequest[]]
  const times = timeAll(fine)
  const [median, slow] = [quantile(times, 0.5), quantile(times, 0.99)]
  const whole = exhaustive(fine[0] as PickRequest, kind.resistors === 4 ? 1 : null).milliseconds
  const ratio = (whole * 1e3) / median
  const ratioSlow = (whole * 1e3) / slow

  const full = exhaustive(coarse[0] as PickRequest, null)
  const ofFull = pickValues(coarse[0] as PickRequest)
  const same = ofFull.ok && Math.abs(ofFull.optimum - full.optimum) < 1e-10
  const ratioFull = (full.milliseconds * 1e3) / quantile(timeAll(coarse), 0.5)
  const four = kind.resistors === 4
  const group = four ? 'Picker, four resistors' : 'Picker, three resistors'
  const rows: [string, number, string, Bound, string][] = [
    ['E96, median', median, 'µs', four ? { most: 50 } : {}, 'E96: median'],
    ['E96, 99th percentile', slow, 'µs', four ? { most: 2000 } : {}, 'E96: 99 %'],
    ['E96, exhaustive over median', ratio, '×', { least: four ? 100_000 : 1000 }, 'exhaustive over median'],
    [
      'E96, exhaustive over 99th percentile',
      ratioSlow,
      '×',
      four ? { least: 10_000 } : {},
      'exhaustive over 99 %',
    ],
    ['E24 in full over median', ratioFull, '×', four ? { least: 1000 } : {}, 'E24 in full over median'],
  ]
  return [
    ...rows.map(([what, value, unit, bound, headline]) =>
      toRow(`picker: ${kind.name}, ${what}`, value, unit, bound, `${group}, ${headline}`),
    ),
    {
      what: `picker: ${kind.name}, E24 in full, same optimum`,
      value: full.optimum,
      unit: '',
      required: 'equal',
      met: same,
    },
  ]
}

/** A target that the arrangement's ideal equations can meet, with guard bands and source resistances as they occur. */
function realistic(kind: Kind, random: Random, series: SeriesName, limit: number): PickRequest {
  const list = standardValues(series, 1e3, 1e6)
  for (;;) {
    const reference = among(random, REFERENCES)
    const range = among(random, REFERENCES)
    const guard = among(random, [0, 0.02, 0.05])
    const form = kind.make(random, among(random, [0, 0, 100, 1000]), reference)
    const ends: Pair = [range * guard, range * (1 - guard)]
    const target: Pair = kind.inverts ? [ends[1], ends[0]] : ends
    if (!idealValues(form, target, 10_000)) continue
    const refs = formRefs(form)
    return {
      form,
      target,
      lists: Object.fromEntries(refs.map((ref) => [ref, list])),
      tolerance: Object.fromEntries(refs.map((ref) => [ref, limit])),
      preferred: 10_000,
    }
  }
}

function among<T>(random: Random, choices: readonly T[]): T {
  return choices[Math.floor(random() * choices.length)] as T
}

/** µs per request, ascending. */
function timeAll(requests: PickRequest[]): number[] {
  for (let i = 0; i < WARM; i++) for (const request of requests) pickValues(request)
  return requests
    .map((request) => {
      let least = Infinity
      for (let i = 0; i < REPEATS; i++) least = Math.min(least, milliseconds(() => pickValues(request)) * 1e3)
      return least
    })
    .sort((a, b) => a - b)
}

/** Exhaustive search, timed when warm. */
function exhaustive(request: PickRequest, outer: number | null): { milliseconds: number; optimum: number } {
  const runs = Array.from({ length: 3 }, () => exhaust(request, outer))
  return runs.reduce((a, b) => (b.milliseconds < a.milliseconds ? b : a))
}

/**
 * Exhaustive search with everything taken out of the inner loop that can be: the lines of the first pair are worked out
 * once per pair, the factors of a second pair once in all. With `outer` only so many values of the first resistor are
 * searched and the time is scaled to all of them.
 */
function exhaust(request: PickRequest, outer: number | null): { milliseconds: number; optimum: number } {
  const { alpha, beta, lines } = toProblem(request.form)
  const values = Float64Array.from(Object.values(request.lists)[0] as readonly number[])
  const [t0, t1] = request.target
  if (!alpha) throw new RangeError('Two free ratios are compared')
  const factors = beta.kind === 'pair' ? factorsOf(beta, values) : null
  const first = outer === null ? values : spreadOut(values, outer)
  let best = Infinity
  const time = milliseconds(() => {
    for (const a of first) {
      for (const b of values) {
        const r = (a + alpha.above) / (b + alpha.below)
        const m = lines.inverse ? 1 / (1 + r) : r
        const c0 = lines.pa[0] + lines.pb[0] * m - t0
        const c1 = lines.pa[1] + lines.pb[1] * m - t1
        const d0 = lines.da[0] + lines.db[0] * m
        const d1 = lines.da[1] + lines.db[1] * m
        if (factors) best = Math.min(best, leastOf(factors, c0, c1, d0, d1))
        else if (beta.kind === 'shared') {
          const top = a + beta.own
          for (const x of values) {
            const q = top / (x + beta.series)
            const factor = beta.divider ? 1 / (1 + r + q) : q
            const miss = Math.max(Math.abs(c0 + factor * d0), Math.abs(c1 + factor * d1))
            if (miss < best) best = miss
          }
        } else {
          const thevenin = 1 / (1 / (a + alpha.above) + 1 / b)
          for (const top of values) {
            for (const bottom of values) {
              const factor = top / (bottom + thevenin)
              const miss = Math.max(Math.abs(c0 + factor * d0), Math.abs(c1 + factor * d1))
              if (miss < best) best = miss
            }
          }
        }
      }
    }
  })
  return { milliseconds: (time * values.length) / first.length, optimum: best / Math.abs(t1 - t0) }
}

function leastOf(factors: Float64Array, c0: number, c1: number, d0: number, d1: number): number {
  let best = Infinity
  for (let i = 0; i < factors.length; i++) {
    const factor = factors[i] as number
    const miss = Math.max(Math.abs(c0 + factor * d0), Math.abs(c1 + factor * d1))
    if (miss < best) best = miss
  }
  return best
}

function factorsOf(
  beta: Extract<ReturnType<typeof toProblem>['beta'], { kind: 'pair' }>,
  values: Float64Array,
): Float64Array {
  const { legs, divider, f0, f1 } = beta
  const factors = new Float64Array(values.length * values.length)
  let place = 0
  for (const a of values) {
    for (const b of values) {
      const q = (a + legs.above) / (b + legs.below)
      factors[place++] = divider ? 1 / (1 + q) : f0 + f1 * q
    }
  }
  return factors
}

function spreadOut(values: Float64Array, count: number): Float64Array {
  return values.filter((_, i) => i % Math.ceil(values.length / count) === 0).slice(0, count)
}
