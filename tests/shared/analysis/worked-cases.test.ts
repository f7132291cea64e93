import { describe, expect, it } from 'vitest'
import cases from '#tests/fixtures/analog-cases.json' with { type: 'json' }
import { expectClose } from '#tests/support/expect-close.ts'
import type { Figures } from './worked-circuits.ts'
import { circuits } from './worked-circuits.ts'

interface Tolerance {
  abs?: number
  rel?: number
}

const list = (value: unknown): number[] => (Array.isArray(value) ? value : [value]).map(Number)

function figures(record: Record<string, unknown>): Figures {
  return {
    one: (key) => list(record[key])[0] ?? NaN,
    many: (key) => list(record[key]),
  }
}

describe.each(cases.map((entry) => ({ ...entry, name: `${entry.id} (${entry.source})` })))(
  '$name',
  (entry) => {
    const circuit = circuits[entry.id]
    const recomputed: Record<string, unknown> = entry.recomputed
    const published: Record<string, unknown> = entry.expect
    const tolerances: Record<string, Tolerance | undefined> = entry.tolerance
    const answers = circuit?.(figures(entry.given), figures(recomputed)) ?? {}
    const keys = Object.keys(answers)

    it('is answered by a network', () => {
      expect(keys.filter((key) => key in recomputed).length).toBeGreaterThan(0)
      expect(keys.filter((key) => !(key in recomputed))).toEqual([])
    })

    it.each(keys)('gives %s at full precision', (key) => {
      const expected = list(recomputed[key])
      const actual = list(answers[key])
      expect(actual.length).toBe(expected.length)
      actual.forEach((value, k) =>
        expectClose(value, expected[k] ?? NaN, { relative: 1e-6, absolute: 1e-12 }),
      )
    })

    it.each(keys.filter((key) => key in published))('agrees with the printed %s to its rounding', (key) => {
      const { abs = 0, rel = 0 } = tolerances[key] ?? tolerances['*'] ?? {}
      const expected = list(published[key])
      list(answers[key]).forEach((value, k) =>
        expectClose(value, expected[k] ?? NaN, { absolute: abs, relative: rel }),
      )
    })
  },
)
