import { toFixedText } from './decimal.ts'
import { formatEditable, type DecimalSign } from './format-quantity.ts'
import { isFormula, parseQuantity } from './parse-quantity.ts'

export interface StepOptions {
  unit: string
  /** 1 up, −1 down. */
  direction: 1 | -1
  /** Ten times as far. */
  large?: boolean
  /** Ascending list to walk along in a field for a part's value, in SI units. */
  standard?: readonly number[]
  display?: 'percent' | 'plain'
  decimalSign?: DecimalSign
}

export interface Step {
  text: string
  value: number
}

/**
 * One step up or down from what stands in a field: to the next standard value where a list is given, by one in the
 * last shown digit elsewhere. `4k7` goes to `4k8`, `0.350` to `0.351`. Returns null where nothing readable stands.
 * `value` is the field's value in SI units; it is used where the text is a formula.
 */
export function stepQuantity(text: string, value: number | null, options: StepOptions): Step | null {
  const { unit, display, decimalSign } = options
  const format = { ...(display ? { display } : {}), ...(decimalSign ? { decimalSign } : {}) }
  const shown = isFormula(text) && value !== null ? formatEditable(value, unit, format) : text
  const current = parseQuantity(shown, { unit, ...format })
  if (!current.ok) return null
  if (options.standard) return stepStandard(current.value, options.standard, options, format)
  const stepped = stepDigits(shown, options.direction * (options.large ? 10 : 1))
  if (stepped === null) return null
  const read = parseQuantity(stepped, { unit, ...format })
  return read.ok ? { text: stepped, value: read.value } : null
}

/** Next value of the list beyond the present one; ten further with `large`; stays within the list. */
function stepStandard(
  value: number,
  standard: readonly number[],
  { direction, large, unit }: StepOptions,
  format: Pick<StepOptions, 'display' | 'decimalSign'>,
): Step | null {
  const near = (a: number) => Math.abs(a - value) <= Math.abs(value) * 1e-9
  const above = standard.findIndex((v) => v > value && !near(v))
  const first = above === -1 ? standard.length : above
  const below = standard[first - 1] !== undefined && near(standard[first - 1] ?? 0) ? first - 2 : first - 1
  const start = direction === 1 ? first : below
  const index = Math.min(standard.length - 1, Math.max(0, start + (large ? 9 * direction : 0)))
  const next = standard[index]
  return next === undefined ? null : { text: formatEditable(next, unit, format), value: next }
}

/** Adds `by` units of the last digit, leaving sign, code letter, prefix and unit as they stand. */
function stepDigits(text: string, by: number): string | null {
  const match = /^(\s*)([-+−]?)(\s*)(\d[\d\s]*\d|\d*)(?:([.,]|[A-Za-zμµ](?=\d))(\d*))?(\D.*)?$/.exec(text)
  if (!match) return null
  const [, lead = '', sign = '', , head = '', mark = '', fraction = '', tail = ''] = match
  const whole = head.replace(/\s/g, '')
  if (whole + fraction === '') return null
  const negative = sign === '-' || sign === '−'
  const next = (negative ? -1 : 1) * Number(`${whole}${fraction}`) + by
  const digits = toFixedText(Math.abs(next), 0).padStart(fraction.length + (whole === '' ? 0 : 1), '0')
  const point = digits.length - fraction.length
  const body = mark === '' ? digits : `${digits.slice(0, point)}${mark}${digits.slice(point)}`
  const minus = next < 0 ? (sign === '-' ? '-' : '−') : ''
  return `${lead}${minus}${body}${tail}`
}
