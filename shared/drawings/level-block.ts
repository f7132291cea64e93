import type { Level } from '#shared/design/plan.ts'
import { isKnown, reachOf, sideState, type FigureOptions } from './level-figures.ts'
import { line, rect, text, type Shape } from './shapes.ts'

export interface LevelBlock {
  width: number
  height: number
  shapes: Shape[]
}

const POCHE = 18
const TOP = 5
const HEIGHT = 26
const HOLD = 3

/** One node as a horizontal bay, for narrow pages: the lower limit at the left. Lengths in px. */
export function layoutLevelBlock(level: Level, options: FigureOptions, width = 288): LevelBlock {
  const size = { width, height: HEIGHT + 2 * TOP }
  const outer = { x: 0, y: TOP, width, height: HEIGHT }
  const span = level.region.high - level.region.low
  if (!isKnown(level) || !(span > 0)) {
    return {
      ...size,
      shapes: [
        rect('unknown', { ...outer, x: 0.5, width: width - 1 }),
        text('unknown-text', width / 2, TOP + HEIGHT / 2 + 4, 'not known', 'middle'),
      ],
    }
  }
  const left = POCHE
  const right = width - POCHE
  const x = (volts: number) =>
    Math.min(width - HOLD, Math.max(HOLD, left + ((right - left) * (volts - level.region.low)) / span))
  const within = (at: number) => Math.min(right, Math.max(left, at))
  const opening = { ...outer, x: left, width: right - left }
  const nominal = reachOf(level, false)
  const across = (style: 'level' | 'level-over' | 'worst' | 'worst-over' | 'limit', at: number, past = 0) =>
    line(style, at, TOP - past, at, TOP + HEIGHT + past)
  const low = x(nominal.low)
  const high = x(nominal.high)
  const shapes: Shape[] = [
    rect('poche', outer),
    rect('opening', opening),
    rect('room', opening),
    rect('wash', { ...outer, x: within(low), width: Math.max(0, within(high) - within(low)) }),
  ]
  if (sideState(level, 'upper', options) === 'over') {
    const end = x(nominal.high > level.region.high ? nominal.high : level.worst.high)
    if (end > right) shapes.push(rect('over', { ...outer, x: right, width: end - right }))
  }
  if (sideState(level, 'lower', options) === 'over') {
    const end = x(nominal.low < level.region.low ? nominal.low : level.worst.low)
    if (end < left) shapes.push(rect('over', { ...outer, x: end, width: left - end }))
  }
  if (options.worst) {
    shapes.push(
      across(level.worst.low < level.region.low ? 'worst-over' : 'worst', x(level.worst.low)),
      across(level.worst.high > level.region.high ? 'worst-over' : 'worst', x(level.worst.high)),
    )
  }
  shapes.push(
    across(nominal.low < level.region.low ? 'level-over' : 'level', low),
    across(nominal.high > level.region.high ? 'level-over' : 'level', high),
    across('limit', left, 4),
    across('limit', right, 4),
    line('side', 0, TOP + 0.5, width, TOP + 0.5),
    line('side', 0, TOP + HEIGHT - 0.5, width, TOP + HEIGHT - 0.5),
  )
  return { ...size, shapes }
}
