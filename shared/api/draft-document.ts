import { z } from 'zod'
import { readDesign } from '#shared/design/read.ts'
import { designSchema, type DesignDocument } from '#shared/design/schema.ts'
import { isCleanText } from './common.ts'

const deepest = 12
const longestText = 10_000

type Path = readonly PropertyKey[]

/** Walks plain JSON and says what must not be stored, whichever key it hides under. */
function unsafePart(value: unknown, path: Path): { path: Path; message: string } | null {
  if (path.length > deepest) return { path, message: `nested too deep; at most ${deepest} levels` }
  if (typeof value === 'string') {
    if (value.length > longestText) return { path, message: `at most ${longestText} characters` }
    if (!isCleanText(value.replace(/[\n\t]/g, ' ')))
      return { path, message: 'leave out control characters and direction marks' }
  }
  if (typeof value !== 'object' || value === null) return null
  for (const [key, inner] of Object.entries(value)) {
    if (key === '__proto__' || key === 'constructor' || key === 'prototype')
      return { path: [...path, key], message: 'this key is not accepted' }
    if (!isCleanText(key)) return { path, message: 'a key holds control characters' }
    const found = unsafePart(inner, [...path, key])
    if (found) return found
  }
  return null
}

function valueAt(root: unknown, path: Path): unknown {
  let value = root
  for (const key of path) {
    if (typeof value !== 'object' || value === null) return undefined
    value = (value as Record<PropertyKey, unknown>)[key]
  }
  return value
}

/** Path → what is wrong there and what is accepted, in the words of a refused design. */
function faultSentences(draft: unknown): Map<string, string> {
  const read = readDesign(draft)
  const faults = read.ok ? [] : read.faults
  return new Map(faults.map((fault) => [fault.path, `${fault.reason}; accepted: ${fault.accepted}`]))
}

/**
 * A design while it is being filled in: required keys may still be missing (`format` and `name` may not), but what is
 * there is valid by the design's own schema and unknown keys are refused. Pass it through `readDesign` before it is
 * planned: that names what is missing.
 */
export const draftDocumentSchema = z
  .looseObject({
    format: z.literal('spandrel-design/1'),
    name: z
      .string()
      .trim()
      .min(1, 'Name: type at least 1 character.')
      .max(120, 'Name: at most 120 characters.')
      .refine(isCleanText, 'Name: leave out control characters and direction marks.'),
  })
  .superRefine((draft, context) => {
    const unsafe = unsafePart(draft, [])
    if (unsafe) {
      context.addIssue({ code: 'custom', path: [...unsafe.path], message: unsafe.message })
      return
    }
    const read = designSchema.safeParse(draft)
    const issues = (read.error?.issues ?? []).filter(
      (issue) => issue.code === 'unrecognized_keys' || valueAt(draft, issue.path) !== undefined,
    )
    if (issues.length === 0) return
    const sentences = faultSentences(draft)
    for (const { path, message } of issues)
      context.addIssue({ code: 'custom', path: [...path], message: sentences.get(path.join('.')) ?? message })
  })
  .transform((draft) => draft as unknown as DesignDocument)
