import type { Equation } from '#shared/design/plan.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'

/** Resistance as printed inside an equation. */
export const ohms = (value: number | undefined): string => formatQuantity(value ?? 0, 'Ω', { digits: 5 })

export const voltsText = (value: number): string => formatQuantity(value, 'V', { digits: 5 })

const plain = (value: number): string => formatQuantity(value, '', { digits: 6 })

/** Gain and offset with their symbols and with the numbers put in; figures are of the ideal model. */
export function gainAndOffset(
  gain: { symbolic: string; numeric: string; value: number },
  offset: { symbolic: string; numeric: string; value: number },
): Equation[] {
  return [
    { name: 'Gain', symbolic: `G = ${gain.symbolic}`, numeric: `G = ${gain.numeric} = ${plain(gain.value)}` },
    {
      name: 'Offset',
      symbolic: `b = ${offset.symbolic}`,
      numeric: `b = ${offset.numeric} = ${voltsText(offset.value)}`,
    },
  ]
}

export const noOffset = { symbolic: '0', numeric: '0', value: 0 }
