import type { Ends } from '#shared/design/plan.ts'
import { formatQuantity, type DecimalSign } from '#shared/units/format-quantity.ts'
import { logTicks, ticks, tickWords } from './axis.ts'
import { lineNames, lineNumbers, nameLines, nameOf, type NamePlace } from './curve-names.ts'
import { verticalDimension } from './dimension.ts'
import { circle, line, polyline, roundTo, text, type Box, type Point, type Shape } from './shapes.ts'
import { textWidth } from './text-width.ts'

/** Curves over one common axis, in one or more panels above each other: responses, loops, spectra. */
export interface CurvePlot {
  /** `from` is where the axis begins at the latest. */
  across: { name: string; unit: string; scale: Scale; from?: number }
  panels: Panel[]
  /** Places that are marked through all panels: a corner, a crossover. */
  marks: PlotMark[]
}

export type Scale = 'linear' | 'log'

export interface Panel {
  name: string
  unit: string
  scale: Scale
  /** What is shown at least, and at most. */
  range?: Partial<Ends>
  lines: PlotLine[]
  /** Horizontal lines that a curve is held to. */
  levels: { y: number; words: string }[]
  /** A distance to be read: the phase margin at a crossover. */
  dimension?: { x: number; from: number; to: number; words: string; tone: 'clear' | 'tight' | 'plain' }
}

export interface PlotLine {
  name: string
  x: readonly number[]
  y: readonly number[]
  /** `signal` once in a plot; `band` for the limits that tolerance puts around it. */
  look: 'signal' | 'band' | 'other'
}

export interface PlotMark {
  x: number
  words: string
}

export interface CurveOptions {
  /** Place of the cursor on the common axis. */
  cursor?: number | null
  grid?: boolean
  decimalSign?: DecimalSign
  width?: number
  /** Height of one panel. */
  panel?: number
}

export interface CurveDrawing {
  width: number
  height: number
  areas: Box[]
  shapes: Shape[]
  /** Place on the common axis at a column of the drawing. */
  across(x: number): number
}

const WIDTH = 560
const LEFT = 64
const BOTTOM = 46
const BETWEEN = 26
const NAME_ROW = 18
const MARK_ROW = 14
const MOST_NAME = 150

/** Lays the panels out below each other, marks with their words above them. Lengths in px. */
export function layoutCurvePlot(plot: CurvePlot, options: CurveOptions = {}): CurveDrawing {
  const { width = WIDTH, panel: height = 170, decimalSign = '.' } = options
  const names = plot.panels.flatMap((panel) =>
    nameLines(panel).map((curve) => textWidth(nameOf(curve, panel), 'line-name')),
  )
  const right = Math.min(MOST_NAME, Math.max(0, ...names)) + 22
  const domain = domainOf(plot)
  const left = LEFT
  const span = width - left - right
  const x = (value: number) => roundTo(left + span * shareOf(value, domain, plot.across.scale))
  const { placed: marks, rows } = placeMarks(
    plot.marks.filter(({ x: at }) => at >= domain.low && at <= domain.high),
    x,
    width,
  )
  const top = NAME_ROW + rows * MARK_ROW
  const areas = plot.panels.map((_, i): Box => ({
    x: left,
    y: top + i * (height + BETWEEN),
    width: span,
    height,
  }))
  const lowest = (areas.at(-1)?.y ?? top) + height
  const shapes: Shape[] = plot.panels.flatMap((panel, i) => {
    const area = areas[i]
    return area ? panelShapes(panel, { area, x, domain, plot, options: { ...options, decimalSign } }) : []
  })
  for (const { mark, at, row, anchor } of marks)
    shapes.push(
      line('target', at, top - 2, at, lowest),
      text(
        'dim-text',
        anchor === 'start' ? at + 4 : at - 4,
        NAME_ROW + row * MARK_ROW - 6,
        mark.words,
        anchor,
        {
          on: 'sheet',
        },
      ),
      line('extension', at, NAME_ROW + row * MARK_ROW - 10, at, top - 2),
    )
  shapes.push(...axisAcross(plot, domain, x, lowest, decimalSign))
  const { cursor } = options
  if (cursor !== null && cursor !== undefined)
    shapes.push(...cursorShapes(plot, areas, x, cursor, lowest, top))
  return {
    width,
    height: lowest + BOTTOM,
    areas,
    shapes,
    across: (px) => valueAt(Math.min(1, Math.max(0, (px - left) / span)), domain, plot.across.scale),
  }
}

/** The ends of the common axis: those of all its curves. */
export function domainOf({ panels, across }: CurvePlot): Ends {
  const all = panels.flatMap((panel) =>
    panel.lines.flatMap(({ x }) => x.filter((v) => across.scale === 'linear' || v > 0)),
  )
  // A spread of a large list would overflow the stack.
  const low = all.reduce((a, b) => Math.min(a, b), across.from ?? Infinity)
  const high = all.reduce((a, b) => Math.max(a, b), -Infinity)
  return low < high ? { low, high } : { low: 1, high: 10 }
}

function rangeOf(panel: Panel): Ends {
  const { range, scale } = panel
  const fits = (v: number) => Number.isFinite(v) && (scale === 'linear' || v > 0)
  const all = [
    ...panel.lines.flatMap(({ y }) => y.filter(fits)),
    ...panel.levels.map(({ y }) => y).filter(fits),
  ]
  let low = all.reduce((a, b) => Math.min(a, b), Infinity)
  let high = all.reduce((a, b) => Math.max(a, b), -Infinity)
  if (!(low <= high)) [low, high] = scale === 'log' ? [0.1, 1] : [0, 1]
  if (range?.low !== undefined) low = Math.max(low, range.low)
  if (range?.high !== undefined) high = Math.min(high, range.high)
  if (scale === 'log') {
    const margin = Math.max((high / low) ** 0.06, 1.12)
    return { low: low / margin, high: high * margin }
  }
  const margin = Math.max((high - low) * 0.06, Math.abs(high) * 1e-3, 1e-12)
  return { low: low - margin, high: high + margin }
}

const shareOf = (value: number, { low, high }: Ends, scale: Scale): number =>
  scale === 'log' ? Math.log(value / low) / Math.log(high / low) : (value - low) / (high - low)

const valueAt = (share: number, { low, high }: Ends, scale: Scale): number =>
  scale === 'log' ? low * (high / low) ** share : low + share * (high - low)

interface PanelPlace {
  area: Box
  x(value: number): number
  domain: Ends
  plot: CurvePlot
  options: CurveOptions & { decimalSign: DecimalSign }
}

function panelShapes(panel: Panel, { area, x, domain, plot, options }: PanelPlace): Shape[] {
  const range = rangeOf(panel)
  const bottom = area.y + area.height
  // Not held at the edges: what leaves the panel is cut there.
  const free = (value: number) => {
    const share = panel.scale === 'log' && !(value > 0) ? -1 : shareOf(value, range, panel.scale)
    return bottom - area.height * share
  }
  const y = (value: number) => roundTo(Math.min(bottom, Math.max(area.y, free(value))))
  const ys = panel.scale === 'log' ? logTicks(range.low, range.high, 6) : ticks(range.low, range.high, 5)
  const xs = acrossTicks(plot, domain, area.width)
  const words =
    panel.scale === 'log'
      ? ys.map((v) => formatQuantity(v, panel.unit, { digits: 3, decimalSign: options.decimalSign }))
      : tickWords(ys, panel.unit, options.decimalSign)
  const right = area.x + area.width
  const grid = options.grid
    ? [
        ...ys.map((v) => line('grid', area.x, y(v), right, y(v))),
        ...xs.map((v) => line('grid', x(v), area.y, x(v), bottom)),
      ]
    : []
  const lines = panel.lines.flatMap((curve): Shape[] => {
    const style = curve.look === 'signal' ? 'level' : curve.look === 'band' ? 'worst' : 'curve'
    const points = curve.x.flatMap((at, i): Point[] => {
      const value = curve.y[i]
      const shown =
        value !== undefined && Number.isFinite(value) && (plot.across.scale === 'linear' || at > 0)
      return shown ? [[x(at), free(value)]] : []
    })
    return runsWithin(points, area.y, bottom).map((run) => polyline(style, run))
  })
  const place: NamePlace = { area, x, free, width: options.width ?? WIDTH }
  return [
    ...grid,
    ...panel.levels.flatMap(({ y: level, words }) => [
      line('side', area.x, y(level), right, y(level)),
      text('axis-text', right - 4, y(level) - 4, words, 'end', { on: 'sheet' }),
    ]),
    ...lines,
    ...lineNumbers(panel, place),
    ...lineNames(panel, place),
    ...dimensionShapes(panel, x, y, domain),
    line('axis', area.x, y(ys[0] ?? range.low), area.x, y(ys.at(-1) ?? range.high)),
    ...ys.flatMap((value, i) => [
      line('axis', area.x - 5, y(value), area.x, y(value)),
      text('axis-text', area.x - 8, y(value) + 4, words[i] ?? '', 'end'),
    ]),
    text('axis-name', 0, area.y - 8, panel.name, 'start', { on: 'sheet' }),
  ]
}

/** The parts of a line between two heights, cut where it crosses them. */
function runsWithin(points: readonly Point[], top: number, bottom: number): Point[][] {
  const runs: Point[][] = []
  let run: Point[] = []
  const isInside = (p: Point) => p[1] >= top && p[1] <= bottom
  const cut = (a: Point, b: Point): Point => {
    const edge = isInside(a) ? (b[1] > bottom ? bottom : top) : a[1] > bottom ? bottom : top
    return [roundTo(a[0] + ((b[0] - a[0]) * (edge - a[1])) / (b[1] - a[1])), roundTo(edge)]
  }
  points.forEach((point, i) => {
    const before = points[i - 1]
    if (before && isInside(before) !== isInside(point)) run.push(cut(before, point))
    if (isInside(point)) run.push([point[0], roundTo(point[1])])
    else if (run.length > 0) {
      runs.push(run)
      run = []
    }
  })
  if (run.length > 0) runs.push(run)
  return runs.filter((list) => list.length > 1)
}

function dimensionShapes(
  { dimension }: Panel,
  x: (value: number) => number,
  y: (value: number) => number,
  domain: Ends,
): Shape[] {
  if (!dimension || dimension.x < domain.low || dimension.x > domain.high) return []
  const at = x(dimension.x)
  const [from, to] = [y(dimension.from), y(dimension.to)]
  return [
    ...verticalDimension(at, from, to, dimension.tone, Math.abs(from - to) < 24),
    text('dim-text', at + 8, (from + to) / 2 + 4, dimension.words, 'start', { on: 'sheet' }),
  ]
}

interface PlacedMark {
  mark: PlotMark
  at: number
  row: number
  anchor: 'start' | 'end'
}

/**
 * Words of marks stand in as few rows as do without touching. Those further left stand higher, so that no line down to
 * the plot runs through the words of another.
 */
function placeMarks(
  marks: readonly PlotMark[],
  x: (value: number) => number,
  width: number,
): { placed: PlacedMark[]; rows: number } {
  /** Where the words of each row begin, rows counted from the plot. */
  const begins: number[] = []
  const list = [...marks]
    .sort((a, b) => b.x - a.x)
    .map((mark) => {
      const at = x(mark.x)
      const length = textWidth(mark.words, 'dim-text') + 10
      const anchor: PlacedMark['anchor'] = at + length > width ? 'end' : 'start'
      const end = anchor === 'start' ? at + length : at + 4
      let row = begins.findIndex((begin) => end < begin)
      if (row < 0) row = begins.length
      begins[row] = anchor === 'start' ? at - 4 : at - length
      return { mark, at, row, anchor }
    })
  return { rows: begins.length, placed: list.map((one) => ({ ...one, row: begins.length - 1 - one.row })) }
}

/** Room for the words of a tick, px. */
const TICK = 56
/** Ticks of a linear axis. */
const FEWEST = 4

const acrossTicks = (
  { across }: Pick<CurvePlot, 'across'>,
  { low, high }: Ends,
  length: number,
): number[] => {
  const count = Math.max(2, Math.floor(length / TICK))
  if (across.scale === 'log') return logTicks(low, high, count)
  // Round steps are wider than those asked for: ask for more until there are enough to read between.
  for (let asked = count; asked < count + FEWEST; asked += 1) {
    const found = ticks(low, high, asked)
    if (found.length >= FEWEST) return found
  }
  return ticks(low, high, count + FEWEST)
}

function axisAcross(
  { across }: CurvePlot,
  domain: Ends,
  x: (value: number) => number,
  bottom: number,
  decimalSign: DecimalSign,
): Shape[] {
  const xs = acrossTicks({ across }, domain, x(domain.high) - x(domain.low))
  const words = (value: number): string =>
    value === 0 ? '0' : formatQuantity(value, across.unit, { digits: 3, decimalSign })
  const [first, last] = [xs[0] ?? domain.low, xs.at(-1) ?? domain.high]
  return [
    line('axis', x(first), bottom, x(last), bottom),
    ...xs.flatMap((value) => [
      line('axis', x(value), bottom, x(value), bottom + 5),
      text('axis-text', x(value), bottom + 17, words(value), 'middle'),
    ]),
    text('axis-name', (x(first) + x(last)) / 2, bottom + 33, across.name, 'middle'),
  ]
}

function cursorShapes(
  plot: CurvePlot,
  areas: readonly Box[],
  x: (value: number) => number,
  cursor: number,
  bottom: number,
  top: number,
): Shape[] {
  const at = x(cursor)
  return [
    line('cursor', at, top, at, bottom),
    ...plot.panels.flatMap((panel, i): Shape[] => {
      const area = areas[i]
      const curve = panel.lines.find(({ look }) => look === 'signal') ?? panel.lines[0]
      const value = curve ? readCurve(curve, cursor, plot.across.scale) : null
      if (!area || value === null || (panel.scale === 'log' && value <= 0)) return []
      const share = Math.min(1, Math.max(0, shareOf(value, rangeOf(panel), panel.scale)))
      return [circle('cursor', at, roundTo(area.y + area.height * (1 - share)), 4)]
    }),
  ]
}

/** Value of a curve at a place, straight between its points on its own axis; null outside of it. */
export function readCurve({ x, y }: Pick<PlotLine, 'x' | 'y'>, at: number, scale: Scale): number | null {
  const i = x.findIndex((value) => value >= at)
  const [x2, y2] = [x[i], y[i]]
  if (x2 === undefined || y2 === undefined) return null
  const [x1, y1] = [x[i - 1], y[i - 1]]
  if (x1 === undefined || y1 === undefined) return x2 === at ? y2 : null
  return y1 + (y2 - y1) * shareOf(at, { low: x1, high: x2 }, scale === 'log' && x1 > 0 ? 'log' : 'linear')
}

export interface CurveReading {
  name: string
  unit: string
  value: number | null
}

/** All named curves at a place, panel by panel. */
export function readCurves(plot: CurvePlot, at: number): CurveReading[] {
  return plot.panels.flatMap((panel) =>
    panel.lines.map((curve) => ({
      name: curve.look === 'signal' ? panel.name : curve.name,
      unit: panel.unit,
      value: readCurve(curve, at, plot.across.scale),
    })),
  )
}

/** Rows of the table that says the same as the plot: evenly spaced on the common axis, and every marked place. */
export function curveTable(
  plot: CurvePlot,
  rows = 9,
): { at: number; words: string | null; readings: CurveReading[] }[] {
  const domain = domainOf(plot)
  const even = Array.from({ length: rows }, (_, i) => valueAt(i / (rows - 1), domain, plot.across.scale)).map(
    (value, i) => (i === 0 ? domain.low : i === rows - 1 ? domain.high : Number(value.toPrecision(3))),
  )
  const places = [
    ...even.map((at) => ({ at, words: null })),
    ...plot.marks
      .filter(({ x }) => x >= domain.low && x <= domain.high)
      .map(({ x, words }) => ({ at: x, words })),
  ]
  return places
    .sort((a, b) => a.at - b.at)
    .map((place) => ({ ...place, readings: readCurves(plot, place.at) }))
}
