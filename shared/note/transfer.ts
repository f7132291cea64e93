import type { Candidate, Plan } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import { transferOf, transferTable } from '#shared/drawings/transfer-input.ts'
import { formatQuantity, formatRange } from '#shared/units/format-quantity.ts'
import { count, figure } from './figures.ts'
import type { Row, Table } from './types.ts'

/**
 * Eleven points along the nominal line: measurand, sensor output, converter input and code. The line through both
 * ends is exact for sensors that are straight between them.
 */
export function toTransferTable(design: Design, plan: Plan, candidate: Candidate): Table | null {
  const { quantity } = design.sensor
  const input = transferOf(candidate, quantity, design.converter)
  if (!input) return null
  const { low, high } = plan.required.sensor
  const largest = Math.max(Math.abs(low), Math.abs(high))
  return {
    columns: [
      { title: quantity.name, share: 26, align: 'right', strong: true },
      { title: 'Sensor output', share: 26, align: 'right' },
      { title: 'Converter input', share: 26, align: 'right' },
      { title: 'Code', share: 22, align: 'right' },
    ],
    rows: transferTable(input).map((point): Row => {
      const along = (point.quantity - quantity.low) / (quantity.high - quantity.low)
      const output = low + (high - low) * along
      return {
        cells: [
          figure(point.quantity, quantity.unit),
          // A rounding residue of the steps is no figure.
          figure(Math.abs(output) < largest * 1e-12 ? 0 : output, plan.required.per),
          formatQuantity(point.volts, 'V', { digits: 5, zeros: 'keep' }),
          count(point.code),
        ],
      }
    }),
  }
}

export function toTransferSentence(design: Design, candidate: Candidate): string {
  const { realised } = candidate
  if (!realised) return ''
  const { quantity } = design.sensor
  const gain = formatQuantity(realised.gain, '', { digits: 5 })
  const offset = formatQuantity(realised.offset, 'V', { digits: 4 })
  return (
    `From ${formatRange(quantity.low, quantity.high, quantity.unit)} the converter input goes from ` +
    `${formatRange(realised.converter.low, realised.converter.high, 'V', { digits: 5 })}, ` +
    `code ${count(realised.codes.low)} to ${count(realised.codes.high)}; gain ${gain} V/${realised.per}, offset ${offset}.`
  )
}
