import { formatRoom } from '#shared/units/format-quantity.ts'
import { verticalDimension } from './dimension.ts'
import { levelLabels, limitLabels, OVERHANG, type BayPlace } from './level-labels.ts'
import { isKnown, reachOf, roomOf, sideState, type FigureOptions, type LimitSide } from './level-figures.ts'
import { held, type LevelMeasures } from './level-scale.ts'
import { line, overlaps, path, polyline, rect, text, type Shape, type TextShape } from './shapes.ts'
import { textBox } from './text-width.ts'

/** From this gap on the dimension line stands inside it. */
const INSIDE = 44

/** One bay in the order of painting: cut stone, opening, room, signal, overshoot, worst ends, levels, limits, sides. */
export function bayShapes(place: BayPlace, measures: LevelMeasures, options: FigureOptions): Shape[] {
  const { level, scale, x } = place
  const { bay } = measures
  const arch = place.editing ? archShapes(x, scale.outer.low, bay) : []
  if (!isKnown(level)) return [...unknownShapes(place, measures), ...arch]
  const outer = { x, y: scale.outer.low, width: bay, height: scale.outer.high - scale.outer.low }
  const opening = { x, y: scale.upper, width: bay, height: Math.max(0, scale.lower - scale.upper) }
  const nominal = reachOf(level, false)
  const high = held(scale, nominal.high)
  const low = held(scale, nominal.low)
  const within = (y: number) => Math.min(Math.max(y, scale.upper), Math.max(scale.upper, scale.lower))
  const key = (name: string) => `${level.node} ${name}`
  const across = (style: 'level' | 'level-over' | 'worst' | 'worst-over', y: number, name: string) =>
    line(style, x, y, x + bay, y, key(name))
  const isOver = (side: LimitSide) => sideState(level, side, options) === 'over'

  const shapes: Shape[] = [
    rect('poche', outer),
    rect('opening', opening),
    rect('room', opening),
    rect(
      'wash',
      { x, y: within(high.y), width: bay, height: Math.max(0, within(low.y) - within(high.y)) },
      key('wash'),
    ),
    ...overshoot(place, bay, 'upper', options),
    ...overshoot(place, bay, 'lower', options),
  ]
  if (options.worst) {
    const worstHigh = held(scale, level.worst.high)
    const worstLow = held(scale, level.worst.low)
    // A worst end within the width of the level line would only blur it.
    if (Math.abs(worstHigh.y - high.y) >= 1)
      shapes.push(
        across(level.worst.high > level.region.high ? 'worst-over' : 'worst', worstHigh.y, 'worst high'),
      )
    if (Math.abs(worstLow.y - low.y) >= 1)
      shapes.push(
        across(level.worst.low < level.region.low ? 'worst-over' : 'worst', worstLow.y, 'worst low'),
      )
  }
  shapes.push(
    across(nominal.high > level.region.high ? 'level-over' : 'level', high.y, 'high'),
    across(nominal.low < level.region.low ? 'level-over' : 'level', low.y, 'low'),
    line('limit', x - OVERHANG, scale.upper, x + bay + OVERHANG, scale.upper, key('upper limit')),
    line('limit', x - OVERHANG, scale.lower, x + bay + OVERHANG, scale.lower, key('lower limit')),
    line('side', x + 0.5, outer.y, x + 0.5, outer.y + outer.height),
    line('side', x + bay - 0.5, outer.y, x + bay - 0.5, outer.y + outer.height),
    ...arch,
    ...limitLabels(place, measures, options),
    ...levelLabels(place, measures, options, { upper: isOver('upper'), lower: isOver('lower') }),
    ...bothRooms(place, measures, options),
  )
  return shapes
}

/** The part beyond a limit: up to the nominal level, or to the worst end where only that is over. */
function overshoot(
  { level, scale, x }: BayPlace,
  width: number,
  side: LimitSide,
  options: FigureOptions,
): Shape[] {
  if (sideState(level, side, options) !== 'over') return []
  const upper = side === 'upper'
  const limit = upper ? level.region.high : level.region.low
  const nominal = reachOf(level, false)[upper ? 'high' : 'low']
  const beyond = (v: number) => (upper ? v > limit : v < limit)
  const end = held(scale, beyond(nominal) ? nominal : level.worst[upper ? 'high' : 'low'])
  const edge = upper ? scale.upper : scale.lower
  const [y, bottom] = upper ? [end.y, edge] : [edge, end.y]
  if (bottom - y <= 0) return []
  const shapes: Shape[] = [rect('over', { x, y, width, height: bottom - y }, `${level.node} over ${side}`)]
  if (end.cut) shapes.push(...breakMark(x + width / 2, (y + bottom) / 2))
  return shapes
}

/** A gap between two zigzags: what lies beyond is not to scale. */
function breakMark(x: number, y: number): Shape[] {
  const zigzag = (dy: number) =>
    [-12, -6, 0, 6, 12].map((dx, i) => [x + dx, y + dy + (i % 2 === 0 ? 2 : -2)] as const)
  return [
    polyline('opening', [...zigzag(-2), ...zigzag(2).reverse()], true),
    polyline('break', zigzag(-2)),
    polyline('break', zigzag(2)),
  ]
}

/** The arch over the bay that is being edited, with its two spandrels. */
function archShapes(x: number, top: number, bay: number): Shape[] {
  const [r, h] = [bay / 2, 17.5]
  return [
    path('spandrel', `M${x} ${top}V${top - 19}H${x + bay}V${top}A${r} ${h} 0 0 0 ${x} ${top}z`),
    path('arch', `M${x} ${top}A${r} ${h} 0 0 1 ${x + bay} ${top}`),
  ]
}

function unknownShapes({ scale, x }: BayPlace, { bay, text: size }: LevelMeasures): Shape[] {
  const top = scale.outer.low
  const bottom = scale.outer.high
  return [
    rect('unknown', { x: x + 0.5, y: top, width: bay - 1, height: bottom - top }),
    text('unknown-text', x + bay / 2, (top + bottom) / 2 + 4, 'not known', 'middle', { scale: size }),
  ]
}

/** Both rooms; where there is no place for two figures the smaller room keeps its own. */
function bothRooms(place: BayPlace, measures: LevelMeasures, options: FigureOptions): Shape[] {
  const sides = {
    upper: roomShapes(place, measures, options, 'upper'),
    lower: roomShapes(place, measures, options, 'lower'),
  }
  const isText = (shape: Shape): shape is TextShape => shape.type === 'text'
  const meets = sides.upper
    .filter(isText)
    .some((a) => sides.lower.filter(isText).some((b) => overlaps(textBox(a), textBox(b))))
  if (!meets) return [...sides.upper, ...sides.lower]
  const room = (side: LimitSide) => roomOf(place.level, side, options.worst)
  const quiet: LimitSide = room('upper') > room('lower') ? 'upper' : 'lower'
  return [...sides.upper, ...sides.lower].filter((shape) => !(isText(shape) && sides[quiet].includes(shape)))
}

/** Room as a dimension line in the bay, heads turned where the gap is small; the figure in words where it is over. */
function roomShapes(
  { level, scale, x }: BayPlace,
  { bay, text: size }: LevelMeasures,
  options: FigureOptions,
  side: LimitSide,
): Shape[] {
  const state = sideState(level, side, options)
  const upper = side === 'upper'
  const figure = formatRoom(roomOf(level, side, options.worst), options.decimalSign)
  const reach = reachOf(level, options.worst)
  const end = held(scale, upper ? reach.high : reach.low).y
  const limit = upper ? scale.upper : scale.lower
  const other = held(scale, upper ? reachOf(level, false).low : reachOf(level, false).high).y
  const away = upper ? 1 : -1
  if (state === 'over') {
    const y = upper ? limit + 10 + 14 * size : limit - 10
    return [text('room-over', x + bay / 2, y, figure, 'middle', { on: 'wash', scale: size })]
  }
  const tone = state === 'tight' ? 'tight' : 'clear'
  const gap = Math.abs(limit - end)
  const inside = gap >= INSIDE * size
  const along = x + bay - 15 * size
  const dimension = verticalDimension(along, limit, end, tone, !inside)
  // Outside the gap the figure stands on the signal; where that is too thin, on its far side.
  const onSignal = !inside && Math.abs(other - end) >= 20 * size
  const beside = (onSignal ? end : other) + away * (upper ? 16 : 6) * size
  const anchor = { scale: size, on: onSignal ? ('wash' as const) : ('sheet' as const) }
  const y = inside ? (limit + end) / 2 + 4 * size : beside
  return [...dimension, text(`room-${tone}`, along - 7, y, figure, 'end', anchor)]
}
