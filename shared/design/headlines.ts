import type { Ends, HeadroomEntry, Level } from './plan.ts'

/* What a plan says first: over which part of the span it is straight, and where the least room is. */

interface Quantity {
  low: number
  high: number
}

/** Measurand at the two ends of the straight part; null where no limit is met on that side. */
export type Span = Ends<number | null>

/**
 * Range of the measurand over which no node of the chain meets a limit, in the order of the measurand.
 * Each node's lower limit belongs to the low end where its level rises with the measurand, else to the high end.
 */
export function toLinearSpan(levels: readonly Level[], quantity: Quantity, worst: boolean): Span {
  const direction = quantity.high > quantity.low ? 1 : -1
  const span: Span = { low: null, high: null }
  for (const level of levels) {
    const clips = worst ? level.worstClipsAt : level.clipsAt
    const rises = level.nominal.high >= level.nominal.low
    const ends: Span = rises ? clips : { low: clips.high, high: clips.low }
    if (ends.low !== null && (span.low === null || (ends.low - span.low) * direction > 0)) span.low = ends.low
    if (ends.high !== null && (span.high === null || (span.high - ends.high) * direction > 0))
      span.high = ends.high
  }
  return span
}

export interface LeastRoom {
  fraction: number
  /** Side of the level's own region. */
  side: 'low' | 'high'
  level: Level
  /** The pin that has this room, and which of its limits is the near one. */
  pin: string
  pinSide: 'low' | 'high'
}

/** The smallest worst-case room of all nodes; null without levels. */
export function findLeastRoom(
  levels: readonly Level[],
  headroom: readonly HeadroomEntry[] = [],
): LeastRoom | null {
  let least: LeastRoom | null = null
  for (const level of levels) {
    if (level.state === 'unknown') continue
    for (const side of ['low', 'high'] as const) {
      const fraction = level.room[side]
      if (!Number.isFinite(fraction) || (least && fraction >= least.fraction)) continue
      const pin = level.roomAt[side]
      least = { fraction, side, level, pin, pinSide: limitOf(pin, side, level, headroom) }
    }
  }
  return least
}

/**
 * The sensor's region is that of later pins, seen from the sensor: behind an inverting stage its lower end is the
 * upper limit of a pin. Both are met at the same measurand.
 */
function limitOf(
  pin: string,
  side: 'low' | 'high',
  level: Level,
  headroom: readonly HeadroomEntry[],
): 'low' | 'high' {
  const clips = level.worstClipsAt[side]
  const own = level.node === 'sensor' ? headroom.find((entry) => entry.pin === pin)?.worstClipsAt : undefined
  const other = side === 'low' ? 'high' : 'low'
  return own && clips !== null && own[side] !== clips && own[other] === clips ? other : side
}
