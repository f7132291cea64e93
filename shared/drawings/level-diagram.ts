import type { Ends, Level } from '#shared/design/plan.ts'
import { formatNumber, formatQuantity } from '#shared/units/format-quantity.ts'
import { bayShapes } from './level-bay.ts'
import { limitLabels, type BayPlace } from './level-labels.ts'
import { levelKey } from './level-key.ts'
import { bothEnds, isKnown, rises, type FigureOptions } from './level-figures.ts'
import { levelMarks, type Mark } from './level-marks.ts'
import { held, shareScale, sheetMeasures, voltScales, type LevelMeasures } from './level-scale.ts'
import { line, text, type Box, type Shape, type TextShape } from './shapes.ts'
import { textBox } from './text-width.ts'

export type LevelMode = 'share' | 'volts'

export interface LevelOptions extends FigureOptions {
  mode: LevelMode
  measures?: LevelMeasures
  /** Node whose stage is being edited; its bay wears the arch. */
  editing?: string | null
  /** Levels of another variant, drawn dotted where it has the same node. */
  kept?: readonly Level[]
}

export interface LevelBay {
  node: string
  title: string
  /** The opening with the cut stone above and below it. */
  box: Box
  shapes: Shape[]
  marks: Mark[]
}

export interface LevelDrawing {
  width: number
  height: number
  bays: LevelBay[]
  /** Lines from bay to bay, painted under the bays; titles and gains. */
  links: Shape[]
  headings: Shape[]
  key: Shape[]
  /** Everything in the order of painting. */
  shapes: Shape[]
  /** One line about the scale. */
  caption: string
}

/** The level diagram: a strip of bays in signal order. Volts; lengths in px. */
export function layoutLevelDiagram(levels: readonly Level[], options: LevelOptions): LevelDrawing {
  const measures = options.measures ?? sheetMeasures
  const scales =
    options.mode === 'volts'
      ? voltScales(levels, measures)
      : levels.map((level) => shareScale(level, measures))
  const bare = levels.map((level, i) => ({
    level,
    scale: scales[i] ?? shareScale(level, measures),
    x: measures.gutter + measures.limits + i * measures.column,
    first: i === 0,
    editing: options.editing !== undefined && options.editing !== null && level.node === options.editing,
  }))
  const places: BayPlace[] = bare.map((place, i) => {
    const next = bare[i + 1]
    const right = next
      ? [...limitLabels(next, measures, options), ...gainLabel(place, next, measures, options)]
      : []
    return { ...place, taken: right.map(textBox) }
  })
  const bays = places.map((place): LevelBay => ({
    node: place.level.node,
    title: place.level.title,
    box: {
      x: place.x,
      y: place.scale.outer.low,
      width: measures.bay,
      height: place.scale.outer.high - place.scale.outer.low,
    },
    shapes: [...bayShapes(place, measures, options), ...keptShapes(place, measures, options.kept)],
    marks: levelMarks(place.level, place.scale, options),
  }))
  const links = places.flatMap((place, i) => {
    const next = places[i + 1]
    return next ? linkShapes(place, next, measures) : []
  })
  const headings = places.flatMap((place, i) => headingShapes(place, places[i + 1], measures, options))
  const key = measures.gutter > 0 ? levelKey(options.worst, options.kept !== undefined) : []
  const shapes = [...links, ...bays.flatMap((bay) => bay.shapes), ...headings, ...key]
  // A figure that made way for another may stand below the bay.
  const lowest = shapes.flatMap((s) => (s.type === 'text' ? [textBox(s)] : [])).map((b) => b.y + b.height)
  return {
    width: measures.gutter + measures.column * levels.length,
    height: Math.ceil(Math.max(measures.top + measures.region + 2 * measures.poche + 3, ...lowest)),
    bays,
    links,
    headings,
    key,
    shapes,
    caption: caption(levels, options, scales[0]?.times ?? 1),
  }
}

function caption(levels: readonly Level[], options: LevelOptions, times: number): string {
  if (options.mode === 'share') return `Each bay is scaled to its own linear region${unitsOf(levels)}`
  return times === 1
    ? 'All bays on one scale, in V'
    : `All bays on one scale, in V; the sensor output is drawn ${formatNumber(times)} times as large`
}

/** ", in mV at the sensor and V after it" */
function unitsOf(levels: readonly Level[]): string {
  const unit = (level: Level | undefined) =>
    level && isKnown(level)
      ? (bothEnds(level.region.low, level.region.high, level.unit).high.split(/\s/)[1] ?? level.unit)
      : null
  const [first, ...rest] = levels.map(unit)
  const other = rest.find((u) => u !== null)
  if (!first || !other || rest.some((u) => u !== null && u !== other)) return ''
  return first === other ? `, in ${first}` : `, in ${first} at the sensor and ${other} after it`
}

/** The two ends of the measurand, bay to bay; they cross over where the stage inverts. */
function linkShapes(from: BayPlace, to: BayPlace, measures: LevelMeasures): Shape[] {
  if (!isKnown(from.level) || !isKnown(to.level)) return []
  const ends: (keyof Ends)[] = ['high', 'low']
  return ends.map((end) =>
    line(
      'link',
      from.x + measures.bay,
      held(from.scale, from.level.nominal[end]).y,
      to.x,
      held(to.scale, to.level.nominal[end]).y,
      `link ${from.level.node} ${end}`,
    ),
  )
}

type Placed = Pick<BayPlace, 'level' | 'scale' | 'x'>

function headingShapes(
  place: Placed,
  next: Placed | undefined,
  measures: LevelMeasures,
  options: LevelOptions,
): Shape[] {
  const scale = measures.text
  const middle = place.x + measures.bay / 2
  const times = place.scale.times === 1 ? '' : ` × ${formatNumber(place.scale.times)}`
  return [
    text('title', middle, measures.top - 31, `${place.level.title}${times}`, 'middle', { scale }),
    ...(next ? gainLabel(place, next, measures, options) : []),
  ]
}

/** Ends of the same node in another variant, dotted, on this one's scale. */
function keptShapes(
  { level, scale, x }: Placed,
  { bay }: LevelMeasures,
  kept: readonly Level[] = [],
): Shape[] {
  const other = kept.find(({ node }) => node === level.node)
  if (!other || !isKnown(other) || !isKnown(level)) return []
  return (['low', 'high'] as const).map((end) => {
    const { y } = held(scale, other.nominal[end])
    return line('signed', x, y, x + bay, y, `${level.node} kept ${end}`)
  })
}

/** "× 100.8" between two bays. */
function gainLabel(place: Placed, next: Placed, measures: LevelMeasures, options: LevelOptions): TextShape[] {
  if (next.level.gain === null) return []
  const gain = formatNumber(next.level.gain, { decimalSign: options.decimalSign ?? '.' })
  const between = (place.x + measures.bay + next.x) / 2
  return [
    text('gain', between, measures.top - 11, `× ${gain}`, 'middle', { scale: measures.text, on: 'sheet' }),
  ]
}

/** One sentence that names the drawing: how many nodes, which is worst. */
export function describeLevels(levels: readonly Level[], options: FigureOptions): string {
  const known = levels.filter(isKnown)
  const count = `Level diagram of ${levels.length} ${levels.length === 1 ? 'node' : 'nodes'}`
  if (known.length === 0) return `${count}, none of them known yet.`
  const rooms = known.flatMap((level) => {
    const room = options.worst ? level.room : level.nominalRoom
    return [
      { level, room: room.high, side: 'above' },
      { level, room: room.low, side: 'below' },
    ]
  })
  const least = rooms.reduce((a, b) => (b.room < a.room ? b : a))
  const over = known.filter((level) => level.room.low < 0 || level.room.high < 0).length
  const room = formatQuantity(Math.abs(least.room), '', {
    digits: 3,
    rounding: least.room < 0 ? 'up' : 'down',
    display: 'percent',
    decimalSign: options.decimalSign ?? '.',
  })
  const inverts = known.some((level) => !rises(level)) ? ' The signal is inverted at least once.' : ''
  const worst =
    over > 0
      ? `${over} ${over === 1 ? 'leaves' : 'leave'} the linear region, most at “${least.level.title}”, ${room} over.`
      : `Least room is ${room} ${least.side} “${least.level.title}”.`
  return `${count}. ${worst}${inverts}`
}
