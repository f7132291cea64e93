import { scaleLinear, type ScaleLinear } from 'd3-scale'
import { spanText } from '#shared/note/answers.ts'
import { toLinearSpan, type Span } from '#shared/note/span.ts'
import { formatNumber, formatRange } from '#shared/units/format-quantity.ts'
import { usePlanner } from '../planner-context.tsx'

const WIDTH = 224
const MARGIN = 14

/** Required span above, linear span below it, on one scale of the measurand; what is short is solid minium. */
export function SpanRuler() {
  const { planning, candidate, quantity } = usePlanner()
  const { planned } = planning
  if (!planned || !candidate?.levels?.length) return null
  const { low, high } = planned.design.sensor.quantity
  const required = { low: Math.min(low, high), high: Math.max(low, high) }
  const worst = ordered(toLinearSpan(candidate.levels, planned.design.sensor.quantity, true))
  const size = required.high - required.low
  // Room far beyond the required span would press it into a corner: the ruler ends a third of it further.
  const reach = { low: required.low - size * 0.3, high: required.high + size * 0.3 }
  const linear = {
    low: Math.max(worst.low ?? -Infinity, reach.low),
    high: Math.min(worst.high ?? Infinity, reach.high),
  }
  const x = scaleLinear()
    .domain([Math.min(linear.low, required.low), Math.max(linear.high, required.high)])
    .range([MARGIN, WIDTH - MARGIN])
  const ticks = fittingTicks(x, quantity.unit)
  const direction = high >= low ? 1 : -1
  const label = `${quantity.name}: required ${formatRange(low, high, quantity.unit)}, linear on every board ${spanText(
    toLinearSpan(candidate.levels, planned.design.sensor.quantity, true),
    quantity.unit,
    direction,
  )}`
  const short: [number, number][] = [
    [required.low, linear.low],
    [linear.high, required.high],
  ]
  return (
    <svg className="span-ruler" viewBox={`0 0 ${WIDTH} 76`} role="img" aria-label={label}>
      <path d={`M${x(required.low)} 17H${x(required.high)}`} className="r-ink" />
      {[required.low, required.high].map((end) => (
        <path key={end} d={`M${x(end) - 3} 20l6-6`} className="r-oblique" />
      ))}
      <text x={x((required.low + required.high) / 2)} y="11" textAnchor="middle">
        required
      </text>
      <rect
        x={x(linear.low)}
        y="25"
        width={Math.max(0, x(linear.high) - x(linear.low))}
        height="15"
        className="r-wash"
      />
      {worst.low !== null && worst.low >= reach.low && (
        <path d={`M${x(linear.low)} 25v15`} className="r-level" />
      )}
      {worst.high !== null && worst.high <= reach.high && (
        <path d={`M${x(linear.high)} 25v15`} className="r-level" />
      )}
      {short.map(([from, to]) =>
        to > from ? (
          <rect key={from} x={x(from)} y="25" width={x(to) - x(from)} height="15" className="r-over" />
        ) : null,
      )}
      <text x={x((linear.low + linear.high) / 2)} y="36.5" textAnchor="middle" className="r-signal">
        linear, every board
      </text>
      <path d={`M${MARGIN - 5} 52H${WIDTH - MARGIN + 5}`} className="r-ink" />
      {ticks.map((tick, index) => (
        <g key={tick}>
          <path d={`M${x(tick)} 49v6`} className="r-ink" />
          <text x={x(tick)} y="68" textAnchor="middle">
            {formatNumber(tick)}
            {index === ticks.length - 1 ? ` ${quantity.unit}` : ''}
          </text>
        </g>
      ))}
    </svg>
  )
}

/** As many round ticks as have room for their figures; the last one carries the unit. */
function fittingTicks(x: ScaleLinear<number, number>, unit: string): number[] {
  for (const count of [5, 4, 3, 2]) {
    const ticks = x.ticks(count)
    const widths = ticks.map(
      (tick, i) => (formatNumber(tick) + (i === ticks.length - 1 ? ` ${unit}` : '')).length * 5.6,
    )
    const fits = ticks.every((tick, i) => {
      const next = ticks[i + 1]
      return next === undefined || x(next) - x(tick) > ((widths[i] ?? 0) + (widths[i + 1] ?? 0)) / 2 + 4
    })
    if (fits) return ticks
  }
  return x.ticks(1)
}

function ordered({ low, high }: Span): Span {
  return low !== null && high !== null && low > high ? { low: high, high: low } : { low, high }
}
