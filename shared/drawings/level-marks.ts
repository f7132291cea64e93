import type { Level } from '#shared/design/plan.ts'
import { formatQuantity, formatRoom } from '#shared/units/format-quantity.ts'
import { clipText, isKnown, reachOf, rises, roomOf, type FigureOptions } from './level-figures.ts'
import { held, type BayScale } from './level-scale.ts'

/** The six places of a bay that the arrow keys choose, from top to bottom. */
export const markNames = ['upper limit', 'worst high', 'high', 'low', 'worst low', 'lower limit'] as const
export type MarkName = (typeof markNames)[number]

export interface Mark {
  name: MarkName
  volts: number
  y: number
  /** Read out when it is chosen: "After S2, high, 4.235 V, at 5.20 m, 13.8 % room". */
  words: string
}

/** Marks of a bay in the order of the keys; none for a node that is not known. */
export function levelMarks(level: Level, scale: BayScale, options: FigureOptions): Mark[] {
  if (!isKnown(level)) return []
  const nominal = reachOf(level, false)
  const figures: Record<MarkName, number> = {
    'upper limit': level.region.high,
    'worst high': level.worst.high,
    high: nominal.high,
    low: nominal.low,
    'worst low': level.worst.low,
    'lower limit': level.region.low,
  }
  return markNames
    .filter((name) => options.worst || !name.startsWith('worst'))
    .map((name) => ({
      name,
      volts: figures[name],
      y: held(scale, figures[name]).y,
      words: words(level, name, figures[name], options),
    }))
}

function words(level: Level, name: MarkName, volts: number, options: FigureOptions): string {
  const decimalSign = options.decimalSign ?? '.'
  const upper = name.includes('high') || name === 'upper limit'
  const side = upper ? 'upper' : 'lower'
  // What any board may reach is never printed nearer to the signal than it is.
  const rounding = !name.startsWith('worst') ? 'nearest' : upper ? 'up' : 'down'
  const parts = [
    level.title,
    name,
    formatQuantity(volts, level.unit, { zeros: 'keep', rounding, decimalSign }),
  ]
  if (name.endsWith('limit')) {
    const clip = clipText(level, side, options)
    const at = upper ? level.roomAt.high : level.roomAt.low
    if (at) parts.push(`set by ${at}`)
    parts.push(clip === null ? 'not met' : `met at ${clip}`)
    return parts.join(', ')
  }
  const end = upper === rises(level) ? options.quantity.high : options.quantity.low
  if (end !== undefined) parts.push(`at ${formatQuantity(end, options.quantity.unit, { decimalSign })}`)
  const room = formatRoom(roomOf(level, side, name.startsWith('worst')), decimalSign)
  parts.push(room.endsWith('over') ? room : `${room} room`)
  return parts.join(', ')
}
