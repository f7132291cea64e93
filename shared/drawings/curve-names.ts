import type { Panel, PlotLine } from './curve-plot.ts'
import { roundTo, text, type Box, type Point, type Shape } from './shapes.ts'
import { textWidth } from './text-width.ts'

/** From one name to the next below it, px. */
const NAME_GAP = 13

/** Curves that carry a name: the limits of tolerance are named once. */
export function nameLines(panel: Panel): PlotLine[] {
  const band = panel.lines.find(({ look }) => look === 'band')
  const named = panel.lines.filter((curve) => curve.look !== 'band' || curve === band)
  return named.length > 1 ? named : []
}

export interface NamePlace {
  area: Box
  x(value: number): number
  /** Height of a value, not held at the edges. */
  free(value: number): number
  width: number
}

const others = ({ lines }: Panel): PlotLine[] => lines.filter(({ look }) => look === 'other')

/** Thin curves look alike: where there are several, each has a number on it that stands before its name. */
export function nameOf(curve: PlotLine, panel: Panel): string {
  const thin = others(panel)
  const at = thin.indexOf(curve)
  return at < 0 || thin.length < 2 ? curve.name : `${at + 1} ${curve.name}`
}

/** The numbers on thin curves, each at its own place along the axis, so that close curves are told apart. */
export function lineNumbers(panel: Panel, { area, x, free }: NamePlace): Shape[] {
  const thin = others(panel)
  if (thin.length < 2) return []
  return thin.flatMap((curve, i): Shape[] => {
    const points = visible(curve, { area, x, free })
    const [from, to] = [points[0], points.at(-1)]
    if (!from || !to) return []
    const wanted = from[0] + ((to[0] - from[0]) * (i + 1)) / (thin.length + 1)
    const [at, y] = points.reduce((a, b) => (Math.abs(b[0] - wanted) < Math.abs(a[0] - wanted) ? b : a))
    return [text('key-text', at, roundTo(y + 4), String(i + 1), 'middle', { on: 'sheet' })]
  })
}

/** The points of a curve that its panel shows. */
function visible({ x: places, y }: PlotLine, { area, x, free }: Omit<NamePlace, 'width'>): Point[] {
  return places.flatMap((at, i): Point[] => {
    const point: Point = [x(at), free(y[i] ?? NaN)]
    return Number.isFinite(point[0]) && point[1] >= area.y && point[1] <= area.y + area.height ? [point] : []
  })
}

/** Further than this from the right edge a curve ends inside its panel, px. */
const ENDS_INSIDE = 12

/** Names where the curves end: at the right edge, or where they leave the panel; moved apart where they would touch. */
export function lineNames(panel: Panel, place: NamePlace): Shape[] {
  const { area, width } = place
  const right = area.x + area.width
  const rows = nameLines(panel)
    .filter((curve) => curve.look !== 'band' || isApart(panel, place))
    .flatMap((curve, _, named) => {
      const end = visible(curve, place).at(-1)
      if (!end || named.length < 2) return []
      const words = nameOf(curve, panel)
      const inside = right - end[0] > ENDS_INSIDE && end[0] + 14 + textWidth(words, 'line-name') < width
      return [{ curve, words, x: inside ? end[0] + 8 : right + 8, at: end[1] }]
    })
    .sort((a, b) => a.at - b.at)
  let taken = area.y - NAME_GAP
  for (const row of rows) {
    row.at = Math.max(row.at, taken + NAME_GAP)
    taken = row.at
  }
  // What was pushed past the bottom pushes back from there.
  let free = area.y + area.height - 6
  for (const row of [...rows].reverse()) {
    row.at = Math.min(row.at, free)
    free = row.at - NAME_GAP
  }
  return rows.map(({ curve, words, x, at }) =>
    text(curve.look === 'other' ? 'key-text' : 'line-name', x, roundTo(at + 4), words, 'start', {
      on: 'sheet',
    }),
  )
}

/** Whether the limits of tolerance can be told from the curve that they stand around. */
function isApart(panel: Panel, place: NamePlace): boolean {
  const signal = panel.lines.find(({ look }) => look === 'signal')
  if (!signal) return true
  const { area, x, free } = place
  const held = (value: number) => Math.min(area.y + area.height, Math.max(area.y, free(value)))
  const heights = new Map(signal.x.map((at, i) => [x(at), held(signal.y[i] ?? NaN)]))
  return panel.lines
    .filter(({ look }) => look === 'band')
    .some((band) =>
      band.x.some((at, i) => {
        const height = heights.get(x(at))
        return height !== undefined && Math.abs(held(band.y[i] ?? NaN) - height) > 1
      }),
    )
}
