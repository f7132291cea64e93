import { formatEditable, formatQuantity, type DecimalSign } from '#shared/units/format-quantity.ts'
import { isFormula, parseQuantity, type Choice } from '#shared/units/parse-quantity.ts'

/** What a value field knows about its text; without anything of the page, so that it can be tested by itself. */
export interface FieldUnit {
  unit: string
  display?: 'percent' | 'plain'
  decimalSign?: DecimalSign
}

export type Reading =
  | { kind: 'empty' }
  | { kind: 'value'; value: number; readAs: string }
  | { kind: 'refused'; reason: string; accepted: string; choices: Choice[] }
  /** Worked out apart, since the evaluator is loaded when it is first needed. */
  | { kind: 'formula' }

export function readText(text: string, unit: FieldUnit): Reading {
  if (text.trim() === '') return { kind: 'empty' }
  if (isFormula(text)) return { kind: 'formula' }
  const parsed = parseQuantity(text, unit)
  return parsed.ok
    ? { kind: 'value', value: parsed.value, readAs: parsed.readAs }
    : { kind: 'refused', reason: parsed.reason, accepted: parsed.accepted, choices: parsed.choices ?? [] }
}

/**
 * As `readText`, but what the program itself writes for the value that is set is never a question: 4.096 from a
 * stored design means that value, whichever decimal sign the person uses.
 */
export function readShown(text: string, value: number | null, unit: FieldUnit): Reading {
  const read = readText(text, unit)
  if (read.kind !== 'refused' || value === null || text !== textOf(value, unit)) return read
  const { display } = unit
  const readAs = formatQuantity(value, unit.unit, { digits: 12, ...(display ? { display } : {}) })
  return { kind: 'value', value, readAs }
}

export interface FieldText {
  text: string
  /** The field's value when the text last agreed with it. */
  value: number | null
  /** The text given from outside at that time; undefined: none. */
  given: string | undefined
}

export function startText(value: number | null, given: string | undefined, unit: FieldUnit): FieldText {
  return { text: given ?? textOf(value, unit), value, given }
}

/**
 * Typed text is left alone for as long as it means the value that is set. A value that comes from elsewhere (undo,
 * a pair taken from a hint) replaces it, as does a text given from outside.
 */
export function followOutside(
  state: FieldText,
  value: number | null,
  given: string | undefined,
  unit: FieldUnit,
): FieldText {
  if (given !== undefined)
    return given === state.given && value === state.value ? state : { text: given, value, given }
  if (state.given !== undefined || value !== state.value) return startText(value, undefined, unit)
  return state
}

export const textOf = (value: number | null, unit: FieldUnit): string =>
  value === null ? '' : formatEditable(value, unit.unit, unit)

/** True where the question is which sign is the decimal one: the answer is kept for all fields. */
export const asksDecimalSign = (choices: readonly Choice[]): boolean =>
  choices.some((c) => c.decimalSign !== undefined)

/** Shown behind the field: "V", "per K". */
export function unitSuffix(unit: string, display?: 'percent' | 'plain'): string {
  if (display === 'percent') return '%'
  if (unit === 'V/V') return ''
  return unit.startsWith('1/') ? `per ${unit.slice(2)}` : unit
}
