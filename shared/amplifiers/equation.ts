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

/** One leg of a network as it stands in an equation: a resistor, with the resistance before it written out. */
export interface Leg {
  symbolic: string
  numeric: string
  value: number
}

/** `before` Ω (source or reference) in series with a resistor; 0 leaves the resistor alone. */
export function leg(ref: string, value: number | undefined, before: number, name: 'Rsource' | 'Rref'): Leg {
  const own = value ?? 0
  if (before === 0) return { symbolic: ref, numeric: ohms(own), value: own }
  return { symbolic: `(${ref} + ${name})`, numeric: `(${ohms(own)} + ${ohms(before)})`, value: own + before }
}
