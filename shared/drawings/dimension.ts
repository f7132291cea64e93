import { line, polyline, text, type Point, type Shape } from './shapes.ts'
import type { LineStyle, TextStyle } from './styles.ts'

/**
 * Dimension lines after ISO 129-1: a narrow line with filled heads, text before or above the line. Where the gap is
 * too small the heads turn and stand outside.
 */

export type DimensionTone = 'clear' | 'tight' | 'plain'

const HEAD = 5.2
const HALF = 1.56
/** Length of the tails that stand outside a small gap, px. */
const TAIL = 10
const CLEARANCE = 0.5

interface Axis {
  at: (along: number) => Point
  head: (tip: number, towards: 1 | -1) => Point[]
}

const vertical = (x: number): Axis => ({
  at: (y) => [x, y],
  head: (tip, towards) => [
    [x, tip],
    [x - HALF, tip - towards * HEAD],
    [x + HALF, tip - towards * HEAD],
  ],
})

const horizontal = (y: number): Axis => ({
  at: (x) => [x, y],
  head: (tip, towards) => [
    [tip, y],
    [tip - towards * HEAD, y - HALF],
    [tip - towards * HEAD, y + HALF],
  ],
})

/** Line and heads between two places along one axis; `turned` puts the heads outside. */
function dimension(axis: Axis, from: number, to: number, tone: DimensionTone, turned: boolean): Shape[] {
  const [a, b] = from < to ? [from, to] : [to, from]
  const style: LineStyle = `dim-${tone}`
  const head = (tip: number, towards: 1 | -1): Shape =>
    polyline(`head-${tone}`, axis.head(tip, towards), true)
  const stroke = (start: number, end: number): Shape => {
    const [x1, y1] = axis.at(start)
    const [x2, y2] = axis.at(end)
    return line(style, x1, y1, x2, y2)
  }
  if (turned)
    return [
      stroke(a - CLEARANCE - TAIL, a - CLEARANCE),
      stroke(b + CLEARANCE, b + CLEARANCE + TAIL),
      head(a - CLEARANCE, 1),
      head(b + CLEARANCE, -1),
    ]
  return [stroke(a + 1, b - 1), head(a + CLEARANCE, -1), head(b - CLEARANCE, 1)]
}

export const verticalDimension = (
  x: number,
  y1: number,
  y2: number,
  tone: DimensionTone,
  turned: boolean,
): Shape[] => dimension(vertical(x), y1, y2, tone, turned)

/** Horizontal dimension with its text above the line; turns its heads outside under 24 px. */
export function horizontalDimension(
  y: number,
  x1: number,
  x2: number,
  content: string,
  tone: DimensionTone = 'plain',
  style: TextStyle = 'dim-text',
): Shape[] {
  const turned = Math.abs(x2 - x1) < 24
  return [
    ...dimension(horizontal(y), x1, x2, tone, turned),
    text(style, (x1 + x2) / 2, y - 4, content, 'middle', { on: 'sheet' }),
  ]
}
