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

/** Costs closer than this are ties. */
const STEP = 1e6

/** Cost of one value by itself. A link (0) or a resistor left open costs nothing. */
export function valueCost(value: number, preferred: number): number {
  if (value === 0 || value === Infinity) return 0
  const far = Math.max(0, Math.abs(Math.log10(value / preferred)) - COST.free)
  return COST.decade * far + (isInSeries(value, 'E24') ? 0 : COST.outsideE24)
}

/** Distinct resistor values; links and open places are no resistors. */
export function distinctValues(values: readonly number[]): number {
  let count = 0
  for (let i = 0; i < values.length; i++) {
    const value = values[i]
    if (value !== 0 && value !== Infinity && values.indexOf(value as number) === i) count++
  }
  return count
}

/** Cost of a pick from the sum of its values' costs, its distinct values and its error over the threshold. */
export function totalCost(sum: number, distinct: number, share: number): number {
  return roundCost(sum + COST.distinct * Math.max(0, distinct - 1) + COST.error * share)
}

export function roundCost(cost: number): number {
  return Math.round(cost * STEP) / STEP
}
