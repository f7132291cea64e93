import { computeBudget } from '#shared/budget/error-budget.ts'
import type { Budget, BudgetLine, NoiseSummary } from '#shared/design/plan.ts'
import type { Design, DesignDocument } from '#shared/design/schema.ts'
import type { Trial } from '#shared/design/settle.ts'
import { buildTrial, parseDesign } from './trials.ts'

/** A noise summary of `rms` volts in all, `quantisation` of them by the converter's steps. */
export const noiseOf = (rms: number, quantisation = 0): NoiseSummary => ({
  from: 0.1,
  to: 1e6,
  temperature: 300,
  rms,
  circuit: Math.sqrt(Math.max(0, rms ** 2 - quantisation ** 2)),
  lines: [{ id: 'quantisation', label: 'Quantisation', source: 'converter', rms: quantisation, share: 0 }],
  snr: 0,
  effectiveBits: 0,
  noiseFreeBits: 0,
  dominant: '',
})

export interface Budgeted {
  design: Design
  trial: Trial
  budget: Budget
  line(id: string): BudgetLine
}

/** Plans a document with an arrangement and takes its budget. */
export function budgetOf(document: DesignDocument, arrangement: string, noise = noiseOf(0)): Budgeted {
  const design = parseDesign(document)
  const trial = buildTrial(design, arrangement)
  const budget = computeBudget(design, trial.spec, noise)
  const line = (id: string): BudgetLine => {
    const found = budget.lines.find((entry) => entry.id === id)
    if (!found) throw new Error(`there is no line ${id}: ${budget.lines.map((l) => l.id).join(', ')}`)
    return found
  }
  return { design, trial, budget, line }
}

/** An amplifier without errors of its own. */
export const faultless = {
  vos: 0,
  vosDrift: 0,
  ib: 0,
  ios: 0,
  cmrr: 200,
  psrr: 200,
  a0: 1e9,
  rcm: 1e15,
  rin: 1e15,
}
/** Resistors without limits. */
export const exact = { tolerance: 0, drift: 0 }
