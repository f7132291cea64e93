import { planDesign, prepareCandidate, type Prepared } from '#shared/design/plan-design.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import { buildDesign } from './designs.ts'
import { chosenOf } from './plans.ts'

/** The chosen candidate of a document, ready for a study. */
export function prepareChosen(document: unknown): Prepared {
  const prepared = prepareCandidate(document, chosenOf(planDesign(document)))
  if (!prepared) throw new Error('the chosen candidate cannot be built')
  return prepared
}

/** An amplifier without errors of its own, so that the resistors alone make the spread. */
export const faultless = {
  a0: 1e12,
  rin: 1e15,
  rcm: 1e15,
  rout: 1e-3,
  vos: 0,
  vosDrift: 0,
  ib: 0,
  ios: 0,
  cmrr: 200,
  psrr: 200,
  en: 0,
  in: 0,
}

/** Two resistors between exact rails, a faultless amplifier and a converter of 28 bits; judged as built. */
export function buildRatioDesign(
  arrangement: string,
  given: {
    output: { low: number; high: number }
    values: Record<string, number>
    tolerance: number
    distribution?: 'rectangular' | 'normal'
    target?: number
  },
): DesignDocument {
  return buildDesign({
    sensor: {
      kind: 'voltage',
      quantity: { name: 'Voltage', unit: 'V', ...given.output },
      output: given.output,
    },
    converter: { input: { low: -1, high: 5 }, bits: 28 },
    rails: { positive: 12, negative: -12 },
    parts: { resistors: { tolerance: given.tolerance, drift: 0 }, amplifier: faultless },
    choose: { arrangement, values: given.values, filter: { kind: 'none' } },
    target: { limit: given.target ?? 1, per: 'quantity', state: 'asBuilt' },
    analysis: { distribution: given.distribution ?? 'rectangular' },
  })
}
