import type { HeadroomEntry, Load, ModelEntry, OverVoltage } from '#shared/design/plan.ts'
import { formatQuantity, formatRange } from '#shared/units/format-quantity.ts'
import { figure, margin, NONE, reached, sentence, uncapital, upward } from './figures.ts'
import type { Row, Statement, Table } from './types.ts'

interface Quantity {
  unit: string
  low: number
  high: number
}

/** Tables of the second sheet: what every pin reaches, how good the ideal model is, what references carry. */

/** Every pin: reached over all boards, allowed, what is left, and the measurand at which its limits are met. */
export function toHeadroomTable(entries: readonly HeadroomEntry[], quantity: Quantity): Table {
  return {
    columns: [
      { title: 'Pin', share: 20, strong: true },
      { title: 'Reached', share: 19, align: 'right' },
      { title: 'Allowed', share: 19, align: 'right' },
      { title: 'Left below', share: 11, align: 'right' },
      { title: 'Left above', share: 11, align: 'right' },
      { title: 'Clips at', share: 26, align: 'right' },
      { title: 'State', share: 12 },
    ],
    rows: entries.map((entry): Row => ({
      state: entry.state,
      cells: [
        entry.pin,
        reached(entry.reached, 'V'),
        formatRange(entry.allowed.low, entry.allowed.high, 'V', { unitOnce: true, rounding: 'inward' }),
        margin(entry.margin.low, 'V'),
        margin(entry.margin.high, 'V'),
        toClipText(entry.worstClipsAt, quantity.unit, quantity),
        '',
      ],
    })),
  }
}

/**
 * Both clip points, lower limit first: "−0.31 and 5.54 m", each rounded towards the middle of the span; a limit that
 * is never met is "none".
 */
export function toClipText(
  clips: { low: number | null; high: number | null },
  unit: string,
  span: { low: number; high: number },
): string {
  const middle = (span.low + span.high) / 2
  const inward = (value: number) => (value < middle ? ('up' as const) : ('down' as const))
  const { low, high } = clips
  if (low === null && high === null) return 'none'
  if (low !== null && high !== null && inward(low) !== inward(high))
    return formatRange(low, high, unit, { unitOnce: true, digits: 4, rounding: 'inward' }).replace(
      ' to ',
      ' and ',
    )
  const text = (value: number | null) =>
    value === null ? 'none' : formatQuantity(value, unit, { digits: 4, rounding: inward(value) })
  return `${text(low)} and ${text(high)}`
}

/** Residue of the real amplifier at full scale, beside the ideal one. */
export function toModelTable(entries: readonly ModelEntry[]): Table {
  return {
    columns: [
      { title: 'Amplifier', share: 16, strong: true },
      { title: 'Between inputs', share: 14, align: 'right' },
      { title: 'Into inputs', share: 13, align: 'right' },
      { title: 'Loop gain', share: 13, align: 'right' },
      { title: 'Gain error', share: 14, align: 'right' },
      { title: 'In codes', share: 15, align: 'right' },
      { title: 'At bandwidth', share: 18, align: 'right' },
      { title: 'Holds to', share: 14, align: 'right' },
      { title: 'State', share: 13 },
    ],
    rows: entries.map((entry): Row => ({
      state: entry.state,
      cells: [
        entry.amplifier,
        upward(entry.inputVolts, 'V'),
        upward(entry.inputAmps, 'A'),
        entry.loopGain === null ? NONE : decibels(entry.loopGain),
        atLeast(entry.gainErrorPpm, 0.01, 'ppm'),
        atLeast(entry.gainErrorLsb, 0.001, 'LSB'),
        entry.atBandwidthLsb === null ? NONE : atLeast(entry.atBandwidthLsb, 0.001, 'LSB'),
        entry.holdsTo === null
          ? 'not at DC'
          : formatQuantity(entry.holdsTo, 'Hz', { digits: 3, rounding: 'down' }),
        '',
      ],
    })),
  }
}

const decibels = (ratio: number): string =>
  `${formatQuantity(20 * Math.log10(Math.abs(ratio)), '', { digits: 4 })} dB`

/** Below `floor` the figure itself says nothing more. */
const atLeast = (value: number, floor: number, unit: string): string =>
  value !== 0 && Math.abs(value) < floor
    ? `under ${formatQuantity(floor, '')} ${unit}`
    : `${formatQuantity(value, '', { digits: 2, rounding: 'outward' })} ${unit}`

export function toVerdicts(entries: readonly ModelEntry[]): Statement[] {
  return entries.map((entry) => ({
    state: entry.state,
    text: entry.verdict.text.startsWith(entry.amplifier)
      ? sentence(entry.verdict.text)
      : `${entry.amplifier}: ${uncapital(sentence(entry.verdict.text))}`,
  }))
}

const sources: Record<string, string> = {
  vref: 'Shift reference',
  vadcref: 'Converter reference',
  vexc: 'Excitation',
  vpos: 'Positive rail',
  vneg: 'Negative rail',
}

export function toLoadTable(loads: readonly Load[]): Table {
  return {
    columns: [
      { title: 'Source', share: 20, strong: true },
      { title: 'Drawn from it', share: 20, align: 'right' },
      { title: 'It can give', share: 18, align: 'right' },
      { title: 'Pushed into it', share: 20, align: 'right' },
      { title: 'It can take', share: 18, align: 'right' },
      { title: 'State', share: 16 },
    ],
    rows: loads.map((load): Row => ({
      state: load.state,
      cells: [
        sources[load.node] ?? load.node,
        upward(load.source, 'A'),
        figure(load.allowed.source, 'A'),
        upward(load.sink, 'A'),
        figure(load.allowed.sink, 'A'),
        '',
      ],
    })),
  }
}

export function toOverVoltageTable(cases: readonly OverVoltage[]): Table {
  return {
    columns: [
      { title: 'Case', share: 38, strong: true },
      { title: 'Converter pin', share: 19, align: 'right' },
      { title: 'Allowed', share: 19, align: 'right' },
      { title: 'Clamp current', share: 14, align: 'right' },
      { title: 'Limit', share: 10, align: 'right' },
      { title: 'State', share: 12 },
    ],
    rows: cases.map((entry): Row => ({
      state: entry.state,
      cells: [
        sentence(entry.case).slice(0, -1),
        reached(entry.pinVolts, 'V'),
        formatRange(entry.allowed.low, entry.allowed.high, 'V', { unitOnce: true, rounding: 'inward' }),
        entry.clampCurrent === null ? 'not limited' : upward(entry.clampCurrent, 'A'),
        entry.clampLimit === null ? NONE : figure(entry.clampLimit, 'A'),
        '',
      ],
    })),
  }
}
