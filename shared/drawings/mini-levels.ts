import type { Level } from '#shared/design/plan.ts'
import { isKnown, reachOf, sideState, type FigureOptions } from './level-figures.ts'
import { line, rect, type Shape } from './shapes.ts'

export interface MiniLevelsDrawing {
  width: number
  height: number
  shapes: Shape[]
}

const BAY = 18
const REGION = 22
const PITCH = 25
const TOP = 4
const LEFT = 2
/** Overshoot is held inside this many px past the limit. */
const BEYOND = 3

/** The levels of a chain as bays of 18 × 22 px, for a row of the channel list. */
export function layoutMiniLevels(
  levels: readonly Level[],
  options: Pick<FigureOptions, 'worst' | 'rule'> = { worst: true },
): MiniLevelsDrawing {
  const bottom = TOP + REGION
  const place = (level: Level, volts: number) => {
    const span = level.region.high - level.region.low
    const y = span > 0 ? bottom - (REGION * (volts - level.region.low)) / span : (TOP + bottom) / 2
    return Math.min(bottom + BEYOND, Math.max(TOP - BEYOND, y))
  }
  const shapes: Shape[] = []
  levels.forEach((level, i) => {
    const x = LEFT + i * PITCH
    const next = levels[i + 1]
    if (next && isKnown(level) && isKnown(next)) {
      for (const end of ['high', 'low'] as const)
        shapes.push(
          line(
            'mini-link',
            x + BAY,
            place(level, level.nominal[end]),
            x + PITCH,
            place(next, next.nominal[end]),
          ),
        )
    }
    if (!isKnown(level)) {
      shapes.push(line('unknown', x, TOP, x + BAY, TOP), line('unknown', x, bottom, x + BAY, bottom))
      return
    }
    const nominal = reachOf(level, false)
    const within = (y: number) => Math.min(bottom, Math.max(TOP, y))
    const high = place(level, nominal.high)
    const low = place(level, nominal.low)
    shapes.push(
      rect('mini-room', { x, y: TOP, width: BAY, height: REGION }),
      rect('mini-level', { x, y: within(high), width: BAY, height: Math.max(0, within(low) - within(high)) }),
    )
    if (high >= TOP) shapes.push(line('mini-end', x, high + 0.75, x + BAY, high + 0.75))
    if (low <= bottom) shapes.push(line('mini-end', x, low - 0.75, x + BAY, low - 0.75))
    const limit = (side: 'upper' | 'lower', y: number) => {
      const state = sideState(level, side, options)
      const outward = side === 'upper' ? -BEYOND : 0
      shapes.push(line('mini-limit', x - 1.5, y, x + BAY + 1.5, y))
      // Over: a solid block past the line. Tight: the block touches the line.
      if (state === 'over') shapes.push(rect('mini-over', { x, y: y + outward, width: BAY, height: BEYOND }))
      if (state === 'tight')
        shapes.push(
          rect('mini-tight', { x, y: side === 'upper' ? y + 0.75 : y - 2.25, width: BAY, height: 1.5 }),
        )
    }
    limit('upper', TOP)
    limit('lower', bottom)
  })
  return {
    width: LEFT + Math.max(0, levels.length * PITCH - (PITCH - BAY)) + 2,
    height: TOP + REGION + BEYOND,
    shapes,
  }
}

/** "4 nodes, least room 5.6 %" in words, for the drawing's name. */
export function describeMiniLevels(levels: readonly Level[]): string {
  const over = levels.filter((level) => level.state === 'over').map((level) => level.title)
  const tight = levels.filter((level) => level.state === 'tight').map((level) => level.title)
  const unknown = levels.filter((level) => !isKnown(level)).length
  const parts = [`${levels.length} ${levels.length === 1 ? 'node' : 'nodes'}`]
  if (over.length > 0) parts.push(`over at ${over.join(', ')}`)
  if (tight.length > 0) parts.push(`tight at ${tight.join(', ')}`)
  if (unknown > 0) parts.push(`${unknown} not known`)
  if (over.length + tight.length + unknown === 0) parts.push('all clear')
  return parts.join(', ')
}
