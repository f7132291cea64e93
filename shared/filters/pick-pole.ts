import { partsCost } from './cost.ts'

export interface PolePick {
  R: number
  C: number
  /** |Δf/f| */
  error: number
  /** The smallest error possible over the lists. */
  optimum: number
}

/** The pole that a driver's resistor and the converter's reservoir make is best near this resistance, Ω. */
export const PREFERRED_DRIVE = 1000

/** Pairs of the same product in other decades differ by a rounding: their errors are one, fraction. */
const SAME = 1e-9

/**
 * R and C of a first-order low-pass with its corner 1/(2πRC) at `f0` (Hz): the cheapest pair no worse than max(smallest
 * error possible, a tenth of what tolerances do). Lists ascending, Ω and F, of one value at least.
 */
export function pickPole(
  f0: number,
  lists: { R: readonly number[]; C: readonly number[] },
  tolerance: { resistor: number; capacitor: number },
): PolePick {
  const errorOf = (R: number, C: number) => Math.abs(1 / (2 * Math.PI * R * C * f0) - 1)
  let optimum = Infinity
  for (const C of lists.C)
    for (const R of around(lists.R, 1 / (2 * Math.PI * f0 * C))) optimum = Math.min(optimum, errorOf(R, C))
  const allowed = (1 + SAME) * Math.max(optimum, (tolerance.resistor + tolerance.capacitor) / 10)
  const price = partsCost(PREFERRED_DRIVE)
  let taken: (PolePick & { cost: number }) | null = null
  for (const C of lists.C)
    for (const R of lists.R) {
      const error = errorOf(R, C)
      if (error > allowed) continue
      const cost = price([R], [C], { of: error, allowed })
      if (!taken || cost < taken.cost || (cost === taken.cost && R < taken.R))
        taken = { R, C, error, optimum, cost }
    }
  if (!taken) throw new RangeError('a pole is picked from one resistor and one capacitor at least')
  const { R, C, error } = taken
  return { R, C, error, optimum }
}

/** The neighbours of a value in an ascending list. */
function around(list: readonly number[], value: number): number[] {
  const at = list.findIndex((x) => x >= value)
  return at < 0 ? list.slice(-1) : list.slice(Math.max(0, at - 1), at + 1)
}
