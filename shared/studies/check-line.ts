import type { CheckLine } from '#shared/design/plan.ts'
import type { Simulator } from './simulator.ts'

/** Largest difference accepted: of the operating point as a share of y's span, of response and noise of themselves. */
export const ALLOWED = { point: 1e-6, response: 1e-3, noise: 1e-3 } as const

/** One netlist and what its answer is held against. */
export interface CheckRun {
  /** "Operating point, low end" */
  what: string
  netlist: string
  /** Runs it and compares. */
  judge(simulator: Simulator): Promise<CheckLine[]>
}

/** Figures are printed to as many digits as a plan's; the difference is taken before. */
const round = (value: number, digits = 12): number => Number(value.toPrecision(digits))

/** A line with its verdict; figures that are not numbers never pass. */
export function compareFigures(
  what: string,
  unit: string,
  [ours, spice]: readonly [number, number],
  allowed: number,
): CheckLine {
  const difference = ours - spice
  return {
    what,
    unit,
    ours: round(ours),
    spice: round(spice),
    difference: round(difference, 3),
    allowed: round(allowed, 3),
    ok: Math.abs(difference) <= allowed,
  }
}
