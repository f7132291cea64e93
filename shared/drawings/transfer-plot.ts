import type { Ends } from '#shared/design/plan.ts'
import { formatNumber, formatQuantity, formatRange, type DecimalSign } from '#shared/units/format-quantity.ts'
import { ticks, tickText } from './axis.ts'
import { horizontalDimension, verticalDimension } from './dimension.ts'
import {
  circle,
  line,
  path,
  polyline,
  rect,
  roundTo,
  text,
  type Box,
  type Point,
  type Shape,
} from './shapes.ts'
import { textWidth } from './text-width.ts'
import { readTransfer, voltsAt, type TransferInput } from './transfer-input.ts'

export interface TransferOptions {
  /** Measurand at which the cursor stands. */
  cursor?: number | null
  /** Hairlines at the ticks. */
  grid?: boolean
  decimalSign?: DecimalSign
  width?: number
  height?: number
}

export interface TransferDrawing {
  width: number
  height: number
  /** The area of the axes. */
  area: Box
  shapes: Shape[]
  /** Measurand at a column of the drawing. */
  quantityAt(x: number): number
}

const MARGIN = { left: 72, right: 108, top: 20, bottom: 88 }
/** Share of the required span that is shown past a limit, and at most past the required span. */
const PAST = 0.06
const FARTHEST = 0.6

/**
 * Transfer plot: measurand across, converter input up and the code at the right. Nominal line, worst pair dashed, flat
 * past a limit; the frame is the linear region, its corners hatched where there is room. Lengths in px.
 */
export function layoutTransferPlot(input: TransferInput, options: TransferOptions = {}): TransferDrawing {
  const { width = 560, height = 360, decimalSign = '.' } = options
  const area: Box = {
    x: MARGIN.left,
    y: MARGIN.top,
    width: width - MARGIN.left - MARGIN.right,
    height: height - MARGIN.top - MARGIN.bottom,
  }
  const plot = new Plot(input, area, decimalSign)
  return {
    width,
    height,
    area,
    shapes: [
      ...(options.grid ? plot.grid() : []),
      ...plot.spandrels(),
      ...plot.frame(),
      ...plot.worstPair(),
      ...plot.nominal(),
      ...plot.axes(),
      ...plot.dimensions(),
      ...(options.cursor === undefined || options.cursor === null ? [] : plot.cursor(options.cursor)),
    ],
    quantityAt: (x) => plot.quantityAt(x),
  }
}

class Plot {
  /** Required span in increasing order. */
  private readonly span: Ends
  /** Linear span of the nominal board, as far as it is shown. */
  private readonly linear: Ends
  private readonly domain: Ends
  private readonly range: Ends

  constructor(
    private readonly input: TransferInput,
    private readonly area: Box,
    private readonly decimalSign: DecimalSign,
  ) {
    const { quantity, linear, region, converter } = input
    this.span = { low: Math.min(quantity.low, quantity.high), high: Math.max(quantity.low, quantity.high) }
    const width = this.span.high - this.span.low
    const shown = (value: number | null, end: number, away: 1 | -1) => {
      const past = ((value ?? end) - end) * away
      return value === null || past > FARTHEST * width
        ? end + away * (value === null ? PAST : FARTHEST) * width
        : value
    }
    this.linear = { low: shown(linear.low, this.span.low, -1), high: shown(linear.high, this.span.high, 1) }
    this.domain = {
      low: Math.min(this.span.low, this.linear.low) - PAST * width,
      high: Math.max(this.span.high, this.linear.high) + PAST * width,
    }
    const low = Math.min(region.low, converter.input.low)
    const high = Math.max(region.high, converter.input.high)
    this.range = { low: low - PAST * (high - low), high: high + PAST * (high - low) }
  }

  private x(value: number): number {
    const share = (value - this.domain.low) / (this.domain.high - this.domain.low)
    return roundTo(this.area.x + this.area.width * share)
  }

  private y(volts: number): number {
    const share = (volts - this.range.low) / (this.range.high - this.range.low)
    return roundTo(this.area.y + this.area.height * (1 - Math.min(1, Math.max(0, share))))
  }

  quantityAt(x: number): number {
    const share = Math.min(1, Math.max(0, (x - this.area.x) / this.area.width))
    return this.domain.low + share * (this.domain.high - this.domain.low)
  }

  /** The linear region as a frame: limits wide, sides narrow; a side only where the chain meets a limit there. */
  frame(): Shape[] {
    const { region, linear } = this.input
    const [left, right] = [this.x(this.linear.low), this.x(this.linear.high)]
    const [top, bottom] = [this.y(region.high), this.y(region.low)]
    const side = (x: number): Shape => line('side', x, top, x, bottom)
    return [
      line('limit', left, top, right, top),
      line('limit', left, bottom, right, bottom),
      ...(linear.low === null || linear.low < this.linear.low ? [] : [side(left)]),
      ...(linear.high === null || linear.high > this.linear.high ? [] : [side(right)]),
    ]
  }

  /** The corners between line and frame, at each end of the required span where room is left. */
  spandrels(): Shape[] {
    const corner = (from: number, to: number): Shape[] => {
      const [x1, x2] = [this.x(from), this.x(to)]
      const [y1, y2] = [this.y(voltsAt(this.input, from)), this.y(voltsAt(this.input, to))]
      if (x2 - x1 < 1 || Math.abs(y2 - y1) < 1) return []
      return [
        path('room', `M${x1} ${y1}L${x2} ${y2}L${x2} ${y1}Z`),
        path('room', `M${x1} ${y1}L${x2} ${y2}L${x1} ${y2}Z`),
      ]
    }
    const { linear } = this.input
    return [
      ...(linear.low === null ? [] : corner(this.linear.low, this.span.low)),
      ...(linear.high === null ? [] : corner(this.span.high, this.linear.high)),
    ]
  }

  /** The line in its linear part, then flat past the limits. */
  nominal(): Shape[] {
    const { low, high } = this.linear
    const at = (value: number): Point => [this.x(value), this.y(voltsAt(this.input, value))]
    const [a, b] = [at(low), at(high)]
    const flat = (from: Point, x: number): Shape => polyline('level-over', [from, [x, from[1]]])
    const middle = this.span.low + 0.36 * (this.span.high - this.span.low)
    const [mx, my] = at(middle)
    const rising = b[1] <= a[1]
    return [
      polyline('level', [a, b]),
      ...(this.input.linear.low !== null && low === this.input.linear.low
        ? [flat(a, this.x(this.domain.low))]
        : []),
      ...(this.input.linear.high !== null && high === this.input.linear.high
        ? [flat(b, this.x(this.domain.high))]
        : []),
      text('line-name', rising ? mx - 10 : mx + 10, my - 6, 'nominal', rising ? 'end' : 'start', {
        on: 'sheet',
      }),
    ]
  }

  /** Highest and lowest board, straight between the ends of the required span, where they part from the nominal. */
  worstPair(): Shape[] {
    const { quantity, worst, nominal } = this.input
    return (['low', 'high'] as const).flatMap((which): Shape[] => {
      const apart = Math.max(
        Math.abs(this.y(worst.low[which]) - this.y(nominal.low)),
        Math.abs(this.y(worst.high[which]) - this.y(nominal.high)),
      )
      if (apart < 1.5) return []
      const points = this.withinRegion([quantity.low, worst.low[which]], [quantity.high, worst.high[which]])
      return [
        polyline(
          'worst',
          points.map(([q, v]) => [this.x(q), this.y(v)] as const),
        ),
      ]
    })
  }

  /** A straight line in measurand and volts, kept flat where it would leave the linear region. */
  private withinRegion(from: Point, to: Point): Point[] {
    const { low, high } = this.input.region
    const held = (v: number) => Math.min(high, Math.max(low, v))
    const crossings = [low, high]
      .map((limit) => (limit - from[1]) / (to[1] - from[1]))
      .filter((share) => share > 0 && share < 1)
      .sort((a, b) => a - b)
    return [0, ...crossings, 1].map((share) => [
      from[0] + share * (to[0] - from[0]),
      held(from[1] + share * (to[1] - from[1])),
    ])
  }

  private quantityTicks(): number[] {
    return ticks(this.domain.low, this.domain.high, 8)
  }

  private voltTicks(): number[] {
    const { region, converter } = this.input
    return ticks(Math.min(region.low, converter.input.low), Math.max(region.high, converter.input.high), 5)
  }

  grid(): Shape[] {
    const { x, y, width, height } = this.area
    return [
      ...this.quantityTicks().map((q) => line('grid', this.x(q), y, this.x(q), y + height)),
      ...this.voltTicks().map((v) => line('grid', x, this.y(v), x + width, this.y(v))),
    ]
  }

  axes(): Shape[] {
    const { x, y, width, height } = this.area
    const { quantity, converter } = this.input
    const bottom = y + height
    const right = x + width
    const qs = this.quantityTicks()
    const vs = this.voltTicks()
    const [q1 = this.domain.low, q2 = this.domain.high] = [qs[0], qs.at(-1)]
    const { decimalSign } = this
    const number = (value: number, all: readonly number[]) => tickText(value, all, decimalSign)
    const steps = 2 ** converter.bits
    const codes = [0, 1, 2, 3, 4].map((n) => (steps / 4) * n)
    const volts = (code: number) =>
      converter.input.low + ((converter.input.high - converter.input.low) * code) / steps
    const shift = converter.coding === 'twos' ? steps / 2 : 0
    return [
      line('axis', this.x(q1), bottom, this.x(q2), bottom),
      ...qs.flatMap((q, i) => [
        line('axis', this.x(q), bottom, this.x(q), bottom + 5),
        text(
          'axis-text',
          this.x(q),
          bottom + 17,
          `${number(q, qs)}${i === qs.length - 1 && quantity.unit ? ` ${quantity.unit}` : ''}`,
          'middle',
        ),
      ]),
      line('axis', x, this.y(vs[0] ?? this.range.low), x, this.y(vs.at(-1) ?? this.range.high)),
      ...vs.flatMap((v, i) => [
        line('axis', x - 5, this.y(v), x, this.y(v)),
        text('axis-text', x - 8, this.y(v) + 4, `${number(v, vs)}${i === vs.length - 1 ? ' V' : ''}`, 'end'),
      ]),
      line('axis', right, this.y(volts(0)), right, this.y(volts(steps))),
      ...codes.flatMap((code) => [
        line('axis', right, this.y(volts(code)), right + 5, this.y(volts(code))),
        text(
          'axis-text',
          right + 8,
          this.y(volts(code)) + 4,
          formatNumber(Math.min(code, steps - 1) - shift, { digits: 10, decimalSign }),
          'start',
        ),
      ]),
      text('axis-name', x + width / 2, bottom + 31, quantity.name, 'middle'),
      text('axis-name', x - 8, y - 8, 'Converter input', 'start'),
      text('axis-name', right + 8, y - 8, 'Code', 'start'),
    ]
  }

  /** Under the plot: room, required span, room; then the linear span of every board. At the right: codes used. */
  dimensions(): Shape[] {
    const { quantity, worstLinear, codesUsed, converter } = this.input
    const row = this.area.y + this.area.height + 52
    const { low, high } = this.span
    const sign = { decimalSign: this.decimalSign }
    const linear = {
      low: Math.max(worstLinear.low ?? -Infinity, this.domain.low),
      high: Math.min(worstLinear.high ?? Infinity, this.domain.high),
    }
    const drop = (value: number, to: number) =>
      line('extension', this.x(value), this.area.y + this.area.height + 36, this.x(value), to + 3)
    const required = formatRange(low, high, quantity.unit, sign)
    const shapes: Shape[] = [
      drop(low, row),
      drop(high, row),
      ...horizontalDimension(row, this.x(low), this.x(high), `required ${required}`),
    ]
    if (worstLinear.low !== null && worstLinear.low < low)
      shapes.push(...roomDimension(row, this.x(linear.low), this.x(low), this.words(low - worstLinear.low)))
    if (worstLinear.high !== null && worstLinear.high > high)
      shapes.push(
        ...roomDimension(row, this.x(linear.high), this.x(high), this.words(worstLinear.high - high)),
      )
    if (worstLinear.low !== null || worstLinear.high !== null) {
      const words =
        worstLinear.low === null
          ? `linear up to ${formatQuantity(linear.high, quantity.unit, { rounding: 'down', ...sign })}`
          : worstLinear.high === null
            ? `linear from ${formatQuantity(linear.low, quantity.unit, { rounding: 'up', ...sign })}`
            : `linear ${formatRange(worstLinear.low, worstLinear.high, quantity.unit, { rounding: 'inward', ...sign })}`
      shapes.push(
        drop(linear.low, row + 24),
        drop(linear.high, row + 24),
        ...horizontalDimension(row + 24, this.x(linear.low), this.x(linear.high), `${words}, every board`),
      )
    }
    const column = this.area.x + this.area.width + 68
    const reached = (value: number) => this.y(readTransfer(this.input, value).volts)
    const [y1, y2] = [reached(quantity.low), reached(quantity.high)]
    const used = `${formatNumber(Math.floor(codesUsed), { digits: 10, ...sign })} of ${formatNumber(2 ** converter.bits, { digits: 10, ...sign })}`
    const beside = (y: number) => line('extension', this.area.x + this.area.width, y, column + 3, y)
    return [
      ...shapes,
      beside(y1),
      beside(y2),
      ...verticalDimension(column, y1, y2, 'plain', Math.abs(y1 - y2) < 24),
      text('dim-text', column + 14, (y1 + y2) / 2, `${used} codes`, 'middle', { turned: true, on: 'sheet' }),
    ]
  }

  private words(room: number): string {
    const { unit } = this.input.quantity
    return formatQuantity(room, unit, { digits: 3, rounding: 'down', decimalSign: this.decimalSign })
  }

  cursor(value: number): Shape[] {
    const point = readTransfer(this.input, value)
    const [x, y] = [this.x(value), this.y(point.volts)]
    const { y: top, height } = this.area
    return [
      line('cursor', x, top, x, top + height),
      line('cursor', x, y, this.area.x + this.area.width, y),
      circle('cursor', x, y, 4),
      rect('cursor', { x: x - 2, y: top + height - 2, width: 4, height: 4 }),
    ]
  }
}

/**
 * Room beside the required span on the same row. Where it is narrow its head stands outside with the figure behind it;
 * the head at the required span is the one of that dimension.
 */
function roomDimension(y: number, limit: number, end: number, words: string): Shape[] {
  const away = limit < end ? -1 : 1
  if (Math.abs(end - limit) >= 46) return horizontalDimension(y, limit, end, words, 'clear')
  return [
    line('dim-clear', limit, y, limit + away * 16, y),
    polyline(
      'head-clear',
      [
        [limit, y],
        [limit + away * 5.2, y - 1.56],
        [limit + away * 5.2, y + 1.56],
      ],
      true,
    ),
    // A long figure is kept inside the drawing.
    away < 0
      ? text('room-clear', Math.max(limit - 20, textWidth(words, 'room-clear') + 2), y + 4, words, 'end', {
          on: 'sheet',
        })
      : text('room-clear', limit + 20, y + 4, words, 'start', { on: 'sheet' }),
  ]
}

/** One sentence for those who do not see the plot. */
export function describeTransfer(input: TransferInput, decimalSign: DecimalSign = '.'): string {
  const { quantity, nominal, worstLinear, codesUsed } = input
  const sign = { decimalSign }
  const linear =
    worstLinear.low === null || worstLinear.high === null
      ? ''
      : ` Every board is linear from ${formatRange(worstLinear.low, worstLinear.high, quantity.unit, { rounding: 'inward', ...sign })}.`
  return (
    `${quantity.name} from ${formatRange(quantity.low, quantity.high, quantity.unit, sign)} gives ` +
    `${formatRange(nominal.low, nominal.high, 'V', sign)} at the converter, ` +
    `${formatNumber(Math.floor(codesUsed), { digits: 10, ...sign })} codes.${linear}`
  )
}
