/*
 * Charging a sampling capacitor through resistance (method: converter). V, s, Ω, F; the criterion is an explicit input,
 * since makers of converters use 1, ½ and ¼ LSB.
 */

/** Time constants until `ratio` = start over end of an exponential is reached: ln(ratio); 0 where it is already. */
export const timeConstants = (ratio: number): number => Math.max(0, Math.log(ratio))

/** Time constants for a step over the whole range to settle to `criterion` LSB of N bits: ln(2^N/criterion). */
export const timeConstantsForBits = (bits: number, criterion: number): number =>
  timeConstants(2 ** bits / criterion)

/** Share of a step that appears at the pin when the sampling capacitor closes on the reservoir: Csh/(Csh + Cext). */
export const chargeShare = (sampling: number, reservoir: number): number =>
  sampling === 0 ? 0 : sampling / (sampling + reservoir)

/** Time to charge the sampling capacitor without a reservoir, s: (Rs + Rsw)·Csh·n. */
export const acquisitionTime = (
  source: number,
  switched: number,
  sampling: number,
  constants: number,
): number => (source + switched) * sampling * constants

/** Largest source resistance without a buffer, Ω: t/(Csh·n) − Rsw; 0 where the switch alone is too much. */
export const largestSource = (time: number, switched: number, sampling: number, constants: number): number =>
  Math.max(0, time / (sampling * constants) - switched)

/** Two motions one after the other as one, s: √(τ1² + τ2²) (first estimate). */
export const combinedTime = (first: number, second: number): number => Math.hypot(first, second)

/** Average current that a capacitor brought from 0 to `voltage` at every sample draws, A: Csh·V·fs. */
export const averageCurrent = (sampling: number, voltage: number, rate: number): number =>
  sampling * voltage * rate
