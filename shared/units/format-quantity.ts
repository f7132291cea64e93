import { decimalsFor, toExactText, toFixedText, trimZeros, type Rounding } from './decimal.ts'
import { prefixSymbol } from './prefixes.ts'
import { printedPrefixes } from './unit-names.ts'

/**
 * How quantities are written: ISO 80000-1 and NIST SP 811. A space between number and unit, a true minus, groups of
 * three digits parted by a space (four stay together), the decimal sign of the reader's choice. The space is U+00A0,
 * so that a number never parts from its unit at the end of a line.
 */

export type DecimalSign = '.' | ','

export interface FormatOptions {
  /** Significant digits, 4 where not given. */
  digits?: number
  /** `down` and `up` towards −∞ and +∞, `inward` towards zero, `outward` away from it. */
  rounding?: Rounding
  /** `keep` prints all significant digits, `trim` (as usual) drops zeros at the end. */
  zeros?: 'keep' | 'trim'
  decimalSign?: DecimalSign
  /** A ratio that is printed in per cent: 0.05 is "5 %". */
  display?: 'percent' | 'plain'
}

const SPACE = '\u00a0'
const UNKNOWN = 'not known'

/**
 * A value in `unit` (SI, or the measurand's own) as text: `formatQuantity(4700, 'Ω')` is "4.7 kΩ".
 * A unit of '%' is taken as it stands (50 is "50 %"); `display: 'percent'` multiplies a ratio by 100.
 * NaN and infinities give "not known".
 */
export function formatQuantity(value: number, unit: string, options: FormatOptions = {}): string {
  if (!Number.isFinite(value)) return UNKNOWN
  const scale = scaleFor(Math.abs(value), unit, options)
  const decimals = decimalsFor(value, options.digits ?? 4, scale.exponent)
  const text = toFixedText(value, decimals, options.rounding, scale.exponent)
  return withUnit(finish(options.zeros === 'keep' ? text : trimZeros(text), options), scale.unit)
}

/** A number without unit, four significant digits unless stated: "57 838" needs `digits: 5`. */
export function formatNumber(value: number, options: FormatOptions = {}): string {
  return formatQuantity(value, '', options)
}

export interface RangeOptions extends Omit<FormatOptions, 'rounding'> {
  /** "−0.20 to 10.40 mV" instead of the unit behind each end, for tables. */
  unitOnce?: boolean
  /** `inward` never prints a range wider than it is, `outward` never narrower. */
  rounding?: 'nearest' | 'inward' | 'outward'
}

/**
 * A range with one prefix and the same number of decimal places at both ends: "−0.10 m to 5.20 m".
 * Digits are those of the end that is larger in magnitude.
 */
export function formatRange(low: number, high: number, unit: string, options: RangeOptions = {}): string {
  if (!Number.isFinite(low) || !Number.isFinite(high)) return UNKNOWN
  const largest = Math.max(Math.abs(low), Math.abs(high))
  const scale = scaleFor(largest, unit, options)
  const decimals = decimalsFor(largest, options.digits ?? 4, scale.exponent)
  const inward = options.rounding === 'inward'
  const sides: [Rounding, Rounding] =
    options.rounding === undefined || options.rounding === 'nearest'
      ? ['nearest', 'nearest']
      : inward === low <= high
        ? ['up', 'down']
        : ['down', 'up']
  const texts = [
    toFixedText(low, decimals, sides[0], scale.exponent),
    toFixedText(high, decimals, sides[1], scale.exponent),
  ]
  const shown = (options.zeros === 'keep' ? texts : trimTogether(texts)).map((t) =>
    finish(/^-?0(\.0+)?$/.test(t) ? '0' : t, options),
  )
  const [first = '', last = ''] = shown
  return `${options.unitOnce ? first : withUnit(first, scale.unit)} to ${withUnit(last, scale.unit)}`
}

/**
 * A figure against the one it is held to, with one prefix: "12 of 15 mm". Both are rounded in the same direction, the
 * first to `digits` significant digits (2).
 */
export function formatOf(value: number, whole: number, unit: string, options: FormatOptions = {}): string {
  if (!Number.isFinite(value) || !Number.isFinite(whole)) return UNKNOWN
  const scale = scaleFor(Math.max(Math.abs(value), Math.abs(whole)), unit, options)
  const text = (figure: number, decimals: number) =>
    toFixedText(figure, decimals, options.rounding, scale.exponent)
  const decimals = decimalsFor(value, options.digits ?? 2, scale.exponent)
  const held = trimZeros(text(whole, decimalsFor(whole, Math.max(4, options.digits ?? 2), scale.exponent)))
  return `${finish(text(value, decimals), options)} of ${withUnit(finish(held, options), scale.unit)}`
}

/**
 * Room as a share of the linear region, one decimal of a per cent and never better than it is:
 * 0.0568 is "5.6 %", −0.0341 is "3.5 % over".
 */
export function formatRoom(fraction: number, decimalSign: DecimalSign = '.'): string {
  if (!Number.isFinite(fraction)) return UNKNOWN
  const text = toFixedText(fraction, 1, 'down', -2)
  const over = text.startsWith('-')
  return `${finish(over ? text.slice(1) : text, { decimalSign })}${SPACE}%${over ? ' over' : ''}`
}

/**
 * What a field shows for a stored value: exact, with a prefix letter but without the unit, so that it can be edited
 * and reads back as the same double. `formatEditable(4700, 'Ω')` is "4.7 k", 0.001 in per cent is "0.1".
 */
export function formatEditable(
  value: number,
  unit: string,
  options: Pick<FormatOptions, 'decimalSign' | 'display'> = {},
): string {
  if (!Number.isFinite(value)) return ''
  const percent = options.display === 'percent'
  if (!percent && unit.startsWith('1/') && value !== 0 && Math.abs(value) < PPM_LIMIT) {
    return `${sign(toExactText(value, -6), options.decimalSign)}${SPACE}ppm`
  }
  const exponent = percent ? -2 : editableExponent(Math.abs(value), unit)
  const text = sign(toExactText(value, exponent), options.decimalSign)
  return percent || exponent === 0 ? text : `${text}${SPACE}${prefixSymbol(exponent)}`
}

/** A rate of change per kelvin or year: ppm where it is small. */
const PPM_LIMIT = 1e-3

/** These read better without a prefix down to a tenth: "0.4625 V", "0.47 Ω". */
const plainFromTenth = new Set(['Ω', 'V', 's', 'm'])

interface Scale {
  exponent: number
  unit: string
}

function scaleFor(magnitude: number, unit: string, options: FormatOptions): Scale {
  if (options.display === 'percent') return { exponent: -2, unit: '%' }
  if (unit === 'V/s' && magnitude >= 1e4) return { exponent: 6, unit: 'V/μs' }
  if (unit.startsWith('1/')) {
    const small = magnitude > 0 && magnitude < PPM_LIMIT
    return small ? { exponent: -6, unit: `ppm/${unit.slice(2)}` } : { exponent: 0, unit }
  }
  if (unit === 'V/V') return { exponent: 0, unit: '' }
  const exponent = engineeringExponent(magnitude, unit, options.digits ?? 4)
  return { exponent, unit: `${prefixSymbol(exponent)}${unit}` }
}

/** Multiple of three that leaves 1 to 999 before the prefix, within the prefixes that the unit is printed with. */
function engineeringExponent(magnitude: number, unit: string, digits: number): number {
  const printed = printedPrefixes(unit)
  if (printed === null || magnitude === 0) return 0
  if (plainFromTenth.has(unit.split('/')[0] ?? '') && magnitude >= 0.1 && magnitude < 999.5) return 0
  const rounded = Number(magnitude.toPrecision(Math.min(15, Math.max(1, digits))))
  const exponent = Math.floor(Math.floor(Number(rounded.toExponential().split('e')[1])) / 3) * 3
  return Math.min(printed[1], Math.max(printed[0], exponent))
}

/** As above; a field has no need of the limits that printing keeps. */
function editableExponent(magnitude: number, unit: string): number {
  if (unit.split('/')[0] === 'm') return 0
  if (unit === 'Ω or F') return engineeringExponent(magnitude, magnitude >= 1 ? 'Ω' : 'F', 15)
  const exponent = engineeringExponent(magnitude, unit, 15)
  return exponent > 0 ? engineeringExponent(magnitude, 'Hz', 15) : exponent
}

function trimTogether(texts: string[]): string[] {
  let kept = texts
  while (kept.every((t) => t.includes('.') && /[.0]$/.test(t))) {
    const point = kept.some((t) => t.endsWith('.'))
    kept = kept.map((t) => t.slice(0, -1))
    if (point) break
  }
  return kept.map((t) => t.replace(/\.$/, ''))
}

function finish(text: string, options: FormatOptions): string {
  return sign(group(text), options.decimalSign)
}

function sign(text: string, decimalSign: DecimalSign = '.'): string {
  return text.replace('-', '−').replace('.', decimalSign)
}

/** Groups of three on both sides of the decimal sign; four digits stay together. */
function group(text: string): string {
  const [, minus = '', whole = '', fraction] = /^(-?)(\d+)(?:\.(\d+))?$/.exec(text) ?? []
  const left = whole.length > 4 ? whole.replace(/\B(?=(\d{3})+$)/g, SPACE) : whole
  if (fraction === undefined) return `${minus}${left}`
  const right = fraction.length > 4 ? fraction.replace(/(\d{3})(?=\d)/g, `$1${SPACE}`) : fraction
  return `${minus}${left}.${right}`
}

function withUnit(number: string, unit: string): string {
  if (unit === '') return number
  return unit === '°' ? `${number}°` : `${number}${SPACE}${unit}`
}
