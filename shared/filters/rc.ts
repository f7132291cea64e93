import { standardValues } from '#shared/parts/series.ts'
import type { Design } from '#shared/design/schema.ts'

/** A first-order low-pass before the converter: R in series, C to ground. */
export interface RcFilter {
  kind: 'rc' | 'none'
  /** Ω and F; 0 where there is none. */
  resistance: number
  capacitance: number
  /** −3 dB corner, Hz; 0 where there is none. */
  corner: number
  /** What was asked for before the series, Hz. */
  wantedCorner: number
  wantedResistance: number
}

const NONE: RcFilter = {
  kind: 'none',
  resistance: 0,
  capacitance: 0,
  corner: 0,
  wantedCorner: 0,
  wantedResistance: 0,
}

/** Resistance that keeps the drop by a converter's input current small and the corner realisable. */
const PREFERRED_RESISTANCE = 1000
/** The reservoir stays this many times the sampling capacitor (common practice). */
const RESERVOIR_RATIO = 20

/**
 * Corner 1/(2πRC). Absent a stated corner it is ten times the signal bandwidth (droop 0.5 % of amplitude there), else
 * half the sample rate; with neither there is no filter. C is the standard value that brings R nearest to 1 kΩ and
 * stays at least 20 times the sampling capacitance; R is then the nearest standard value. Values that a person fixed
 * (R9, C9 in `choose.values`, or `choose.drive`) are obeyed.
 */
export function sizeFilter(design: Design): RcFilter {
  const { choose, sensor, converter, parts } = design
  const chosen = choose.filter
  if (chosen?.kind === 'none') return NONE
  const leastR = clampResistance(design)
  const fixedR = choose.values?.R9 ?? choose.drive?.resistance
  const fixedC = choose.values?.C9 ?? choose.drive?.capacitance
  const wantedCorner =
    chosen?.corner ??
    (fixedR && fixedC
      ? 1 / (2 * Math.PI * fixedR * fixedC)
      : sensor.bandwidth !== undefined
        ? 10 * sensor.bandwidth
        : converter.sampleRate !== undefined
          ? converter.sampleRate / 2
          : 0)
  if (wantedCorner === 0 && fixedR === undefined && fixedC === undefined && chosen === undefined) return NONE
  const corner = wantedCorner || 10_000
  const list = capacitorValues(design)
  const least = RESERVOIR_RATIO * converter.samplingCapacitance
  const wantedC = 1 / (2 * Math.PI * corner * (fixedR || Math.max(PREFERRED_RESISTANCE, leastR)))
  const allowed = list.filter((c) => c >= least)
  const capacitance = fixedC || closest(wantedC, allowed.length > 0 ? allowed : list)
  const wantedResistance = 1 / (2 * Math.PI * corner * capacitance)
  const resistors =
    parts.resistors.stock.length > 0
      ? parts.resistors.stock
      : standardValues(parts.resistors.series, 1, parts.resistors.maximum)
  const enough = resistors.filter((r) => r >= leastR)
  const resistance = fixedR || closest(wantedResistance, enough.length > 0 ? enough : resistors)
  return {
    kind: 'rc',
    resistance,
    capacitance,
    corner: 1 / (2 * Math.PI * resistance * capacitance),
    wantedCorner: corner,
    wantedResistance,
  }
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
function closest(value: number, list: readonly number[]): number {
  const distance = (x: number) => Math.abs(Math.log(x / value))
  return list.reduce((best, x) => (distance(x) < distance(best) ? x : best), list[0] ?? value)
}

function capacitorValues(design: Design): readonly number[] {
  const { stock, series, minimum, maximum } = design.parts.capacitors
  return stock.length > 0 ? [...stock].sort((a, b) => a - b) : standardValues(series, minimum, maximum)
}

/**
 * Time for a full-span step to settle to `criterion` LSB through one pole: τ·ln(2^N/criterion)
 * (method: converter settling by the number of time constants; s).
 */
export function settlingTime(filter: RcFilter, bits: number, criterion: number): number {
  return filter.resistance * filter.capacitance * Math.log(2 ** bits / criterion)
}

/** The filter with a source resistance (Ω) in series: what the signal really meets. */
export function loadedBy(filter: RcFilter, sourceResistance: number): RcFilter {
  if (filter.kind === 'none') return filter
  const resistance = filter.resistance + sourceResistance
  return { ...filter, resistance, corner: 1 / (2 * Math.PI * resistance * filter.capacitance) }
}

/** Attenuation of one pole at a frequency, dB (positive: weaker). */
export function attenuationDb(filter: RcFilter, frequency: number): number {
  if (filter.kind === 'none') return 0
  return 10 * Math.log10(1 + (frequency / filter.corner) ** 2)
}
