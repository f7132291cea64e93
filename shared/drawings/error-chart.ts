import type { Budget, BudgetLine, ErrorState } from '#shared/design/plan.ts'
import { formatQuantity, type DecimalSign } from '#shared/units/format-quantity.ts'
import { line, rect, roundTo, text, type Shape } from './shapes.ts'
import { textWidth } from './text-width.ts'

/** One term of the budget as a bar: its standard uncertainty, in the unit that the chart is read in. */
export interface ErrorBar {
  id: string
  label: string
  source: string
  path: string | null
  size: number
  /** Share of the variance in this state, 0 to 1. */
  share: number
}

export interface ErrorBars {
  state: ErrorState
  /** Largest first, at most `BARS`. */
  bars: ErrorBar[]
  others: { count: number; size: number; share: number } | null
  expanded: number
  target: number | null
}

const BARS = 8

/** Limit over standard deviation, where a line does not say itself what it takes. */
const DIVISOR = { rectangular: Math.sqrt(3), normal: 3 } as const

/** Standard uncertainty of a line in a state, V: its own figure in the target's state, else by the same divisor. */
export function standardIn(line: BudgetLine, state: ErrorState, targetState: ErrorState): number {
  const limit = line[targetState]
  if (state === targetState) return line.standard
  return line[state] * (limit > 0 ? line.standard / limit : 1 / DIVISOR[line.distribution])
}

/**
 * The terms of one state, largest first. `perVolt` is what a volt at the converter is in the unit that the chart is
 * read in: 1 for the converter, 1/perQuantity for the measurand.
 */
export function errorBars(budget: Budget, state: ErrorState, perVolt: number): ErrorBars {
  const targetState = budget.target?.state ?? 'calibrated'
  const sized = budget.lines
    .map((of) => ({ of, size: standardIn(of, state, targetState) }))
    .filter(({ size }) => size > 0)
  const variance = sized.reduce((sum, { size }) => sum + size * size, 0)
  const all = sized
    .map(({ of, size }): ErrorBar => ({
      id: of.id,
      label: of.label,
      source: of.source,
      path: of.path,
      size: size * perVolt,
      share: state === targetState ? of.share : (size * size) / variance,
    }))
    .sort((a, b) => b.size - a.size || (a.id < b.id ? -1 : 1))
  // A single line is not summed up as "all others".
  const shown = all.length === BARS + 1 ? all : all.slice(0, BARS)
  const rest = all.slice(shown.length)
  return {
    state,
    bars: shown,
    others:
      rest.length === 0
        ? null
        : {
            count: rest.length,
            size: Math.hypot(...rest.map((bar) => bar.size)),
            share: rest.reduce((sum, bar) => sum + bar.share, 0),
          },
    expanded: budget.totals[state].expanded * perVolt,
    target: budget.target ? budget.target.limit * perVolt : null,
  }
}

/** The figure that fills the width of the chart. */
export const chartEnd = ({ bars, others, expanded, target }: ErrorBars): number =>
  Math.max(expanded, target ?? 0, others?.size ?? 0, ...bars.map((bar) => bar.size)) || 1

/** Expanded uncertainty against the target as a bar of its own; lengths as shares of the width. */
export function totalBar({ expanded, target }: ErrorBars, end: number) {
  return {
    bar: expanded / end,
    tick: target === null ? null : target / end,
    /** What is left, or what is too much. */
    gap:
      target === null
        ? null
        : {
            from: Math.min(expanded, target) / end,
            to: Math.max(expanded, target) / end,
            over: expanded > target,
          },
  }
}

export interface ErrorChartOptions {
  unit: string
  width?: number
  decimalSign?: DecimalSign
}

export interface ErrorChartDrawing {
  width: number
  height: number
  shapes: Shape[]
}

const ROW = 19
const BAR = 9
const SHARE_COLUMN = 54
const LONGEST_LABEL = 230

/** The chart with its words, for paper: on the page the list beside the bars is real text. Lengths in px. */
export function layoutErrorChart(chart: ErrorBars, options: ErrorChartOptions): ErrorChartDrawing {
  const { unit, width = 620, decimalSign = '.' } = options
  const figure = (value: number) =>
    formatQuantity(value, unit, { digits: 2, rounding: 'outward', decimalSign })
  const share = (value: number) => formatQuantity(value, '', { digits: 2, display: 'percent', decimalSign })
  const rows = [
    ...chart.bars.map((bar) => ({ label: bar.label, size: bar.size, share: bar.share })),
    ...(chart.others
      ? [
          {
            label: `All others, ${chart.others.count} lines`,
            size: chart.others.size,
            share: chart.others.share,
          },
        ]
      : []),
  ]
  const end = chartEnd(chart)
  const widest = Math.max(...[...rows.map((row) => row.label), 'Expanded uncertainty'].map(labelWidth))
  const left = Math.min(LONGEST_LABEL, widest) + 12
  const figures = Math.max(
    ...[...rows.map((row) => row.size), chart.expanded].map((v) => labelWidth(figure(v))),
  )
  const room = width - left - SHARE_COLUMN - figures - 14
  const x = (value: number) => roundTo(left + (room * value) / end)
  const shapes: Shape[] = rows.flatMap((row, index): Shape[] => {
    const y = 4 + index * ROW
    return [
      text('label', left - 8, y + BAR, shortened(row.label), 'end'),
      rect('bar', { x: left, y, width: roundTo(x(row.size) - left), height: BAR }),
      text('axis-text', x(row.size) + 6, y + BAR, figure(row.size), 'start'),
      text('axis-text', width, y + BAR, share(row.share), 'end'),
    ]
  })
  const rule = 4 + rows.length * ROW
  const y = rule + 8
  const total = totalBar(chart, end)
  shapes.push(
    line('axis', left, 0, left, rule - 4),
    line('axis', 0, rule, width, rule),
    text('axis-name', left - 8, y + BAR, 'Expanded uncertainty', 'end'),
    rect('bar-signal', { x: left, y, width: roundTo(room * total.bar), height: BAR }),
  )
  if (total.gap && total.tick !== null) {
    const box = {
      x: x(total.gap.from * end),
      y,
      height: BAR,
      width: roundTo(room * (total.gap.to - total.gap.from)),
    }
    if (box.width > 0.5) shapes.push(rect(total.gap.over ? 'over' : 'room', box))
    const tick = x(total.tick * end)
    shapes.push(
      line('limit', tick, y - 4, tick, y + BAR + 4),
      text(
        'axis-text',
        tick,
        y + BAR + 16,
        `target ${figure(chart.target ?? 0)}`,
        tick > width * 0.7 ? 'end' : 'middle',
      ),
    )
  }
  shapes.push(
    text(
      'axis-name',
      x(Math.max(chart.expanded, chart.target ?? 0)) + 6,
      y + BAR,
      figure(chart.expanded),
      'start',
    ),
  )
  return { width, height: y + BAR + (chart.target === null ? 6 : 22), shapes }
}

const labelWidth = (words: string): number => textWidth(words, 'label')

/** A label that is longer than its column loses its end. */
function shortened(label: string): string {
  if (labelWidth(label) <= LONGEST_LABEL) return label
  let cut = label
  while (cut.length > 1 && labelWidth(`${cut}…`) > LONGEST_LABEL) cut = cut.slice(0, -1)
  return `${cut.trimEnd()}…`
}
