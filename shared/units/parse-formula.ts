import { formatQuantity } from './format-quantity.ts'
import { normalise } from './number-text.ts'
import { acceptedFor, parseQuantity, type ParsedQuantity, type ParseOptions } from './parse-quantity.ts'

/**
 * Arithmetic after `=`, as in `=2*24k9/499R+1`. Each number is read as in any field, so codes and prefixes work; the
 * result is taken in the field's unit. The evaluator is loaded when it is first needed.
 */

const FUNCTIONS = new Set(['sqrt', 'abs', 'exp', 'log10', 'pi'])

/** A number with what is glued to it, a word, or one sign. */
const TOKEN =
  /\s*(?:((?:\d[\d.,]*|[.,]\d+)(?:[eE][-+]?\d+(?![\w]))?[A-Za-zμΩ°√%]*\d*[A-Za-zΩ]*)|([A-Za-z]+\d*)|([-+*/^()·]))/y

/**
 * Value of a formula, read like `parseQuantity`: a result or the reason for refusing it.
 * Accepted are numbers, + − * / ^, brackets, sqrt, abs, exp, log10 and pi. Never rejects.
 */
export async function parseFormula(text: string, options: ParseOptions): Promise<ParsedQuantity> {
  const source = normalise(text).replace(/^=/, '').trim()
  const accepted = 'arithmetic such as =2*24k9/499R+1, with + - * / ^, brackets and sqrt'
  const translated = translate(source, options)
  if (!translated.ok) return { ok: false, reason: translated.reason, accepted }
  const result = await evaluate(translated.expression)
  if (result === null) return { ok: false, reason: `“${source}” cannot be worked out.`, accepted }
  if (!Number.isFinite(result)) return { ok: false, reason: `“${source}” has no finite value.`, accepted }
  const value = options.display === 'percent' ? result / 100 : result
  const { decimalSign = '.', display, unit } = options
  const readAs = formatQuantity(value, unit, { digits: 10, decimalSign, ...(display ? { display } : {}) })
  return Math.abs(value) > 1e15
    ? { ok: false, reason: `${readAs} is too large.`, accepted: acceptedFor(options) }
    : { ok: true, value, readAs }
}

type Translated = { ok: true; expression: string } | { ok: false; reason: string }

/** The formula with plain numbers only: nothing else ever reaches the evaluator. */
function translate(source: string, options: ParseOptions): Translated {
  if (source === '') return { ok: false, reason: 'Nothing follows “=” yet.' }
  const parts: string[] = []
  TOKEN.lastIndex = 0
  while (TOKEN.lastIndex < source.length) {
    const start = TOKEN.lastIndex
    const match = TOKEN.exec(source)
    if (!match) return { ok: false, reason: `“${source.slice(start).trim()}” cannot be read.` }
    const [, number, word, operator] = match
    const last = parts.at(-1) ?? ''
    // "2 3" and "2 (3)" would be multiplied silently.
    if (/\)$|^pi$/.test(last) && (operator === undefined || operator === '(')) {
      return { ok: false, reason: `A sign is missing before “${match[0].trim()}”.` }
    }
    if (number !== undefined) {
      const value = readOperand(number, options)
      if (typeof value === 'string') return { ok: false, reason: value }
      parts.push(`(${value})`)
    } else if (word !== undefined) {
      const code = FUNCTIONS.has(word) ? word : readOperand(word, options)
      if (typeof code === 'string' && !FUNCTIONS.has(code))
        return { ok: false, reason: `“${word}” is not known in arithmetic.` }
      parts.push(typeof code === 'string' ? code : `(${code})`)
    } else {
      parts.push(operator === '·' ? '*' : (operator ?? ''))
    }
  }
  return { ok: true, expression: parts.join(' ') }
}

/** Operands may be ohms, farads or anything that the field takes; the first reading that fits is used. */
function readOperand(text: string, { unit, decimalSign }: ParseOptions): number | string {
  let reason = `“${text}” is not a number.`
  for (const candidate of [...new Set([unit, 'Ω', 'F', 'V', 'A', 'Hz', 's', ''])]) {
    const read = parseQuantity(text, { unit: candidate, ...(decimalSign ? { decimalSign } : {}) })
    if (read.ok) return read.value
    if (read.choices?.some((c) => c.decimalSign)) reason = read.reason
  }
  return reason
}

async function evaluate(expression: string): Promise<number | null> {
  const { evaluate: work } = await import('mathjs')
  try {
    const result: unknown = work(expression)
    return typeof result === 'number' ? result : null
  } catch {
    return null
  }
}
