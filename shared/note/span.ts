import type { Candidate, Plan, RoomState } from '#shared/design/plan.ts'

export { findLeastRoom, toLinearSpan, type LeastRoom, type Span } from '#shared/design/headlines.ts'

interface Quantity {
  low: number
  high: number
}

/** Volts at the converter per unit of the measurand, nominal; null before a chain is realised. */
export function toSlope(candidate: Candidate, quantity: Quantity): number | null {
  if (!candidate.realised) return null
  const { low, high } = candidate.realised.converter
  const slope = (high - low) / (quantity.high - quantity.low)
  return Number.isFinite(slope) && slope !== 0 ? slope : null
}

/** Largest distance of either end from its target over every board, V. */
export function toWorstEndError(candidate: Candidate, plan: Plan): number | null {
  const worst = candidate.realised?.worst
  if (!worst) return null
  const target = candidate.target ?? plan.required.target
  return Math.max(
    Math.abs(worst.low.low - target.low),
    Math.abs(worst.low.high - target.low),
    Math.abs(worst.high.low - target.high),
    Math.abs(worst.high.high - target.high),
  )
}

const severity: Record<RoomState, number> = { over: 3, tight: 2, unknown: 1, clear: 0 }

/** The worst of several states. */
export const worstState = (states: readonly RoomState[]): RoomState =>
  states.reduce<RoomState>((worst, state) => (severity[state] > severity[worst] ? state : worst), 'clear')

export const stateWords: Record<RoomState, string> = {
  clear: 'clear',
  tight: 'tight',
  over: 'over',
  unknown: 'not known',
}
