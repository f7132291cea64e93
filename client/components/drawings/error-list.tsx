import { useMemo, useRef, type KeyboardEvent, type ReactNode } from 'react'
import { usePreferences } from '#client/lib/preferences.ts'
import { chartEnd, totalBar, type ErrorBar, type ErrorBars } from '#shared/drawings/error-chart.ts'
import { rect, line, type Shape } from '#shared/drawings/shapes.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import { Drawing, Shapes } from './shape-view.tsx'
import { useWidth } from './use-width.ts'

interface ErrorListProps {
  chart: ErrorBars
  unit: string
  label: string
  /** More about a term, beside its name. */
  details?(bar: ErrorBar): ReactNode
  /** Leads to what sets the term. */
  onOpen(bar: ErrorBar): void
}

type Rounding = 'nearest' | 'up' | 'down'

const ROW = { height: 12, bar: 9 } as const
/** The figure behind a bar with the gap before it, px. */
const MOST_FIGURE = 96

/**
 * Terms of the error, largest first, as a list: the name leads to what sets it, the bar is its standard uncertainty.
 * Below the rule the expanded uncertainty against the target, the difference hatched.
 */
export function ErrorList({ chart, unit, label, details, onOpen }: ErrorListProps) {
  const { decimalSign = '.' } = usePreferences()
  const list = useRef<HTMLUListElement>(null)
  const [holder, cell] = useWidth(MOST_FIGURE + 60, MOST_FIGURE + 420, MOST_FIGURE + 300)
  const width = cell - MOST_FIGURE
  const end = chartEnd(chart)
  const figure = (value: number) =>
    formatQuantity(value, unit, { digits: 3, rounding: 'outward', zeros: 'keep', decimalSign })
  /** What is left is never printed larger than it is, what is missing never smaller. */
  const gap = (value: number, rounding: Rounding) =>
    formatQuantity(value, unit, { digits: rounding === 'nearest' ? 4 : 3, rounding, decimalSign })
  const share = (value: number) => formatQuantity(value, '', { digits: 2, display: 'percent', decimalSign })

  const handleKey = (event: KeyboardEvent<HTMLUListElement>) => {
    const step = { ArrowDown: 1, ArrowUp: -1 }[event.key]
    if (step === undefined || !list.current) return
    const stops = [...list.current.querySelectorAll<HTMLElement>('.error-name')]
    const at = stops.indexOf(document.activeElement as HTMLElement)
    stops[Math.min(stops.length - 1, Math.max(0, at + step))]?.focus()
    event.preventDefault()
  }

  return (
    <div className="error-list">
      <div className="error-head" aria-hidden="true">
        <span>What varies</span>
        <span>Standard uncertainty</span>
        <span>Share of variance</span>
      </div>
      <ul ref={list} aria-label={label} onKeyDown={handleKey}>
        {chart.bars.map((bar) => (
          <li key={bar.id}>
            <span className="error-what">
              <button type="button" className="text-button error-name" onClick={() => onOpen(bar)}>
                {bar.label}
              </button>
              {details?.(bar)}
            </span>
            <Bar length={(width * bar.size) / end}>{figure(bar.size)}</Bar>
            <span className="error-share">{share(bar.share)}</span>
          </li>
        ))}
        {chart.others && (
          <li>
            <span className="error-what">All others, {chart.others.count} terms</span>
            <Bar length={(width * chart.others.size) / end}>{figure(chart.others.size)}</Bar>
            <span className="error-share">{share(chart.others.share)}</span>
          </li>
        )}
      </ul>
      <Total chart={chart} holder={holder} end={end} width={width} figure={figure} gap={gap} />
    </div>
  )
}

/** The figure stands at the bar's end. */
function Bar({ length, children }: { length: number; children: ReactNode }) {
  const width = Math.max(1, length)
  return (
    <span className="error-bar">
      <Drawing box={{ x: 0, y: 0, width, height: ROW.height }}>
        <Shapes shapes={[rect('bar', { x: 0, y: 1, width, height: ROW.bar })]} />
      </Drawing>
      <b>{children}</b>
    </span>
  )
}

interface TotalProps {
  chart: ErrorBars
  /** Measures the cell of a bar: the head above it is not there on a narrow page. */
  holder(node: HTMLElement | null): void
  end: number
  width: number
  figure(value: number): string
  gap(value: number, rounding: Rounding): string
}

function Total({ chart, holder, end, width, figure, gap }: TotalProps) {
  const shapes = useMemo(() => {
    const total = totalBar(chart, end)
    const list: Shape[] = [rect('bar-signal', { x: 0, y: 5, width: width * total.bar, height: ROW.bar })]
    if (total.gap && total.tick !== null) {
      const { from, to, over } = total.gap
      if (to > from)
        list.push(
          rect(over ? 'over' : 'room', {
            x: width * from,
            y: 5,
            width: width * (to - from),
            height: ROW.bar,
          }),
        )
      const tick = Math.min(width - 1, Math.max(1, width * total.tick))
      list.push(line('limit', tick, 0, tick, 19))
    }
    return list
  }, [chart, end, width])
  const { target, expanded } = chart
  return (
    <p className="error-total">
      <span className="error-what">Expanded uncertainty</span>
      <span className="error-bar" ref={holder}>
        <Drawing box={{ x: 0, y: 0, width, height: 19 }}>
          <Shapes shapes={shapes} />
        </Drawing>
        <b>{figure(expanded)}</b>
      </span>
      <span className="error-share">
        {target === null
          ? 'no target'
          : expanded <= target
            ? `${gap(target - expanded, 'down')} left of ${gap(target, 'nearest')}`
            : `${gap(expanded - target, 'up')} over ${gap(target, 'nearest')}`}
      </span>
    </p>
  )
}
