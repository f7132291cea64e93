import { toCode } from '#shared/design/codes.ts'
import type { Candidate, Plan } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import { formatQuantity, formatRange } from '#shared/units/format-quantity.ts'
import { count } from './figures.ts'
import type { Row, Table } from './types.ts'

const STEPS = 10

/**
 * Eleven points along the nominal line: measurand, sensor output, converter input and code. The line through both
 * ends is exact for sensors that are straight between them.
 */
export function toTransferTable(design: Design, plan: Plan, candidate: Candidate): Table | null {
  const { realised } = candidate
  if (!realised) return null
  const { quantity } = design.sensor
  const along = (low: number, high: number, step: number) => low + ((high - low) * step) / STEPS
  const largest = Math.max(Math.abs(quantity.low), Math.abs(quantity.high))
  return {
    columns: [
      { title: quantity.name, share: 26, align: 'right', strong: true },
      { title: 'Sensor output', share: 26, align: 'right' },
      { title: 'Converter input', share: 26, align: 'right' },
      { title: 'Code', share: 22, align: 'right' },
    ],
    rows: Array.from({ length: STEPS + 1 }, (_, step): Row => {
      const volts = along(realised.converter.low, realised.converter.high, step)
      const value = along(quantity.low, quantity.high, step)
      return {
        cells: [
          // A rounding residue of the steps is no figure.
          formatQuantity(Math.abs(value) < largest * 1e-12 ? 0 : value, quantity.unit, { digits: 4 }),
          formatQuantity(
            clean(along(plan.required.sensor.low, plan.required.sensor.high, step), plan.required.sensor),
            plan.required.per,
            { digits: 4 },
          ),
          formatQuantity(volts, 'V', { digits: 5, zeros: 'keep' }),
          count(toCode(design.converter, volts)),
        ],
      }
    }),
  }
}

const clean = (value: number, ends: { low: number; high: number }): number =>
  Math.abs(value) < Math.max(Math.abs(ends.low), Math.abs(ends.high)) * 1e-12 ? 0 : value

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
