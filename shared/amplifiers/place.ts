import type { Ends } from '#shared/design/plan.ts'
import { crosswise, type Need } from './define.ts'

/** The target in the order that gives a gain of the wanted sign. */
export function oriented(need: Need, sign: 1 | -1): Ends {
  const rising = need.signal.high > need.signal.low ? 1 : -1
  return rising === sign ? need.target : crosswise(need.target)
}

/**
 * Largest |gain| of the wanted sign with which the whole signal lands inside the target when the output offset is
 * given. Returns the ends [V], whether they fall short of the target, or null where no gain in the range does.
 * A linear feasibility problem in one unknown: each end of the signal bounds the gain from both sides.
 */
export function placeWithOffset(
  need: Need,
  sign: 1 | -1,
  offset: number,
  range: { minimum: number; maximum: number },
): { gain: number; target: Ends; short: boolean } | null {
  const low = Math.min(need.target.low, need.target.high)
  const high = Math.max(need.target.low, need.target.high)
  let least = sign > 0 ? range.minimum : -range.maximum
  let most = sign > 0 ? range.maximum : -range.minimum
  // Rounding in decimal inputs must not turn an exact landing into a miss.
  const slack = 1e-12 * Math.max(Math.abs(low), Math.abs(high), Math.abs(offset))
  for (const s of [need.signal.low, need.signal.high]) {
    if (s === 0) {
      if (offset < low - slack || offset > high + slack) return null
      continue
    }
    const a = (low - offset) / s
    const b = (high - offset) / s
    least = Math.max(least, Math.min(a, b))
    most = Math.min(most, Math.max(a, b))
  }
  if (least > most + 1e-12 * Math.abs(most)) return null
  const gain = sign > 0 ? most : least
  if (!Number.isFinite(gain) || gain === 0) return null
  const target = { low: gain * need.signal.low + offset, high: gain * need.signal.high + offset }
  const wanted = oriented(need, sign)
  const span = high - low
  const short =
    Math.abs(target.low - wanted.low) > 1e-9 * span || Math.abs(target.high - wanted.high) > 1e-9 * span
  return { gain, target, short }
}
