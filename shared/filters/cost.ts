import { COST, COST_STEP, valueCost } from '#shared/amplifiers/picker/cost.ts'
import { isInSeries } from '#shared/parts/series.ts'

/** What a capacitor costs beside its error; resistors, distinct values and error cost what they do in a gain stage. */
export const CAPACITOR_COST = {
  /** F */
  preferred: 2.2e-9,
  /** Per decade of distance from it beyond `free` decades. */
  decade: 1,
  free: 1,
  /** Per value outside E6. */
  outsideE6: 0.25,
} as const

function capacitorCost(value: number): number {
  const far = Math.max(0, Math.abs(Math.log10(value / CAPACITOR_COST.preferred)) - CAPACITOR_COST.free)
  return CAPACITOR_COST.decade * far + (isInSeries(value, 'E6') ? 0 : CAPACITOR_COST.outsideE6)
}

/** Cost of a set of values (Ω, F) with an error out of the largest one allowed, in whole steps so that ties are ties. */
export type PartsCost = (
  resistors: readonly number[],
  capacitors: readonly number[],
  error: { of: number; allowed: number },
) => number

/** The cost of sets beside a preferred resistance (Ω); what single values cost is kept between calls. */
export function partsCost(preferred: number): PartsCost {
  const resistor = remember((value) => valueCost(value, preferred))
  const capacitor = remember(capacitorCost)
  return (resistors, capacitors, error) => {
    let sum = 0
    for (const value of resistors) sum += resistor(value)
    for (const value of capacitors) sum += capacitor(value)
    const again = furtherValues(resistors) + furtherValues(capacitors)
    const share = error.allowed > 0 ? (COST.error * error.of) / error.allowed : 0
    return Math.round((sum + COST.distinct * again + share) / COST_STEP) * COST_STEP
  }
}

/** Distinct values beyond the first. */
const furtherValues = (values: readonly number[]): number =>
  values.reduce((count, value, i) => count + (i > 0 && values.indexOf(value) === i ? 1 : 0), 0)

function remember(cost: (value: number) => number): (value: number) => number {
  const known = new Map<number, number>()
  return (value) => {
    let found = known.get(value)
    if (found === undefined) known.set(value, (found = cost(value)))
    return found
  }
}
