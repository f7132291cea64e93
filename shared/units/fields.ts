import { z } from 'zod'
import { isCleanText } from './clean-text.ts'

/**
 * Number fields of a design. The schema carries the label, the unit and the accepted range of each field, so that
 * the form, the refusal of a bad file and the reference page all say the same.
 */
export interface FieldMeta {
  label: string
  /** SI unit, '' for a plain ratio. */
  unit: string
  /** What is accepted, in words: "a number above 0, in Ω". */
  accepted: string
  /** `ratio` fields are typed and shown in per cent. */
  display?: 'percent' | 'plain'
}

export const fieldMeta = z.registry<FieldMeta>()

interface NumberOptions {
  min?: number
  max?: number
  /** True where the bound itself is not accepted. */
  above?: number
  below?: number
  integer?: boolean
  display?: 'percent' | 'plain'
}

/** Absurd magnitudes are refused: nothing in this trade exceeds them. */
const LARGEST = 1e15

/** Units in which far less is absurd already. */
const LARGEST_IN: Record<string, number> = { F: 1, V: 1e4, A: 1e4, Hz: 1e12 }

const words = (unit: string, o: NumberOptions): string => {
  const low = o.above !== undefined ? `above ${o.above}` : o.min !== undefined ? `from ${o.min}` : ''
  const high = o.below !== undefined ? `below ${o.below}` : o.max !== undefined ? `up to ${o.max}` : ''
  const range = [low, high].filter(Boolean).join(' ')
  return `a ${o.integer ? 'whole ' : ''}number${range ? ` ${range}` : ''}${unit ? `, in ${unit}` : ''}`
}

/** A finite number with its label and SI unit; refuses NaN, infinities and anything beyond ±1e15. */
export function numberField(label: string, unit: string, options: NumberOptions = {}) {
  const most = options.max ?? (options.below === undefined ? LARGEST_IN[unit] : undefined)
  let schema = z
    .number()
    .min(options.min ?? -LARGEST)
    .max(most ?? LARGEST)
  if (options.above !== undefined) schema = schema.gt(options.above)
  if (options.below !== undefined) schema = schema.lt(options.below)
  if (options.integer) schema = schema.int()
  const accepted = words(unit, most === undefined ? options : { ...options, max: most })
  return schema.register(fieldMeta, {
    label,
    unit,
    accepted,
    ...(options.display ? { display: options.display } : {}),
  })
}

/** Above zero. */
export const positive = (label: string, unit: string, max = LARGEST) =>
  numberField(label, unit, max === LARGEST ? { above: 0 } : { above: 0, max })

/** Zero or more. */
export const nonNegative = (label: string, unit: string, max = LARGEST) =>
  numberField(label, unit, max === LARGEST ? { min: 0 } : { min: 0, max })

/** A limit ± as a fraction: 0 ≤ x < 1. */
export const fraction = (label: string) => numberField(label, '', { min: 0, below: 1, display: 'percent' })

/** One line of text in a design: a name or a unit. Refuses control characters and direction marks. */
export const lineField = (label: string, least: number, most: number) =>
  z
    .string()
    .trim()
    .min(least)
    .max(most)
    .refine(isCleanText)
    .register(fieldMeta, {
      label,
      unit: '',
      accepted: `text of ${least} to ${most} characters on one line, without control characters`,
    })
