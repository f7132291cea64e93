import type { DecimalSign } from './format-quantity.ts'

/** Reading of the digits of a number, before its prefix and unit. */
export type NumberText =
  | { kind: 'number'; text: string }
  /** `1,000`: one or a thousand. Both as plain decimal text. */
  | { kind: 'ambiguous'; asDecimal: string; asGroups: string }
  | { kind: 'none' }

/** One spelling for what keyboards and documents spell in many ways: spaces, minus signs, micro, ohm. */
export function normalise(text: string): string {
  return text
    .replace(/[\u00a0\u2009\u200a\u202f\t]/g, ' ')
    .replace(/[\u2212\u2012\u2013\ufe63\uff0d]/g, '-')
    .replace(/\u00b5/g, 'μ')
    .replace(/\u2126/g, 'Ω')
    .replace(/\u2103/g, '°C')
    .replace(/\u00d7/g, '*')
    .trim()
}

/**
 * Comma and point both stand for the decimal sign; a space parts groups of three. `1,000`, `1.000` and `12,345` could
 * be either: the reader's decimal sign decides where it is known, else the question is handed back.
 */
export function readNumber(source: string, decimalSign?: DecimalSign): NumberText {
  const [, minus = '', body = '', exponent = ''] =
    /^([-+]?)\s*(\d[\d ]*(?:[.,][\d ,.]*)?|[.,]\d+)(?:[eE]([-+]?\d{1,3}))?$/.exec(source.trim()) ?? []
  if (body === '' || !groupsFit(body)) return { kind: 'none' }
  const digits = body.replace(/ /g, '')
  const tail = exponent === '' ? '' : `e${exponent}`
  const whole = (text: string) => `${minus === '-' ? '-' : ''}${text}${tail}`
  const signs = digits.match(/[.,]/g) ?? []
  if (signs.length === 0) return { kind: 'number', text: whole(digits) }
  if (signs.length === 1) {
    // A power of ten is never written behind grouped digits.
    if (tail !== '' || !/^[1-9]\d{0,2}[.,]\d{3}$/.test(digits))
      return { kind: 'number', text: whole(digits.replace(',', '.')) }
    const asDecimal = whole(digits.replace(',', '.'))
    const asGroups = whole(digits.replace(/[.,]/, ''))
    if (decimalSign === undefined) return { kind: 'ambiguous', asDecimal, asGroups }
    return { kind: 'number', text: signs[0] === decimalSign ? asDecimal : asGroups }
  }
  return severalSigns(digits, signs, whole)
}

/** `1,234,567`, `1,234.5` and `1.234,5` can be read in one way only. */
function severalSigns(digits: string, signs: string[], whole: (text: string) => string): NumberText {
  const last = signs.at(-1) ?? '.'
  const same = signs.every((s) => s === last)
  const head = same ? digits : digits.slice(0, digits.lastIndexOf(last))
  const fraction = same ? '' : digits.slice(digits.lastIndexOf(last) + 1)
  const groups = same ? last : (signs[0] ?? ',')
  const grouped = groups === '.' ? /^[1-9]\d{0,2}(\.\d{3})+$/ : /^[1-9]\d{0,2}(,\d{3})+$/
  if (!grouped.test(head) || (!same && fraction === '')) return { kind: 'none' }
  const joined = head.replace(/[.,]/g, '')
  return { kind: 'number', text: whole(same ? joined : `${joined}.${fraction}`) }
}

/** Spaces inside a number part groups of three, counted from the decimal sign on both sides. */
function groupsFit(body: string): boolean {
  if (!body.trim().includes(' ')) return true
  const [left = '', right = ''] = body.trim().split(/[.,]/)
  return /^\d{1,3}( \d{3})*$|^\d+$/.test(left) && /^(\d{3} )*\d{0,3}$|^\d*$/.test(right)
}
