import { decimalsFor, toFixedText, trimZeros } from './decimal.ts'

/**
 * Letter and digit codes of IEC 60062 for resistance and capacitance: the multiplier's letter stands in place of the
 * decimal sign, so that no point is lost in print. 4700 Ω is `4k7`, 499 Ω is `499R`, 4.7 nF is `4n7`.
 */

export type CodedUnit = 'Ω' | 'F'

const resistanceLetters: Record<string, number> = { L: -3, m: -3, R: 0, r: 0, k: 3, K: 3, M: 6, G: 9, T: 12 }
const capacitanceLetters: Record<string, number> = { p: -12, n: -9, μ: -6, µ: -6, u: -6, m: -3, F: 0 }

const printed: Record<CodedUnit, { letter: string; exponent: number }[]> = {
  Ω: [
    { letter: 'R', exponent: 0 },
    { letter: 'k', exponent: 3 },
    { letter: 'M', exponent: 6 },
    { letter: 'G', exponent: 9 },
    { letter: 'T', exponent: 12 },
  ],
  F: [
    { letter: 'p', exponent: -12 },
    { letter: 'n', exponent: -9 },
    { letter: 'μ', exponent: -6 },
    { letter: 'm', exponent: -3 },
    { letter: 'F', exponent: 0 },
  ],
}

/** Power of ten of a multiplier letter in a code for this unit; null where the letter is none. */
export function codeExponent(letter: string, unit: CodedUnit): number | null {
  return (unit === 'Ω' ? resistanceLetters : capacitanceLetters)[letter] ?? null
}

/**
 * Code of a resistance (Ω) or capacitance (F), up to `digits` significant digits (6). Values below the smallest
 * letter start with it: 0.47 Ω is `R47`. Anything that is not a positive finite number gives `?`.
 */
export function toRkm(value: number, unit: CodedUnit, digits = 6): string {
  if (!Number.isFinite(value) || value <= 0) return value === 0 ? `0${unit === 'Ω' ? 'R' : 'F'}` : '?'
  const rounded = Number(value.toPrecision(digits))
  const letters = printed[unit]
  const fitting = letters.filter((l) => rounded >= Number(`1e${l.exponent}`)).at(-1) ?? letters[0]
  const { letter, exponent } = fitting ?? { letter: '', exponent: 0 }
  const text = trimZeros(toFixedText(rounded, decimalsFor(rounded, digits, exponent), 'nearest', exponent))
  const [whole = '0', fraction = ''] = text.split('.')
  // One digit alone is printed with the place after the letter, 1k0, as marks on parts are.
  const after = fraction === '' && whole.length === 1 ? '0' : fraction
  return `${whole === '0' ? '' : whole}${letter}${after}`
}

/** Value of a complete code in Ω or F; null where the text is none. Case matters but for k. */
export function fromRkm(code: string, unit: CodedUnit): number | null {
  const match = /^(\d*)([A-Za-zμµ])(\d*)$/.exec(code.trim())
  if (!match) return null
  const [, whole = '', letter = '', fraction = ''] = match
  const exponent = codeExponent(letter, unit)
  if (exponent === null || whole + fraction === '') return null
  return Number(`${whole || '0'}.${fraction || '0'}e${exponent}`)
}

/** Tolerance letters of IEC 60062 as fractions. */
const toleranceLetters: Record<string, number> = {
  E: 0.00005,
  L: 0.0001,
  P: 0.0002,
  W: 0.0005,
  B: 0.001,
  C: 0.0025,
  D: 0.005,
  F: 0.01,
  G: 0.02,
  H: 0.03,
  J: 0.05,
  K: 0.1,
  M: 0.2,
  N: 0.3,
}

/** Fraction that a tolerance letter stands for; null where it is none. */
export function toleranceOf(letter: string): number | null {
  return toleranceLetters[letter] ?? null
}
