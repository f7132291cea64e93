import type { Ends, Level, RoomState } from '#shared/design/plan.ts'
import { formatQuantity, formatRange, formatRoom, type DecimalSign } from '#shared/units/format-quantity.ts'

/**
 * The figures of a node as they are printed: levels with four significant digits (those of the worst
 * case rounded outward), room never better than it is, clip
 * points rounded inward. Worst case over every board unless `worst` is false.
 */

/** What is measured; `low` and `high` are the ends of the required span in its own unit. */
export interface Measurand {
  name: string
  unit: string
  low?: number
  high?: number
}

export interface FigureOptions {
  worst: boolean
  quantity: Measurand
  /** Room that is to be kept, as a fraction of the linear region; less is tight. */
  rule?: number
  decimalSign?: DecimalSign
}

export type LimitSide = 'upper' | 'lower'

const NEVER = 'not met'
const signOf = (options: FigureOptions) => ({ decimalSign: options.decimalSign ?? '.' })

/** False where the node has no region or no levels yet. */
export function isKnown(level: Level): boolean {
  const figures = [level.nominal.low, level.nominal.high, level.region.low, level.region.high]
  return level.state !== 'unknown' && figures.every(Number.isFinite)
}

/** Both ends of a range with the same prefix and places, each with its unit. */
export function bothEnds(
  low: number,
  high: number,
  unit: string,
  decimalSign: DecimalSign = '.',
): Ends<string> {
  const [first = '', last = ''] = formatRange(low, high, unit, { zeros: 'keep', decimalSign }).split(' to ')
  return { low: first, high: last }
}

/** Lowest and highest voltage of the node: over every board, or of the nominal one. */
export function reachOf(level: Level, worst: boolean): Ends {
  return worst
    ? level.worst
    : {
        low: Math.min(level.nominal.low, level.nominal.high),
        high: Math.max(level.nominal.low, level.nominal.high),
      }
}

/** Room at a limit as a fraction of the region; negative: over. */
export function roomOf(level: Level, side: LimitSide, worst: boolean): number {
  const room = worst ? level.room : level.nominalRoom
  return side === 'upper' ? room.high : room.low
}

/** State of one side. A node's own state is the worse of the two, judged by the plan. */
export function sideState(
  level: Level,
  side: LimitSide,
  options: Pick<FigureOptions, 'worst' | 'rule'>,
): RoomState {
  if (!isKnown(level)) return 'unknown'
  const room = roomOf(level, side, options.worst)
  if (room < 0) return 'over'
  if (level.state === 'clear') return 'clear'
  return room < (options.rule ?? 0.03) ? 'tight' : 'clear'
}

/** Whether the voltage of the node rises with the measurand. */
export const rises = (level: Level): boolean => level.nominal.high >= level.nominal.low

/** Measurand at which a limit is met, or null. */
export function clipOf(level: Level, side: LimitSide, worst: boolean): number | null {
  const clips = worst ? level.worstClipsAt : level.clipsAt
  return side === 'upper' ? clips.high : clips.low
}

/** "5.016 m", rounded towards the span so that it is never printed better than it is. */
export function clipText(level: Level, side: LimitSide, options: FigureOptions): string | null {
  const clip = clipOf(level, side, options.worst)
  if (clip === null) return null
  const increasing = (options.quantity.high ?? 1) >= (options.quantity.low ?? 0)
  const atHighEnd = (side === 'upper') === rises(level)
  return formatQuantity(clip, options.quantity.unit, {
    rounding: atHighEnd === increasing ? 'down' : 'up',
    zeros: 'keep',
    ...signOf(options),
  })
}

/** Clip points of both limits in the order of the measurand: "−0.260 to 6.070 m" as words. */
export function clipsText(level: Level, options: FigureOptions): string {
  const { unit } = options.quantity
  const lower = clipOf(level, 'lower', options.worst)
  const upper = clipOf(level, 'upper', options.worst)
  if (lower === null && upper === null) return NEVER
  if (lower === null) return `upper at ${clipText(level, 'upper', options) ?? NEVER}, lower ${NEVER}`
  if (upper === null) return `lower at ${clipText(level, 'lower', options) ?? NEVER}, upper ${NEVER}`
  const text = formatRange(Math.min(lower, upper), Math.max(lower, upper), unit, {
    rounding: 'inward',
    zeros: 'keep',
    unitOnce: true,
    ...signOf(options),
  })
  return text.replace(' to ', ' and ')
}

export interface LevelCell {
  text: string
  /** The nominal figure where the headline is worst case. */
  small?: string
  state?: RoomState
}

export interface LevelTable {
  nodes: { node: string; title: string }[]
  rows: { name: string; cells: LevelCell[] }[]
}

/** The table that is the text alternative of the diagram: five lines for every node. */
export function levelTable(levels: readonly Level[], options: FigureOptions): LevelTable {
  const range = (ends: Ends, unit: string, rounding: 'nearest' | 'outward' = 'nearest') =>
    formatRange(ends.low, ends.high, unit, { zeros: 'keep', unitOnce: true, rounding, ...signOf(options) })
  const row = (name: string, cell: (level: Level) => LevelCell) => ({
    name,
    cells: levels.map((level) =>
      isKnown(level) ? cell(level) : { text: 'not known', state: 'unknown' as const },
    ),
  })
  const room =
    (side: LimitSide) =>
    (level: Level): LevelCell => ({
      text: formatRoom(roomOf(level, side, options.worst), options.decimalSign),
      state: sideState(level, side, options),
      ...(options.worst
        ? { small: `nominal ${formatRoom(roomOf(level, side, false), options.decimalSign)}` }
        : {}),
    })
  return {
    nodes: levels.map(({ node, title }) => ({ node, title })),
    rows: [
      row('Signal', (level) => ({
        text: range(level.nominal, level.unit),
        ...(options.worst ? { small: `any board ${range(level.worst, level.unit, 'outward')}` } : {}),
      })),
      row('Linear region', (level) => ({ text: range(level.region, level.unit) })),
      row('Room above', room('upper')),
      row('Room below', room('lower')),
      row('Limits met at', (level) => {
        const over = roomOf(level, 'lower', options.worst) < 0 || roomOf(level, 'upper', options.worst) < 0
        return {
          text: clipsText(level, options),
          ...(over ? { state: 'over' as const } : {}),
          ...(options.worst ? { small: `nominal ${clipsText(level, { ...options, worst: false })}` } : {}),
        }
      }),
    ],
  }
}
