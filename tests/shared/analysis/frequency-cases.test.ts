import { describe, expect, it } from 'vitest'
import cases from '#tests/fixtures/frequency-cases.json' with { type: 'json' }
import { expectClose } from '#tests/support/expect-close.ts'
import { frequencyCircuits } from './frequency-circuits.ts'
import type { Figures } from './worked-circuits.ts'

interface Tolerance {
  abs?: number
  rel?: number
}

const list = (value: unknown): number[] => (Array.isArray(value) ? value : [value]).map(Number)

const figures = (record: Record<string, unknown>): Figures => ({
  one: (key) => list(record[key])[0] ?? NaN,
  many: (key) => list(record[key]),
})

/** Cases that a design answers stand in the tests of budgets: drive, dynamics, noise. */
const elsewhere = [
  'capacitive-load-compensated',
  'full-power-bandwidth-1',
  'full-power-bandwidth-2',
  'slew-and-bandwidth-limits',
  'ideal-signal-to-noise',
  'quantisation-10-bit',
]

/** Integrals are promised to 0.1 %, and two books take 1.38e-23 J/K, which is 0.02 % less; all else is a formula. */
const looser = [
  'noise-bandwidth-of-equal-poles',
  'photodiode-noise-gain',
  'thermal-noise-in-a-band',
  'gain-100-noise',
]

const own = cases.filter(({ id }) => !elsewhere.includes(id))

describe.each(own.map((entry) => ({ ...entry, name: `${entry.id} (${entry.source})` })))('$name', (entry) => {
  const recomputed: Record<string, unknown> = entry.recomputed
  const published: Record<string, unknown> = entry.expect
  const tolerances: Record<string, Tolerance | undefined> = entry.tolerance
  const answers = frequencyCircuits[entry.id]?.(figures(entry.given), figures(recomputed)) ?? {}
  const keys = Object.keys(answers)
  const relative = looser.includes(entry.id) ? 1e-3 : 1e-6

  it('is answered', () => {
    expect(keys.length).toBeGreaterThan(0)
    expect(keys.filter((key) => !(key in recomputed))).toEqual([])
  })

  it.each(keys)('gives %s at full precision', (key) => {
    const expected = list(recomputed[key])
    const actual = list(answers[key])
    expect(actual.length).toBe(expected.length)
    actual.forEach((value, k) => expectClose(value, expected[k] ?? NaN, { relative }))
  })

  it.each(keys.filter((key) => key in published))('agrees with the printed %s to its rounding', (key) => {
    const { abs = 0, rel = 0 } = tolerances[key] ?? tolerances['*'] ?? {}
    const expected = list(published[key])
    list(answers[key]).forEach((value, k) =>
      expectClose(value, expected[k] ?? NaN, { absolute: abs, relative: rel }),
    )
  })
})
