import { stateOf } from '#shared/budget/headroom.ts'
import { isFilterStage } from '#shared/filters/filter-spec.ts'
import type { Candidate } from './plan.ts'
import type { Trial } from './settle.ts'
import type { Design } from './schema.ts'

/** What each thing costs in the ranking, in units of one resistor. One bit of resolution weighs as much as 20. */
export const RANKING = {
  amplifier: 4,
  integratedPart: 5,
  resistor: 1,
  bitLost: 20,
  tightPin: 2,
  /** Per per cent of the span by which an end point spreads over all boards. */
  spreadPercent: 3.5,
  inverted: 1,
} as const

/** Score of a trial, lower is better, with the figures behind it and a sentence that says what was weighed. */
export function rankTrial(design: Design, trial: Trial): NonNullable<Candidate['ranking']> {
  // Every candidate has the same filter behind it.
  const elements = trial.assessment.chains.low.network.elements.filter((e) => !isFilterStage(e.stage))
  const resistors = elements.filter((e) => e.kind === 'resistor' && !e.fixed).length
  const integrated = new Set(elements.flatMap((e) => (e.kind === 'amplifier' && e.macro ? [e.macro] : [])))
    .size
  const single = elements.filter((e) => e.kind === 'amplifier' && !e.macro).length
  const { y, pins } = trial.assessment
  const steps = 2 ** design.converter.bits
  const range = design.converter.input.high - design.converter.input.low
  const used = Math.max(Math.abs(y.nominal.high - y.nominal.low) / range, 1e-9)
  const codesLost = Math.round(steps * (1 - used))
  const tight = pins.filter((pin) => stateOf(pin, design.rules) === 'tight').length
  const inverted = y.nominal.high < y.nominal.low ? 1 : 0
  const width = Math.max(y.worst.low.high - y.worst.low.low, y.worst.high.high - y.worst.high.low) / 2
  const spread = (100 * width) / Math.max(Math.abs(y.nominal.high - y.nominal.low), 1e-9)
  const score =
    RANKING.amplifier * single +
    RANKING.integratedPart * integrated +
    RANKING.resistor * resistors +
    RANKING.bitLost * Math.log2(1 / used) +
    RANKING.tightPin * tight +
    RANKING.spreadPercent * spread +
    RANKING.inverted * inverted
  const amplifiers = single + integrated
  const parts = resistors + amplifiers
  return {
    score,
    parts,
    amplifiers,
    codesLost,
    text: `${parts === 0 ? 'No part' : `${parts} ${parts === 1 ? 'part' : 'parts'}`}, ${amplifiers} of them ${amplifiers === 1 ? 'an amplifier' : 'amplifiers'}; gives up ${codesLost} of ${steps} codes${tight ? `; ${tight} ${tight === 1 ? 'pin is' : 'pins are'} tight` : ''}.`,
  }
}
