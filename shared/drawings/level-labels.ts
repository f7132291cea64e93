import type { Level } from '#shared/design/plan.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import {
  bothEnds,
  clipText,
  isKnown,
  reachOf,
  rises,
  type FigureOptions,
  type LimitSide,
} from './level-figures.ts'
import { held, type BayScale, type LevelMeasures } from './level-scale.ts'
import { text, type Box, type TextShape } from './shapes.ts'
import { textBox } from './text-width.ts'

export interface BayPlace {
  level: Level
  scale: BayScale
  /** Left side of the opening. */
  x: number
  first: boolean
  editing: boolean
  /** Texts at the right that the figures of this bay must leave free: the next bay's limits, the gain. */
  taken: readonly Box[]
}

/** Limits reach this far past the sides of a bay. */
export const OVERHANG = 5

/** Limit figures at the left of a bay; none where the node is not known. */
export function limitLabels(
  { level, scale, x }: Pick<BayPlace, 'level' | 'scale' | 'x'>,
  measures: LevelMeasures,
  options: FigureOptions,
): TextShape[] {
  if (!isKnown(level)) return []
  const figures = bothEnds(level.region.low, level.region.high, level.unit, options.decimalSign)
  const bare = (figure: string) => (measures.limitUnits ? figure : (figure.split(/\s/)[0] ?? figure))
  const label = (y: number, content: string) =>
    text('limit-value', x - OVERHANG - 4, y + 4, content, 'end', { on: 'sheet', scale: measures.text })
  const spare = Math.max(0, 12 * measures.text - (scale.lower - scale.upper)) / 2
  return [label(scale.upper - spare, bare(figures.high)), label(scale.lower + spare, bare(figures.low))]
}

/** Level figures at the right; the measurand's ends at the first bay; the clip point under a figure that is over. */
export function levelLabels(
  { level, scale, x, first, taken }: BayPlace,
  { bay, text: size }: LevelMeasures,
  options: FigureOptions,
  over: Record<LimitSide, boolean>,
): TextShape[] {
  const nominal = reachOf(level, false)
  const figures = bothEnds(nominal.low, nominal.high, level.unit, options.decimalSign)
  const { quantity } = options
  const second = (side: LimitSide): Pick<TextShape, 'text' | 'style'> | null => {
    if (over[side]) {
      const clip = clipText(level, side, options)
      return clip === null ? null : { text: `at ${clip}`, style: 'clip-value' }
    }
    const end = (side === 'upper') === rises(level) ? quantity.high : quantity.low
    if (!first || end === undefined) return null
    const decimalSign = options.decimalSign ?? '.'
    return { text: formatQuantity(end, quantity.unit, { decimalSign }), style: 'measurand-value' }
  }
  const step = 14 * size
  const at = x + bay + 8
  /** The figure on its line, the second line towards the middle of the bay. */
  const block = (side: LimitSide, y: number): TextShape[] => {
    const more = second(side)
    const style = over[side] ? 'over-value' : 'level-value'
    const content = side === 'upper' ? figures.high : figures.low
    const line = (name: TextShape['style'], dy: number, words: string) =>
      text(name, at, y + 4 + dy, words, 'start', { on: 'sheet', scale: size })
    return [
      line(style, 0, content),
      ...(more ? [line(more.style, side === 'upper' ? step : -step, more.text)] : []),
    ]
  }
  const wanted = { upper: held(scale, nominal.high).y, lower: held(scale, nominal.low).y }
  const lines = block('upper', 0).length + block('lower', 0).length
  const lack = (lines - 1) * step - size - (wanted.lower - wanted.upper)
  if (lack > 0) {
    wanted.upper -= lack / 2
    wanted.lower += lack / 2
  }
  const upper = placeBlock((dy) => block('upper', wanted.upper + dy), taken, -1)
  const lower = placeBlock((dy) => block('lower', wanted.lower + dy), [...taken, ...upper.map(textBox)], 1)
  return [...upper, ...lower]
}

/** Furthest that a figure leaves its line to make way for another, px. */
const GIVE = 26

/** The place nearest to the wanted one at which a block of text meets nothing, or least; `first` is tried first. */
function placeBlock(draw: (dy: number) => TextShape[], taken: readonly Box[], first: 1 | -1): TextShape[] {
  let best = { texts: draw(0), covered: Infinity }
  for (let distance = 0; distance <= GIVE; distance += 1) {
    for (const side of [first, -first]) {
      const texts = draw(distance * side)
      const boxes = texts.map(textBox)
      const covered = boxes.reduce((sum, b) => sum + taken.reduce((s, box) => s + commonArea(b, box), 0), 0)
      if (covered === 0) return texts
      if (covered < best.covered) best = { texts, covered }
    }
  }
  return best.texts
}

function commonArea(a: Box, b: Box): number {
  const across = Math.min(a.x + a.width, b.x + b.width) - Math.max(a.x, b.x)
  const down = Math.min(a.y + a.height, b.y + b.height) - Math.max(a.y, b.y)
  return Math.max(0, across) * Math.max(0, down)
}
