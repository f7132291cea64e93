import { z } from 'zod'
import { isCleanText } from '#shared/units/clean-text.ts'

export { isCleanText } from '#shared/units/clean-text.ts'

/** Identifier of a stored thing: lower-case letters, digits and hyphens. */
export const idSchema = z
  .string()
  .regex(/^[a-z0-9](?:[a-z0-9-]{1,38})[a-z0-9]$/, 'an identifier of this application')

interface TextOptions {
  min?: number
  max: number
}

/** One line of text for people, trimmed. `label` begins the sentence of a refusal. */
export function lineOfText(label: string, { min = 1, max }: TextOptions) {
  return z
    .string()
    .trim()
    .min(min, `${label}: type at least ${min} character${min === 1 ? '' : 's'}.`)
    .max(max, `${label}: at most ${max} characters.`)
    .refine(isCleanText, `${label}: leave out control characters and direction marks.`)
}

/** Several lines: as a line, but line feeds and tabs may stand in it. */
export function textBlock(label: string, { max }: { max: number }) {
  return z
    .string()
    .trim()
    .max(max, `${label}: at most ${max} characters.`)
    .refine(
      (text) => isCleanText(text.replace(/[\n\t]/g, ' ')),
      `${label}: leave out control characters and direction marks.`,
    )
}

/** ISO 8601, UTC. */
export const timeSchema = z.iso.datetime()

/** Rises by one with every change; goes into `If-Match`. */
export const versionSchema = z.number().int().min(1)

/** A member as others see them. */
export const personSchema = z.object({ id: idSchema, name: z.string() })
export type Person = z.output<typeof personSchema>
