import type { Candidate, Ends, HeadroomEntry, Level, Plan, RoomState } from '#shared/design/plan.ts'

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

/** Volts at the converter per unit of the measurand, nominal; null before a chain is realised. */
export function toSlope(candidate: Candidate, quantity: Quantity): number | null {
  if (!candidate.realised) return null
  const { low, high } = candidate.realised.converter
  const slope = (high - low) / (quantity.high - quantity.low)
  return Number.isFinite(slope) && slope !== 0 ? slope : null
}

/** Largest distance of either end from its target over every board, V. */
export function toWorstEndError(candidate: Candidate, plan: Plan): number | null {
  const worst = candidate.realised?.worst
  if (!worst) return null
  const target = candidate.target ?? plan.required.target
  return Math.max(
    Math.abs(worst.low.low - target.low),
    Math.abs(worst.low.high - target.low),
    Math.abs(worst.high.low - target.high),
    Math.abs(worst.high.high - target.high),
  )
}

const severity: Record<RoomState, number> = { over: 3, tight: 2, unknown: 1, clear: 0 }

/** The worst of several states. */
export const worstState = (states: readonly RoomState[]): RoomState =>
  states.reduce<RoomState>((worst, state) => (severity[state] > severity[worst] ? state : worst), 'clear')

export const stateWords: Record<RoomState, string> = {
  clear: 'clear',
  tight: 'tight',
  over: 'over',
  unknown: 'not known',
}
