import { formatQuantity, type DecimalSign } from './format-quantity.ts'
import { normalise, readNumber } from './number-text.ts'
import { prefixExponent, prefixSymbol } from './prefixes.ts'
import { codeExponent, toleranceOf, type CodedUnit } from './rkm.ts'
import { measuredBy, suffixExponent, takesBarePrefix, unitSpelledBy } from './unit-names.ts'

/**
 * Reading of numbers as engineers write them: `4k7`, `4.7 kΩ`, `4,7k`, `22m`, `462m5`, `4.625e-1`, with codes and
 * tolerance letters of IEC 60062. Nothing is guessed: what can be read in two ways is handed back with both readings.
 */

export interface ParseOptions {
  /** SI unit or the measurand's own, '' for a plain ratio. */
  unit: string
  /** The person's decimal sign. Where it is not known, `1,000` is a question. */
  decimalSign?: DecimalSign
  /** `percent`: the number typed is in per cent, the value a fraction. */
  display?: 'percent' | 'plain'
}

export interface Choice {
  label: string
  value: number
  /** The decimal sign that this answer stands for, where that was the question. */
  decimalSign?: DecimalSign
}

export type ParsedQuantity =
  | { ok: true; value: number; readAs: string; tolerance?: number }
  | { ok: false; reason: string; accepted: string; choices?: Choice[] }

/** True for `=2*24k9/499R+1`, which `parseFormula` reads. */
export const isFormula = (text: string): boolean => text.trimStart().startsWith('=')

/**
 * Value of the text in the SI unit (or in the unit as given where it is not an SI one), with the sentence that shows
 * how it was read; or why it could not be read, what is accepted and, where it can be read in two ways, both.
 * Never throws.
 */
export function parseQuantity(text: string, options: ParseOptions): ParsedQuantity {
  const source = normalise(text)
  if (source === '') return refuse('Nothing is typed yet.', options)
  if (source.startsWith('=')) return refuse('Arithmetic after “=” is worked out separately.', options)
  return readToleranced(source, options) ?? readCode(source, options) ?? readPlain(source, options)
}

/** What a field accepts, with examples in its unit. */
export function acceptedFor({ unit, display }: ParseOptions): string {
  if (display === 'percent') return 'a number in per cent, such as 0.1 or 0.1 %'
  const examples: Record<string, string> = {
    Ω: '4k7, 4.7 kΩ or 4700',
    F: '4n7, 4.7 nF or 10p',
    V: '0.35, 350 mV or 22m',
    A: '20m, 20 mA or 0.02',
    Hz: '100, 10k or 10 MHz',
    s: '2u5, 2.5 μs or 10m',
    '1/K': '25 ppm/K or 2.5e-5',
  }
  const example = examples[unit]
  if (example) return `a number such as ${example}`
  return unit === '' || unit === 'V/V' ? 'a number such as 3.75' : `a number in ${unit}, such as 5.2`
}

/** A tolerance in per cent behind a part's value: `4k7 1 %`, `4.7 kΩ ±0.1 %`. */
function readToleranced(source: string, options: ParseOptions): ParsedQuantity | null {
  const [, head = '', figure = ''] = /^(.*\S)\s+±?\s*(\d+(?:[.,]\d+)?)\s*%$/.exec(source) ?? []
  if (!coded(options.unit) || figure === '') return null
  const read = parseQuantity(head, options)
  return read.ok ? accept(read.value, options, Number(`${figure.replace(',', '.')}e-2`)) : read
}

const CODE = /^([-+]?)(\d*)([A-Za-zμ])(\d*)\s*(.*)$/

/**
 * A letter in place of the decimal sign. Returns null where the text is no code, so that it is read as a plain number.
 * A letter at the end, as in `10K`, is a code only where a tolerance letter or a unit follows after a space.
 */
function readCode(source: string, options: ParseOptions): ParsedQuantity | null {
  if (options.display === 'percent') return null
  const match = CODE.exec(source)
  if (!match) return null
  const [, minus = '', whole = '', letter = '', fraction = '', rest = ''] = match
  if (whole + fraction === '') return null
  if (/^[eE]$/.test(letter) && whole !== '' && fraction !== '' && rest === '') return null
  const spaced = /\s/.test(source.slice(minus.length + whole.length + 1 + fraction.length))
  const toleranced = fraction !== '' || (whole !== '' && spaced && rest !== '')
  if (!toleranced) return null
  const exponents = letterExponents(letter, options.unit)
  const [exponent] = exponents
  if (exponent === undefined) return null
  const number = (power: number) =>
    Number(`${minus === '-' ? '-' : ''}${whole || '0'}.${fraction || '0'}e${power}`)
  if (exponents.length > 1) {
    return twoWays(
      source,
      options,
      exponents.map((e) => choice(number(e), options)),
    )
  }
  if (rest === '' || isOwnUnit(rest, options.unit)) return accept(number(exponent), options)
  const tolerance = coded(options.unit) ? toleranceOf(rest) : null
  if (tolerance !== null && (fraction !== '' || spaced)) return accept(number(exponent), options, tolerance)
  if (fraction === '') return null
  return unreadable(source, rest, number(exponent), options)
}

/** Exponents that a letter inside a number may stand for; two where the letter is both a prefix and the unit. */
function letterExponents(letter: string, unit: string): number[] {
  if (coded(unit)) {
    const own = codeExponent(letter, unit) ?? prefixExponent(letter)
    return own === null ? [] : [own]
  }
  const asPrefix = takesBarePrefix(unit) ? prefixExponent(letter) : null
  const asUnit = letter === unit ? 0 : null
  return [asUnit, asPrefix].filter((e) => e !== null)
}

function readPlain(source: string, options: ParseOptions): ParsedQuantity {
  const { unit } = options
  const match = /^([-+]?\s*[\d.,][\d., ]*(?:[eE][-+]?\d{1,3}(?![\dA-Za-z]))?)(.*)$/.exec(source)
  if (!match) return refuse(`“${source}” is not a number.`, options)
  const [, head = '', tail = ''] = match
  const suffix = tail.replace(/\s+/g, '')
  const read = readNumber(head, options.decimalSign)
  if (read.kind === 'none') return refuse(`“${source}” is not a number.`, options)
  const exponent = plainSuffix(suffix, options)
  if (read.kind === 'ambiguous') {
    if (exponent === null) return unreadable(source, suffix, Number(read.asDecimal), options)
    const sign: DecimalSign = head.includes(',') ? ',' : '.'
    const other: DecimalSign = sign === ',' ? '.' : ','
    return twoWays(source, options, [
      { ...unscaledChoice(read.asDecimal, exponent, options), decimalSign: sign },
      { ...unscaledChoice(read.asGroups, exponent, options), decimalSign: other },
    ])
  }
  if (exponent !== null && !isDoubtful(suffix, unit)) return accept(scaled(read.text, exponent), options)
  const tolerance = coded(unit) ? toleranceOf(suffix) : null
  if (tolerance === null) return unreadable(source, suffix, scaled(read.text, 0), options)
  if (exponent === null && /\s$/.test(head)) return accept(scaled(read.text, 0), options, tolerance)
  const withTolerance = choice(scaled(read.text, 0), options, tolerance)
  if (exponent === null) return unreadable(source, suffix, scaled(read.text, 0), options, [withTolerance])
  return twoWays(source, options, [choice(scaled(read.text, exponent), options), withTolerance])
}

/** `R` and `L` may end a number of ohms: `470R`. */
function plainSuffix(suffix: string, { unit, display }: ParseOptions): number | null {
  const exponent = suffixExponent(suffix, unit, display === 'percent')
  return exponent ?? (coded(unit) && suffix.length === 1 ? codeExponent(suffix, unit) : null)
}

/** In farads a capital K, M or G after a number is more likely a tolerance than kilofarads: both are offered. */
const isDoubtful = (suffix: string, unit: string) => unit === 'F' && /^[KMG]$/.test(suffix)

/** A suffix that is another unit, or none at all. The number is offered with its prefix in the field's own unit. */
function unreadable(
  source: string,
  suffix: string,
  value: number,
  options: ParseOptions,
  others: Choice[] = [],
): ParsedQuantity {
  const spelled = unitSpelledBy(suffix)
  if (spelled) {
    const power = options.display === 'percent' ? -2 : spelled.exponent
    const own = choice(scaled(String(value), power), options)
    const here = options.display === 'percent' ? 'a percentage' : measuredBy(options.unit)
    const reading = formatQuantity(scaled(String(value), spelled.exponent), spelled.unit, { digits: 12 })
    const reason = `“${source}” is ${measuredBy(spelled.unit)}, ${reading}; this field takes ${here}, ${own.label}.`
    return refuse(reason, options, [own, ...others])
  }
  return refuse(
    `“${suffix}” in “${source}” is not known here.`,
    options,
    others.length > 0 ? others : undefined,
  )
}

const coded = (unit: string): unit is CodedUnit => unit === 'Ω' || unit === 'F'

const isOwnUnit = (suffix: string, unit: string) => suffixExponent(suffix, unit, false) === 0

const scaled = (text: string, exponent: number): number => {
  const [mantissa = '0', power = '0'] = text.split('e')
  return Number(`${mantissa}e${Number(power) + exponent}`)
}

function label(
  value: number,
  { unit, display, decimalSign = '.' }: ParseOptions,
  tolerance?: number,
): string {
  const text = formatQuantity(value, unit, { digits: 12, decimalSign, ...(display ? { display } : {}) })
  if (tolerance === undefined) return text
  return `${text}, ${formatQuantity(tolerance, '', { display: 'percent', decimalSign })}`
}

const choice = (value: number, options: ParseOptions, tolerance?: number): Choice => ({
  label: label(value, options, tolerance),
  value,
})

/** A choice with the number as typed, so that "1 kΩ or 1000 kΩ" is told apart at a glance. */
function unscaledChoice(text: string, exponent: number, options: ParseOptions): Choice {
  const value = scaled(text, exponent)
  const { unit, display, decimalSign = '.' } = options
  const symbol = prefixSymbol(exponent)
  if (display === 'percent' || unit === '' || (exponent !== 0 && symbol === '')) return choice(value, options)
  const number = formatQuantity(Number(text), '', { digits: 12, decimalSign })
  return { label: `${number}\u00a0${symbol}${unit}`, value }
}

function twoWays(source: string, options: ParseOptions, choices: Choice[]): ParsedQuantity {
  const readings = choices.map((c) => c.label).join(' or ')
  return refuse(`“${source}” can be read in two ways: ${readings}.`, options, choices)
}

function accept(value: number, options: ParseOptions, tolerance?: number): ParsedQuantity {
  if (!Number.isFinite(value)) return refuse('The number is too large.', options)
  const readAs = label(value, options, tolerance)
  return {
    ok: true,
    value: value === 0 ? 0 : value,
    readAs,
    ...(tolerance === undefined ? {} : { tolerance }),
  }
}

function refuse(reason: string, options: ParseOptions, choices?: Choice[]): ParsedQuantity {
  return { ok: false, reason, accepted: acceptedFor(options), ...(choices ? { choices } : {}) }
}
