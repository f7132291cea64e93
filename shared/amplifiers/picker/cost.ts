import { isInSeries } from '#shared/parts/series.ts'

/**
 * What makes a practical pick cheap. The weights are a matter of taste, so they stand in one place; they are published
 * with the product so that anybody can check a choice.
 */
export const COST = {
  /** Per decade of distance from the preferred impedance beyond `free` decades. */
  decade: 1,
  free: 0.35,
  /** Per value that is not in E24, the series that is on every shelf. */
  outsideE24: 0.25,
  /** Per further distinct value. */
  distinct: 0.3,
  /** Times error over threshold. */
  error: 0.2,
} as const

/** Costs are told in these steps; closer ones are ties. */
export const COST_STEP = 1e-6

/** Cost of one value by itself. A link (0) or a resistor left open costs nothing. */
export function valueCost(value: number, preferred: number): number {
  if (value === 0 || value === Infinity) return 0
  const far = Math.max(0, Math.abs(Math.log10(value / preferred)) - COST.free)
  return COST.decade * far + (isInSeries(value, 'E24') ? 0 : COST.outsideE24)
}

/** Cost of a pick from the sum of its values' costs, its distinct values and what its error costs. */
export function totalCost(sum: number, distinct: number, error: number): number {
  return Math.round((sum + COST.distinct * Math.max(0, distinct - 1) + error) * STEPS) / STEPS
}

const STEPS = 1 / COST_STEP
