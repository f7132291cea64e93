import type { Ends } from '#shared/design/plan.ts'
import { formatQuantity, formatRange, formatRoom } from '#shared/units/format-quantity.ts'

/** Figures as a note prints them: levels with four digits, limits rounded inward, errors rounded up. */

export const NONE = '–'

/** A figure to four significant digits. */
export const figure = (value: number, unit: string): string => formatQuantity(value, unit, { digits: 4 })

/** An error or a load: two significant digits and never printed smaller than it is. */
export const upward = (value: number, unit: string): string =>
  formatQuantity(Math.abs(value), unit, { digits: 2, rounding: 'outward' })

/** A margin: never printed larger than it is, so a shortfall is rounded up. */
export const margin = (value: number, unit: string): string =>
  formatQuantity(value, unit, { digits: 3, rounding: 'down' })

export const range = (ends: Ends, unit: string): string =>
  formatRange(ends.low, ends.high, unit, { unitOnce: true })

/** Reached levels: never printed narrower than they are; one figure where both ends are the same. */
export function reached(ends: Ends, unit: string): string {
  const [low, high] = [Math.min(ends.low, ends.high), Math.max(ends.low, ends.high)]
  if (low === high) return formatQuantity(low, unit, { digits: 4, rounding: 'outward' })
  return formatRange(low, high, unit, { unitOnce: true, rounding: 'outward' })
}

/**
 * The size of a change with the prefix and the places of the largest one in its column, rounded up, so that figures
 * under each other can be compared at a glance.
 */
export function sized(value: number, largest: number, unit: string): string {
  const top = Math.max(Math.abs(value), Math.abs(largest))
  const text = formatRange(-Math.abs(value), top, unit, { digits: 4, rounding: 'outward', zeros: 'keep' })
  return (text.split(' to ')[0] ?? '').replace('−', '')
}

/** As `sized`, with its sign. */
export const signed = (value: number, largest: number, unit: string): string =>
  `${value > 0 ? '+' : value < 0 ? '−' : ''}${sized(value, largest, unit)}`

export const share = (fraction: number): string =>
  formatQuantity(fraction, '', { digits: 3, display: 'percent' })

export const room = (fraction: number): string => formatRoom(fraction)

/** Whole numbers keep all their digits: "57 838". */
export const count = (value: number): string => formatQuantity(Math.round(value), '', { digits: 12 })

/** "R1, R2 and R3" */
export function enumerate(items: readonly string[]): string {
  if (items.length < 2) return items.join('')
  return `${items.slice(0, -1).join(', ')} and ${items.at(-1) ?? ''}`
}

/** First letter in capitals, full stop at the end, as a sentence that stands alone. */
export function sentence(text: string): string {
  const trimmed = text.trim()
  const first = trimmed.charAt(0).toUpperCase() + trimmed.slice(1)
  return /[.!?]$/.test(first) ? first : `${first}.`
}

/** "Converter input" inside a sentence; designators keep their capitals. */
export const uncapital = (text: string): string =>
  /^[A-Z][a-z]|^A /.test(text) ? text.charAt(0).toLowerCase() + text.slice(1) : text
