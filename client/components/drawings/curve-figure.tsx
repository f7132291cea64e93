import {
  useId,
  useMemo,
  useRef,
  useState,
  type KeyboardEvent,
  type PointerEvent,
  type ReactNode,
} from 'react'
import { ValueField } from '#client/components/value-field.tsx'
import { withPower } from '#client/lib/powers.ts'
import { usePreferences } from '#client/lib/preferences.ts'
import type { NamedPlot } from '#shared/drawings/curve-inputs.ts'
import {
  curveTable,
  layoutCurvePlot,
  readCurves,
  type CurveDrawing,
  type CurvePlot,
  type CurveReading,
} from '#shared/drawings/curve-plot.ts'
import { formatQuantity, type DecimalSign } from '#shared/units/format-quantity.ts'
import { moveAcross } from './curve-cursor.ts'
import { Drawing, Shapes } from './shape-view.tsx'
import { useWidth } from './use-width.ts'

interface CurveFigureProps {
  title: string
  caption: string
  named: NamedPlot
  /** More below the drawing. */
  children?: ReactNode
}

const NARROWEST = 280
const WIDEST = 720

/** Curves with a cursor that keys, pointer and a field move, and the table that says the same. */
export function CurveFigure({ title, caption, named: { plot, sentence }, children }: CurveFigureProps) {
  const id = useId()
  const { decimalSign = '.', letterKeys } = usePreferences()
  const [cursor, setCursor] = useState<number | null>(null)
  const [grid, setGrid] = useState(false)
  const [holder, width] = useWidth(NARROWEST, WIDEST, 560)
  const table = useRef<HTMLDetailsElement>(null)
  const drawing = useMemo(
    () => layoutCurvePlot(plot, { cursor, grid, decimalSign, width }),
    [plot, cursor, grid, decimalSign, width],
  )

  const handleKey = (event: KeyboardEvent<HTMLDivElement>) => {
    if (event.ctrlKey || event.altKey || event.metaKey) return
    const letter = letterKeys ? event.key.toLowerCase() : ''
    const moved = moveAcross(plot, cursor, event.key, { fine: event.shiftKey, letters: letterKeys })
    if (moved !== null) setCursor(moved)
    else if (event.key === 'Escape' && cursor !== null) setCursor(null)
    else if (letter === 'g') setGrid(!grid)
    else if (letter === 't' && table.current) {
      table.current.open = true
      table.current.querySelector('summary')?.focus()
    } else return
    event.preventDefault()
  }

  return (
    <figure className="d-figure" aria-labelledby={`${id}-title`}>
      <div className="d-head">
        <h3 id={`${id}-title`}>{title}</h3>
        <figcaption className="d-caption">{caption}</figcaption>
      </div>
      <p className="d-sentence">{sentence}</p>
      <div ref={holder} className="d-curves">
        <div
          className="d-keys"
          role="application"
          tabIndex={0}
          aria-roledescription="plot"
          aria-label={`${title}. ${sentence}`}
          aria-describedby={`${id}-keys`}
          onKeyDown={handleKey}
          onPointerDown={(event) => setCursor(placeUnder(event, drawing))}
        >
          <Drawing box={{ x: 0, y: 0, width: drawing.width, height: drawing.height }}>
            <Shapes shapes={drawing.shapes} />
          </Drawing>
        </div>
        <p className="d-hidden" id={`${id}-keys`}>
          {letterKeys ? `${arrowKeys} ${singleKeys}` : arrowKeys}
        </p>
        <div className="d-read">
          <ValueField
            label="Read at"
            unit={plot.across.unit}
            value={cursor}
            width={12}
            onChange={(value) => setCursor(value)}
          />
          <p className="d-readout" aria-live="polite">
            {cursor === null ? null : <strong>{readingText(plot, cursor, decimalSign)}</strong>}
          </p>
        </div>
      </div>
      {children}
      <details ref={table} className="d-fold">
        <summary>The same as a table</summary>
        <CurveTable plot={plot} caption={title} decimalSign={decimalSign} />
      </details>
    </figure>
  )
}

const arrowKeys =
  'Left and Right move the cursor by 1 % of the axis, with Shift by 0.1 %, Home and End go to its ends, Escape leaves.'
const singleKeys = 'L next mark, G grid, T table.'

function CurveTable({
  plot,
  caption,
  decimalSign,
}: {
  plot: CurvePlot
  caption: string
  decimalSign: DecimalSign
}) {
  const rows = curveTable(plot)
  const heads = rows[0]?.readings ?? []
  return (
    <div className="d-scroll" role="region" aria-label={`Table of ${caption}`} tabIndex={0}>
      <table className="d-table">
        <caption>{caption}</caption>
        <thead>
          <tr>
            <th scope="col">{plot.across.name}</th>
            {heads.map((reading, i) => (
              <th key={i} scope="col">
                {headOf(heads, i)}
              </th>
            ))}
          </tr>
        </thead>
        <tbody>
          {rows.map((row) => (
            <tr key={`${row.at} ${row.words ?? ''}`}>
              <th scope="row">
                {row.words ?? formatQuantity(row.at, plot.across.unit, { digits: 3, decimalSign })}
              </th>
              {row.readings.map((reading, i) => (
                <td key={i}>{figureOf(reading, decimalSign)}</td>
              ))}
            </tr>
          ))}
        </tbody>
      </table>
    </div>
  )
}

/** Two limits of the same name are told apart as the lower and the upper one. */
function headOf(heads: readonly CurveReading[], index: number): string {
  const name = heads[index]?.name ?? ''
  const same = heads.flatMap((head, i) => (head.name === name ? [i] : []))
  if (same.length < 2) return name
  return `${name}, ${same[0] === index ? 'lowest' : 'highest'}`
}

const figureOf = ({ value, unit }: CurveReading, decimalSign: DecimalSign): string =>
  value === null ? '–' : withPower(formatQuantity(value, unit, { digits: 3, decimalSign }))

function readingText(plot: CurvePlot, cursor: number, decimalSign: DecimalSign): string {
  const heads = readCurves(plot, cursor)
  const parts = heads.map((reading, i) => `${headOf(heads, i)} ${figureOf(reading, decimalSign)}`)
  return `At ${formatQuantity(cursor, plot.across.unit, { digits: 4, decimalSign })}: ${parts.join(', ')}`
}

function placeUnder(event: PointerEvent<HTMLDivElement>, drawing: CurveDrawing): number | null {
  const svg = event.currentTarget.querySelector('svg')
  if (!svg) return null
  const box = svg.getBoundingClientRect()
  return drawing.across(((event.clientX - box.left) / box.width) * drawing.width)
}
