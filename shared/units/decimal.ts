/**
 * Decimal text arithmetic: shifting a point and rounding in a stated direction on the digits themselves, so that
 * 0.3 never becomes 0.2999 when it is rounded down and 4.7 k is exactly 4700.
 */

export type Rounding = 'nearest' | 'down' | 'up' | 'inward' | 'outward'

interface Digits {
  negative: boolean
  /** Significant digits without leading or trailing zeros; '' for zero. */
  digits: string
  /** Power of ten of the first digit. */
  exponent: number
}

/** Digits of a finite number: the shortest text that reads back as the same double, or 15 significant ones. */
export function toDigits(value: number, precision?: number): Digits {
  const text = precision === undefined ? value.toExponential() : value.toExponential(precision - 1)
  const [mantissa = '0', exponent = '0'] = text.split('e')
  const digits = mantissa.replace(/[-.]/g, '').replace(/0+$/, '')
  return { negative: value < 0, digits, exponent: digits === '' ? 0 : Number(exponent) }
}

/**
 * The number as plain decimal text, `-` for a minus and `.` for the decimal sign, after multiplication by
 * 10^−shift and rounding to `decimals` places.
 * `down` and `up` go towards −∞ and +∞, `inward` towards zero, `outward` away from it.
 * Rounding works on 15 significant digits: what lies beyond is noise of the binary form, not part of the figure.
 */
export function toFixedText(
  value: number,
  decimals: number,
  rounding: Rounding = 'nearest',
  shift = 0,
): string {
  const { negative, digits, exponent } = toDigits(value, 15)
  if (digits === '') return (0).toFixed(Math.max(0, decimals))
  // Digits are an integer D with value D · 10^power after the shift.
  const power = exponent - shift - (digits.length - 1)
  const drop = -power - decimals
  let whole = BigInt(digits)
  if (drop > 0) {
    const unit = 10n ** BigInt(drop)
    const rest = whole % unit
    whole = whole / unit
    if (roundsAway(rest, unit, negative, rounding)) whole += 1n
  } else {
    whole *= 10n ** BigInt(-drop)
  }
  const text = whole.toString().padStart(decimals + 1, '0')
  const point = text.length - decimals
  const body = decimals > 0 ? `${text.slice(0, point)}.${text.slice(point)}` : text
  return negative && whole !== 0n ? `-${body}` : body
}

/** Decimal places that leave `significant` digits of the value divided by 10^shift, never below zero. */
export function decimalsFor(value: number, significant: number, shift = 0): number {
  const { digits, exponent } = toDigits(value, Math.min(15, Math.max(1, significant)))
  return digits === '' ? 0 : Math.max(0, significant - 1 - (exponent - shift))
}

/** The exact shortest text of the value divided by 10^shift, without exponent. */
export function toExactText(value: number, shift = 0): string {
  const { negative, digits, exponent } = toDigits(value)
  if (digits === '') return '0'
  const point = exponent - shift + 1
  const body =
    point <= 0
      ? `0.${'0'.repeat(-point)}${digits}`
      : point >= digits.length
        ? digits.padEnd(point, '0')
        : `${digits.slice(0, point)}.${digits.slice(point)}`
  return negative ? `-${body}` : body
}

/** Drops zeros at the end of the decimal places. */
export function trimZeros(text: string): string {
  return text.includes('.') ? text.replace(/\.?0+$/, '') : text
}

function roundsAway(rest: bigint, unit: bigint, negative: boolean, rounding: Rounding): boolean {
  if (rest === 0n) return false
  if (rounding === 'nearest') return rest * 2n >= unit
  if (rounding === 'outward') return true
  if (rounding === 'inward') return false
  return rounding === 'up' ? !negative : negative
}
