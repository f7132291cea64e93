import type { Budget, BudgetLine, ErrorState, RoomState } from '#shared/design/plan.ts'
import { upward } from '#shared/note/figures.ts'
import { limitWords, stateWords, type Scale } from '#shared/note/quality-tables.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'

/** The state that the budget is judged in. */
export const judgedState = (budget: Budget): ErrorState => budget.target?.state ?? 'calibrated'

export interface Verdict {
  state: RoomState
  /** Whether it meets the target, and by how much. */
  head: string
  /** What it is. */
  text: string
}

/** Does it meet the target: the first thing that anyone wants to know. */
export function verdictOf(budget: Budget, { perQuantity, unit }: Scale): Verdict {
  const state = judgedState(budget)
  const total = budget.totals[state]
  const measurand = (volts: number) => upward(volts / perQuantity, unit)
  const coverage = formatQuantity(budget.coverage, '', { digits: 3, display: 'percent' })
  const text = `${stateWords[state]} the expanded uncertainty is ±${measurand(total.expanded)}, ${coverage} coverage, k = ${formatQuantity(total.k, '', { digits: 3 })}.`
  if (!budget.target) return { state: 'unknown', head: 'No target is stated: nothing to meet.', text }
  const { limit, met } = budget.target
  const target = formatQuantity(limit / perQuantity, unit, { digits: 3 })
  const between = formatQuantity(Math.abs(limit - total.expanded) / perQuantity, unit, {
    digits: 2,
    rounding: met ? 'down' : 'up',
  })
  return {
    state: met ? 'clear' : 'over',
    head: met
      ? `Meets the target of ±${target}, with ${between} left.`
      : `Misses the target of ±${target} by ${between}.`,
    text,
  }
}

/** What dominates: the largest line and its share. */
export function dominantOf(budget: Budget): string | null {
  const first = [...budget.lines].sort((a, b) => b.share - a.share)[0]
  if (!first || first.share <= 0) return null
  const share = formatQuantity(first.share, '', { digits: 2, display: 'percent' })
  return `${first.label} makes ${share} of the variance.`
}

const removes: Record<BudgetLine['calibrates'], string | null> = {
  zero: 'zero adjustment takes it away',
  span: 'span adjustment takes it away',
  none: null,
}

/** Limit, distribution and what adjustment does to a line, at the temperature (°C) of the adjustment. */
export function lineDetails(line: BudgetLine, temperature: number): string {
  const removed = removes[line.calibrates]
  const words =
    removed === null
      ? 'no adjustment takes it away'
      : `${removed} at ${formatQuantity(temperature, '°C', { digits: 3 })}`
  return `±${limitWords(line.limit, line.unit)}, ${line.distribution}; ${words}`
}
