import { useId, useMemo, useState, type KeyboardEvent, type PointerEvent } from 'react'
import { ValueField } from '#client/components/value-field.tsx'
import { usePreferences } from '#client/lib/preferences.ts'
import {
  readTransfer,
  transferTable,
  type TransferInput,
  type TransferPoint,
} from '#shared/drawings/transfer-input.ts'
import { describeTransfer, layoutTransferPlot, type TransferDrawing } from '#shared/drawings/transfer-plot.ts'
import { formatNumber, formatQuantity, type DecimalSign } from '#shared/units/format-quantity.ts'
import { Drawing, Shapes } from './shape-view.tsx'
import { moveCursor } from './transfer-cursor.ts'

/** Transfer from measurand to converter input and code, with a cursor that keys, pointer and a field move. */
export function TransferPlot({ input }: { input: TransferInput }) {
  const id = useId()
  const { decimalSign = '.', letterKeys } = usePreferences()
  const [cursor, setCursor] = useState<number | null>(null)
  const [grid, setGrid] = useState(false)
  const drawing = useMemo(
    () => layoutTransferPlot(input, { cursor, grid, decimalSign }),
    [input, cursor, grid, decimalSign],
  )
  const point = cursor === null ? null : readTransfer(input, cursor)

  const handleKey = (event: KeyboardEvent<HTMLDivElement>) => {
    if (event.ctrlKey || event.altKey || event.metaKey) return
    const letter = letterKeys ? event.key.toLowerCase() : ''
    const moved = moveCursor(input, cursor, event.key, { fine: event.shiftKey, letters: letterKeys })
    if (moved !== null) setCursor(moved)
    else if (event.key === 'Escape' && cursor !== null) setCursor(null)
    else if (letter === 'g') setGrid(!grid)
    else if (letter === 't') document.getElementById(`${id}-table`)?.focus()
    else return
    event.preventDefault()
  }

  return (
    <figure className="d-figure" aria-labelledby={`${id}-title`}>
      <div className="d-head">
        <h2 id={`${id}-title`}>Transfer</h2>
        <figcaption className="d-caption">
          {input.quantity.name} to converter input and code; dashed is the highest and lowest board
        </figcaption>
      </div>
      <p className="d-sentence">{describeTransfer(input, decimalSign)}</p>
      <div className="d-transfer">
        <div>
          <div
            className="d-keys d-scroll"
            role="application"
            tabIndex={0}
            aria-roledescription="transfer plot"
            aria-label={`Transfer plot. ${describeTransfer(input, decimalSign)}`}
            aria-describedby={`${id}-keys`}
            onKeyDown={handleKey}
            onPointerDown={(event) => setCursor(quantityUnder(event, drawing))}
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
              unit={input.quantity.unit}
              value={cursor}
              width={12}
              onChange={(value) => setCursor(value)}
            />
            <p className="d-readout" aria-live="polite">
              {point ? <strong>{pointText(point, input.quantity.unit, decimalSign)}</strong> : null}
            </p>
          </div>
        </div>
        <table className="d-table" id={`${id}-table`} tabIndex={-1}>
          <caption>Transfer of the nominal board at eleven points</caption>
          <thead>
            <tr>
              <th scope="col">{input.quantity.name}</th>
              <th scope="col">Converter input</th>
              <th scope="col">Code</th>
            </tr>
          </thead>
          <tbody>
            {transferTable(input).map((row) => (
              <tr key={row.quantity}>
                <th scope="row">{formatQuantity(row.quantity, input.quantity.unit, { decimalSign })}</th>
                <td className={row.clipped ? 'd-is-over' : ''}>
                  {formatQuantity(row.volts, 'V', { decimalSign, zeros: 'keep' })}
                </td>
                <td className={row.clipped ? 'd-is-over' : ''}>
                  {formatNumber(row.code, { digits: 10, decimalSign })}
                  {row.clipped ? ' (past a limit)' : ''}
                </td>
              </tr>
            ))}
          </tbody>
        </table>
      </div>
    </figure>
  )
}

const arrowKeys =
  'Left and Right move the cursor by 1 % of the span, with Shift by 0.1 %, Home and End go to the ends, Escape leaves.'
const singleKeys = 'L next limit, G grid, T table.'

function pointText(point: TransferPoint, unit: string, decimalSign: DecimalSign): string {
  const volts = formatQuantity(point.volts, 'V', { decimalSign, zeros: 'keep' })
  const code = formatNumber(point.code, { digits: 10, decimalSign })
  const where = formatQuantity(point.quantity, unit, { decimalSign })
  return `At ${where}: ${volts}, code ${code}${point.clipped ? ', past a limit' : ''}`
}

function quantityUnder(event: PointerEvent<HTMLDivElement>, drawing: TransferDrawing): number | null {
  const svg = event.currentTarget.querySelector('svg')
  if (!svg) return null
  const box = svg.getBoundingClientRect()
  return drawing.quantityAt(((event.clientX - box.left) / box.width) * drawing.width)
}
