import type { Spread } from '#shared/studies/types.ts'
import { formatNumber, formatQuantity, type DecimalSign } from '#shared/units/format-quantity.ts'
import { ticks, tickWords } from './axis.ts'
import { horizontalDimension } from './dimension.ts'
import { line, polyline, rect, roundTo, text, type Box, type Point, type Shape } from './shapes.ts'

export interface SpreadOptions {
  unit: string
  /** Limit ± of the error, in the measurand's unit; null without a target. */
  target: number | null
  decimalSign?: DecimalSign
  width?: number
  height?: number
}

export interface SpreadDrawing {
  width: number
  height: number
  area: Box
  shapes: Shape[]
}

const MARGIN = { left: 58, right: 24, top: 22, bottom: 78 }
/** Free at both sides of what is shown, as a share of it. */
const SIDE = 0.03
/** Room for the word at a target line, px. */
const TARGET_WORD = 44

/**
 * Histogram of the error over the boards: outlined steps, the part outside the target filled, worst-case ends as limit
 * lines, 2.5 % to 97.5 % as a dimension, single builds as a rug below. Lengths in px.
 */
export function layoutSpreadPlot(spread: Spread, options: SpreadOptions): SpreadDrawing {
  const { unit, target, decimalSign = '.', width = 560, height = 240 } = options
  const area: Box = {
    x: MARGIN.left,
    y: MARGIN.top,
    width: width - MARGIN.left - MARGIN.right,
    height: height - MARGIN.top - MARGIN.bottom,
  }
  const { edges, counts } = spread.histogram
  const ends = [...edges, spread.worst.low, spread.worst.high, ...(target === null ? [] : [-target, target])]
  const [least, most] = [Math.min(...ends), Math.max(...ends)]
  const side = (most - least || 1) * SIDE
  const domain = { low: least - side, high: most + side }
  const highest = Math.max(...counts, 1)
  const bottom = area.y + area.height
  const x = (value: number) =>
    roundTo(area.x + (area.width * (value - domain.low)) / (domain.high - domain.low))
  const y = (count: number) => roundTo(bottom - (area.height * count) / highest)
  const steps: Point[] = counts.flatMap((count, i): Point[] => [
    [x(edges[i] ?? 0), y(count)],
    [x(edges[i + 1] ?? 0), y(count)],
  ])
  const [first, last] = [edges[0], edges.at(-1)]
  const outline: Point[] =
    first === undefined || last === undefined ? [] : [[x(first), bottom], ...steps, [x(last), bottom]]
  const xs = ticks(domain.low, domain.high, Math.max(2, Math.floor(area.width / 66)))
  const ys = ticks(0, highest, 4)
  const words = tickWords(xs, unit, decimalSign)
  const shapes: Shape[] = [
    ...(target === null ? [] : outside(spread, target, x, y, bottom)),
    polyline('level', outline),
    ...limits(spread, x, area),
    ...(target === null ? [] : targetLines(target, x, area)),
    line('axis', x(xs[0] ?? domain.low), bottom, x(xs.at(-1) ?? domain.high), bottom),
    ...xs.flatMap((value, i) => [
      line('axis', x(value), bottom, x(value), bottom + 5),
      text('axis-text', x(value), bottom + 17, words[i] ?? '', 'middle'),
    ]),
    line('axis', area.x, bottom, area.x, y(ys.at(-1) ?? highest)),
    ...ys.flatMap((value) => [
      line('axis', area.x - 5, y(value), area.x, y(value)),
      text('axis-text', area.x - 8, y(value) + 4, formatNumber(value, { digits: 7, decimalSign }), 'end'),
    ]),
    text('axis-name', 0, area.y - 8, 'Boards', 'start'),
    ...rug(spread, x, bottom + 24),
    ...middle(spread, x, bottom + 60, (value) => formatQuantity(value, unit, { digits: 3, decimalSign })),
  ]
  return { width, height, area, shapes }
}

/** The part of each bin beyond the target, cut at the target where it lies inside the bin. */
function outside(
  { histogram: { edges, counts } }: Spread,
  target: number,
  x: (value: number) => number,
  y: (count: number) => number,
  bottom: number,
): Shape[] {
  return counts.flatMap((count, i): Shape[] => {
    const [from, to] = [edges[i] ?? 0, edges[i + 1] ?? 0]
    if (count === 0) return []
    const parts: [number, number][] = [
      [from, Math.min(to, -target)],
      [Math.max(from, target), to],
    ]
    return parts
      .filter(([a, b]) => b > a)
      .map(([a, b]) =>
        rect('over', {
          x: x(a),
          y: y(count),
          width: roundTo(x(b) - x(a)),
          height: roundTo(bottom - y(count)),
        }),
      )
  })
}

function limits({ worst }: Spread, x: (value: number) => number, area: Box): Shape[] {
  return (['low', 'high'] as const).flatMap((end): Shape[] => {
    const at = x(worst[end])
    return [
      line('limit', at, area.y, at, area.y + area.height),
      text(
        'axis-text',
        at + (end === 'low' ? 5 : -5),
        area.y - 8,
        'worst case',
        end === 'low' ? 'start' : 'end',
        {
          on: 'sheet',
        },
      ),
    ]
  })
}

/** Words stand between the two lines, or outside of them where these are close together. */
function targetLines(target: number, x: (value: number) => number, area: Box): Shape[] {
  const inside = x(target) - x(-target) > 2 * TARGET_WORD
  return [-target, target].flatMap((value): Shape[] => {
    const at = x(value)
    const rightward = value < 0 === inside
    return [
      line('target', at, area.y + 8, at, area.y + area.height),
      text('axis-text', at + (rightward ? 5 : -5), area.y + 18, 'target', rightward ? 'start' : 'end', {
        on: 'sheet',
      }),
    ]
  })
}

/** Single boards as short lines, so that a share of boards is also seen as boards. */
function rug({ builds, histogram }: Spread, x: (value: number) => number, top: number): Shape[] {
  const [low, high] = [histogram.edges[0] ?? -Infinity, histogram.edges.at(-1) ?? Infinity]
  return builds
    .filter((value) => value >= low && value <= high)
    .map((value) => line('tick', x(value), top, x(value), top + 9))
}

function middle(
  spread: Spread,
  x: (value: number) => number,
  row: number,
  words: (value: number) => string,
): Shape[] {
  const at = (share: number) => spread.quantiles.find(([p]) => p === share)?.[1]
  const [low, high] = [at(0.025), at(0.975)]
  if (low === undefined || high === undefined) return []
  return horizontalDimension(row, x(low), x(high), `95 % of boards within ${words(high - low)}`)
}

/** One sentence for those who do not see the plot. */
export function describeSpread(spread: Spread, unit: string, decimalSign: DecimalSign = '.'): string {
  const figure = (value: number) => formatQuantity(value, unit, { digits: 3, decimalSign })
  const at = (share: number) => spread.quantiles.find(([p]) => p === share)?.[1]
  const [low, high] = [at(0.025), at(0.975)]
  const boards = formatNumber(spread.boards, { digits: 8, decimalSign })
  const head = `Error of the reading over ${boards} boards: mean ${figure(spread.mean)}, standard deviation ${figure(spread.deviation)}`
  return low === undefined || high === undefined
    ? `${head}.`
    : `${head}; 95 % of them lie from ${figure(low)} to ${figure(high)}.`
}
