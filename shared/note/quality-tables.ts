import type {
  Budget,
  BudgetLine,
  Drive,
  ErrorState,
  FilterPlan,
  IndependentCheck,
  NoiseSummary,
  StabilityEntry,
} from '#shared/design/plan.ts'
import type { Spread } from '#shared/studies/types.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import { count, figure, NONE, sized, upward } from './figures.ts'
import type { Row, Table } from './types.ts'

/** Tables of the sheets that say how good a channel is. Errors are rounded up, margins down. */

/** What a volt at the converter is in the other ways of saying it. */
export interface Scale {
  /** V of y per code, per span and per unit of the measurand. */
  lsb: number
  span: number
  perQuantity: number
  unit: string
}

export const stateWords: Record<ErrorState, string> = {
  asBuilt: 'As built',
  zeroed: 'After zero',
  calibrated: 'After zero and span',
}

/** Lines printed one by one; the rest is summed. */
const LINES = 16

/** Shares below this say nothing more. */
const SMALL = 1e-4

const part = (fraction: number): string =>
  fraction < SMALL ? 'under 0.01 %' : formatQuantity(fraction, '', { digits: 2, display: 'percent' })

/** Codes below a thousandth are none. */
const codes = (x: number): string =>
  x < 1e-3 ? 'under 0.001' : formatQuantity(x, '', { digits: 2, rounding: 'outward' })

const limitOf = (line: BudgetLine, state: ErrorState): number => line[state]

export const limitWords = (limit: number, unit: string): string =>
  unit === ''
    ? formatQuantity(limit, '', { digits: 3, display: 'percent' })
    : formatQuantity(limit, unit, { digits: 3 })

/** Every line in one state, largest first: limit, and what it does in volts, codes, share of span and measurand. */
export function toBudgetTable(budget: Budget, state: ErrorState, scale: Scale): Table {
  const sorted = budget.lines
    .filter((line) => limitOf(line, state) > 0)
    .sort((a, b) => b.share - a.share || limitOf(b, state) - limitOf(a, state) || (a.id < b.id ? -1 : 1))
  const shown = sorted.filter((line, i) => i < LINES && line.share >= SMALL)
  const rest = sorted.slice(shown.length)
  const largest = Math.max(...shown.map((line) => limitOf(line, state)), 0)
  const cells = (volts: number): string[] => [
    sized(volts, largest, 'V'),
    codes(volts / scale.lsb),
    volts / scale.span < 1e-7
      ? 'under 0.1 ppm'
      : formatQuantity(volts / scale.span, '', { digits: 2, display: 'percent', rounding: 'outward' }),
    sized(volts / scale.perQuantity, largest / scale.perQuantity, scale.unit),
  ]
  const rows = shown.map((line): Row => ({
    cells: [
      line.label,
      `±${limitWords(line.limit, line.unit)}`,
      line.distribution,
      ...cells(limitOf(line, state)),
      part(line.share),
    ],
  }))
  if (rest.length > 0) {
    const sum = rest.reduce((total, line) => total + limitOf(line, state), 0)
    const shares = rest.reduce((total, line) => total + line.share, 0)
    rows.push({ cells: [`All others, ${rest.length} lines`, '', '', ...cells(sum), part(shares)] })
  }
  return {
    columns: [
      { title: 'What varies', share: 30, strong: true },
      { title: 'Limit', share: 13, align: 'right' },
      { title: 'Distribution', share: 12 },
      { title: 'Converter', share: 13, align: 'right' },
      { title: 'LSB', share: 9, align: 'right' },
      { title: 'Of span', share: 11, align: 'right' },
      { title: 'Measurand', share: 14, align: 'right' },
      { title: 'Share', share: 10, align: 'right' },
    ],
    rows,
  }
}

/** The three states side by side in the measurand's unit, with where each is largest. */
export function toTotalsTable(budget: Budget, scale: Scale): Table {
  const states: ErrorState[] = ['asBuilt', 'zeroed', 'calibrated']
  const largest = Math.max(...states.map((s) => budget.totals[s].worst)) / scale.perQuantity
  return {
    columns: [
      { title: 'State', share: 22, strong: true },
      { title: 'Worst case', share: 16, align: 'right' },
      { title: 'Root sum of squares', share: 18, align: 'right' },
      { title: `Expanded, ${percent(budget.coverage)}`, share: 16, align: 'right' },
      { title: 'k', share: 8, align: 'right' },
      { title: 'LSB', share: 9, align: 'right' },
      { title: 'Of span', share: 11, align: 'right' },
      { title: 'Largest at', share: 22, align: 'right' },
    ],
    rows: states.map((state): Row => {
      const total = budget.totals[state]
      const measurand = (volts: number) => `±${sized(volts / scale.perQuantity, largest, scale.unit)}`
      return {
        total: budget.target?.state === state,
        cells: [
          stateWords[state],
          measurand(total.worst),
          measurand(total.rss),
          measurand(total.expanded),
          formatQuantity(total.k, '', { digits: 3 }),
          formatQuantity(total.expanded / scale.lsb, '', { digits: 2, rounding: 'outward' }),
          formatQuantity(total.expanded / scale.span, '', {
            digits: 2,
            display: 'percent',
            rounding: 'outward',
          }),
          `${figure(total.at, scale.unit)}, ${formatQuantity(total.temperature, '°C', { digits: 3 })}`,
        ],
      }
    }),
  }
}

const percent = (fraction: number): string => formatQuantity(fraction, '', { digits: 3, display: 'percent' })

export function toNoiseTable(noise: NoiseSummary): Table {
  const sorted = [...noise.lines].sort((a, b) => b.rms - a.rms).slice(0, 10)
  const largest = sorted[0]?.rms ?? 0
  return {
    columns: [
      { title: 'Source', share: 60, strong: true },
      { title: 'At the converter, rms', share: 22, align: 'right' },
      { title: 'Share', share: 18, align: 'right' },
    ],
    rows: sorted.map((line): Row => ({
      cells: [line.label, sized(line.rms, largest, 'V'), part(line.share)],
    })),
  }
}

export function toStabilityTable(entries: readonly StabilityEntry[]): Table {
  const degrees = (value: number | null) =>
    value === null ? NONE : formatQuantity(value, '°', { digits: 3, rounding: 'down' })
  return {
    columns: [
      { title: 'Amplifier', share: 18, strong: true },
      { title: 'Loop gain is one at', share: 24, align: 'right' },
      { title: 'Phase margin', share: 20, align: 'right' },
      { title: 'Worst over tolerance', share: 22, align: 'right' },
      { title: 'State', share: 16 },
    ],
    rows: entries.map((entry): Row => ({
      state: entry.state,
      cells: [
        entry.amplifier,
        entry.crossover === null ? 'never' : formatQuantity(entry.crossover, 'Hz', { digits: 3 }),
        degrees(entry.phaseMargin),
        degrees(entry.worst),
        '',
      ],
    })),
  }
}

export function toSectionsTable(filter: FilterPlan): Table {
  const of = (pair: { f0: number; q: number | null } | null): string =>
    pair === null
      ? NONE
      : pair.q === null
        ? formatQuantity(pair.f0, 'Hz', { digits: 4 })
        : `${formatQuantity(pair.f0, 'Hz', { digits: 4 })}, Q ${formatQuantity(pair.q, '', { digits: 4 })}`
  return {
    columns: [
      { title: 'Section', share: 14, strong: true },
      { title: 'Wanted', share: 26, align: 'right' },
      { title: 'By its values', share: 26, align: 'right' },
      { title: 'With the real amplifier', share: 26, align: 'right' },
    ],
    rows: filter.sections.map((s): Row => ({ cells: [s.ref, of(s.wanted), of(s.values), of(s.real)] })),
  }
}

export function toDriveTable(drive: Drive): Table {
  return {
    columns: [
      { title: 'Settled to', share: 30, strong: true },
      { title: 'Needs', share: 24, align: 'right' },
      { title: 'There is', share: 24, align: 'right' },
      { title: 'Met', share: 22 },
    ],
    rows: drive.criteria.map((c): Row => ({
      total: c.criterion === drive.criterion,
      cells: [
        formatQuantity(c.criterion, 'LSB', { digits: 3 }),
        c.needed === null ? 'never' : upward(c.needed, 's'),
        drive.available === null ? NONE : figure(drive.available, 's'),
        c.met === null ? 'not known' : c.met ? 'yes' : 'no',
      ],
    })),
  }
}

/** Differences run over many decades, and a plain number has no prefix to say so. */
const tiny = (value: number, unit: string): string => {
  const size = Math.abs(value)
  if (size === 0 || (unit !== '' && !/[/°]/.test(unit)) || size >= 1e-3) return upward(size, unit)
  const exponent = Math.floor(Math.log10(size))
  return `${upward(size / 10 ** exponent, '')}e${exponent} ${unit}`.replace('-', '−').trimEnd()
}

export function toCheckTable(check: IndependentCheck): Table {
  return {
    columns: [
      { title: 'What', share: 34, strong: true },
      { title: 'Here', share: 19, align: 'right' },
      { title: check.simulator, share: 19, align: 'right' },
      { title: 'Difference', share: 15, align: 'right' },
      { title: 'Allowed', share: 13, align: 'right' },
      { title: 'State', share: 11 },
    ],
    rows: check.lines.map((line): Row => ({
      state: line.ok ? 'clear' : 'over',
      cells: [
        line.what,
        formatQuantity(line.ours, line.unit, { digits: 7 }),
        formatQuantity(line.spice, line.unit, { digits: 7 }),
        tiny(line.difference, line.unit),
        tiny(line.allowed, line.unit),
        '',
      ],
    })),
  }
}

export function toSpreadTable(spread: Spread, unit: string): Table {
  const largest = Math.max(...spread.quantiles.map(([, error]) => Math.abs(error)))
  return {
    columns: [
      { title: 'Share of boards below', share: 50, strong: true },
      { title: 'Error of the reading', share: 50, align: 'right' },
    ],
    rows: spread.quantiles.map(([p, error]): Row => ({
      cells: [
        formatQuantity(p, '', { digits: 4, display: 'percent' }),
        `${error < 0 ? '−' : '+'}${sized(error, largest, unit)}`,
      ],
    })),
  }
}

/** "9 874 of 10 000 boards, 98.74 % (98.5 % to 98.9 % at 95 % confidence)". */
export function toYieldWords(spread: Spread): string | null {
  const { yield: y } = spread
  if (!y) return null
  const p = (x: number, rounding: 'up' | 'down' | 'nearest') =>
    formatQuantity(x, '', { digits: 4, display: 'percent', ...(rounding === 'nearest' ? {} : { rounding }) })
  return `${count(y.inside)} of ${count(spread.boards)} boards meet the target, ${p(y.share, 'down')} (${p(
    y.interval.low,
    'down',
  )} to ${p(y.interval.high, 'up')} at 95 % confidence)`
}
