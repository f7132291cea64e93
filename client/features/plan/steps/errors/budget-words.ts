import type { Budget, BudgetLine, ErrorState, RoomState } from '#shared/design/plan.ts'
import { enumerate } from '#shared/note/figures.ts'
import { limitWords, stateWords, type Scale } from '#shared/note/quality-tables.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'

/** The state that the budget is judged in. */
export const judgedState = (budget: Budget): ErrorState => budget.target?.state ?? 'calibrated'

/** A total of the error: the same three digits wherever it stands, never smaller than it is. */
export const totalText = (value: number, unit: string): string =>
  formatQuantity(Math.abs(value), unit, { digits: 3, rounding: 'outward', zeros: 'keep' })

/** The same as a share of the span. */
export const totalShare = (fraction: number): string =>
  formatQuantity(fraction, '', { digits: 3, rounding: 'outward', zeros: 'keep', display: 'percent' })

/** Where the focus goes once an improvement is taken. */
export const BUDGET_VERDICT = 'budget-verdict'

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
  const measurand = (volts: number) => totalText(volts / perQuantity, unit)
  const coverage = formatQuantity(budget.coverage, '', { digits: 3, display: 'percent' })
  const text = `${stateWords[state]} the expanded uncertainty is ±${measurand(total.expanded)}, ${coverage} coverage, k = ${formatQuantity(total.k, '', { digits: 3 })}.`
  if (!budget.target) return { state: 'unknown', head: 'No target is stated: nothing to meet.', text }
  const { limit, met } = budget.target
  const target = formatQuantity(limit / perQuantity, unit, { digits: 3 })
  const between = formatQuantity(Math.abs(limit - total.expanded) / perQuantity, unit, {
    digits: 3,
    rounding: met ? 'down' : 'up',
    zeros: 'keep',
  })
  return {
    state: met ? 'clear' : 'over',
    head: met
      ? `${stateWords[state]} it meets the target of ±${target}, with ${between} left.`
      : `${stateWords[state]} it misses the target of ±${target} by ${between}.`,
    text,
  }
}

/** Lines whose share is this near to the largest are named with it. */
const AS_LARGE = 0.99

/** What dominates: the largest line and its share, or all that are as large. */
export function dominantOf(budget: Budget): string | null {
  const sorted = [...budget.lines].sort((a, b) => b.share - a.share)
  const [first] = sorted
  if (!first || first.share <= 0) return null
  const share = formatQuantity(first.share, '', { digits: 2, display: 'percent' })
  const alike = sorted.filter((line) => line.share >= first.share * AS_LARGE)
  if (alike.length === 1) return `${first.label} makes ${share} of the variance.`
  return `${together(alike.map(({ label }) => label))} make ${share} of the variance each.`
}

/** "Rf and Rg over temperature" where all say the same of their part. */
function together(labels: readonly string[]): string {
  const split = labels.map((label) => /^(\S+) (.+)$/.exec(label))
  const rest = split[0]?.[2]
  if (rest === undefined || split.some((parts) => parts?.[2] !== rest)) return enumerate(labels)
  return `${enumerate(split.map((parts) => parts?.[1] ?? ''))} ${rest}`
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
