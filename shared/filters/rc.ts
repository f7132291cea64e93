import { standardValues } from '#shared/parts/series.ts'
import type { Design } from '#shared/design/schema.ts'

/** Resistance that keeps the drop by a converter's input current small and the corner realisable, Ω. */
const PREFERRED_RESISTANCE = 1000
/** The reservoir stays this many times the sampling capacitor (common practice). */
const RESERVOIR_RATIO = 20

/** R9 and C9 that a person fixed, in `choose.values` or `choose.drive`; undefined where free. */
export function fixedDrive({ choose }: Design): { R: number | undefined; C: number | undefined } {
  return {
    R: (choose.values?.R9 ?? choose.drive?.resistance) || undefined,
    C: (choose.values?.C9 ?? choose.drive?.capacitance) || undefined,
  }
}

/** What R9 and C9 may be, ascending, Ω and F: values that a person fixed, else the series or the stock. */
export function driveLists(design: Design): { R: readonly number[]; C: readonly number[] } {
  const { resistors } = design.parts
  const fixed = fixedDrive(design)
  const all =
    resistors.stock.length > 0
      ? ascending(resistors.stock)
      : standardValues(resistors.series, 1, resistors.maximum)
  const enough = all.filter((r) => r >= clampResistance(design))
  const list = capacitorValues(design)
  const reservoirs = list.filter((c) => c >= RESERVOIR_RATIO * design.converter.samplingCapacitance)
  return {
    R: fixed.R !== undefined ? [fixed.R] : enough.length > 0 ? enough : all,
    C: fixed.C !== undefined ? [fixed.C] : reservoirs.length > 0 ? reservoirs : list,
  }
}

/**
 * R9 and C9 for a corner 1/(2πRC) (Hz): C is the standard value that brings R nearest to 1 kΩ and stays at least
 * 20 times the sampling capacitance; R is then the nearest standard value that spares the converter's clamp.
 */
export function sizeRc(design: Design, corner: number): { R: number; C: number; wantedR: number } {
  const lists = driveLists(design)
  const fixed = fixedDrive(design)
  const aimedR = fixed.R ?? Math.max(PREFERRED_RESISTANCE, clampResistance(design))
  const C = closest(1 / (2 * Math.PI * corner * aimedR), lists.C)
  const wantedR = 1 / (2 * Math.PI * corner * C)
  return { R: closest(wantedR, lists.R), C, wantedR }
}

/**
 * Smallest series resistance (Ω) with which the converter's clamp stays inside its current when the amplifier before it
 * saturates at a rail, with the converter's supply on and, where that is stated, off. 0 without absolute limits.
 */
export function clampResistance(design: Design): number {
  const { absolute, supply } = design.converter
  if (!absolute || !(absolute.clampCurrent > 0)) return 0
  const { positive, negative, tolerance, ripple } = design.rails
  const top = positive + Math.abs(positive) * tolerance + ripple
  const bottom = negative - Math.abs(negative) * tolerance - ripple
  const ceiling = absolute.high - (supply ?? 0)
  return Math.max(0, top - ceiling, absolute.low - bottom) / absolute.clampCurrent
}

/** The member of a list nearest by ratio. */
export function closest(value: number, list: readonly number[]): number {
  const distance = (x: number) => Math.abs(Math.log(x / value))
  return list.reduce((best, x) => (distance(x) < distance(best) ? x : best), list[0] ?? value)
}

export function capacitorValues(design: Design): readonly number[] {
  const { stock, series, minimum, maximum } = design.parts.capacitors
  return stock.length > 0 ? ascending(stock) : standardValues(series, minimum, maximum)
}

export function resistorValues(design: Design): readonly number[] {
  const { stock, series, minimum, maximum } = design.parts.resistors
  return stock.length > 0 ? ascending(stock) : standardValues(series, minimum, maximum)
}

const sorted = new WeakMap<readonly number[], readonly number[]>()

/** Distinct values in ascending order; one stock gives the same list again. */
function ascending(stock: readonly number[]): readonly number[] {
  const known = sorted.get(stock)
  if (known) return known
  const list = [...new Set(stock)].sort((a, b) => a - b)
  sorted.set(stock, list)
  return list
}
