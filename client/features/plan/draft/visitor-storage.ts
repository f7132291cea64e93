import { draftDocumentSchema } from '#shared/api/draft-document.ts'
import { misreadFields, type Typed, type TypedText } from './draft-state.ts'
import type { DraftDocument } from './paths.ts'

/** Where a visitor's work waits in the browser; sign-up and sign-in move it into the workspace. */
export const VISITOR_KEY = 'spandrel.visitor'

export interface VisitorWork {
  document: DraftDocument
  /** Text that could not be read yet; kept so that a reload loses nothing that was typed. */
  typed: Typed
  savedAt: string
}

type KeyValueStore = Pick<Storage, 'getItem' | 'setItem' | 'removeItem'>

/** Writes the work; false where the browser refuses to keep anything (private window, full store). */
export function keepVisitorWork(store: KeyValueStore, work: VisitorWork): boolean {
  const typed = Object.fromEntries(
    misreadFields(work.typed).map(({ path, text, reason }) => [path, { text, reason }]),
  )
  try {
    store.setItem(
      VISITOR_KEY,
      JSON.stringify({ version: 1, document: work.document, savedAt: work.savedAt, typed }),
    )
    return true
  } catch {
    return false
  }
}

/** Reads it back. Anything but a design, whole or in the making, counts as nothing kept. */
export function readVisitorWork(store: KeyValueStore): VisitorWork | null {
  let kept: unknown
  try {
    kept = JSON.parse(store.getItem(VISITOR_KEY) ?? 'null')
  } catch {
    return null
  }
  if (!isRecord(kept) || kept.version !== 1 || !isRecord(kept.document)) return null
  // A value out of its range is kept as typed, so only the frame of the document is asked for here.
  const frame = draftDocumentSchema.safeParse(kept.document)
  if (!frame.success && !isDraft(kept.document)) return null
  return {
    document: kept.document,
    typed: readTyped(kept.typed),
    savedAt: typeof kept.savedAt === 'string' ? kept.savedAt : '',
  }
}

const isRecord = (value: unknown): value is Record<string, unknown> =>
  typeof value === 'object' && value !== null && !Array.isArray(value)

/** The sections that the steps read must be what they say they are; single values may still be wrong. */
export function isDraft(document: unknown): document is DraftDocument {
  return (
    isRecord(document) &&
    document.format === 'spandrel-design/1' &&
    typeof document.name === 'string' &&
    ['sensor', 'converter', 'rails', 'parts', 'choose'].every(
      (section) => document[section] === undefined || isRecord(document[section]),
    )
  )
}

function readTyped(kept: unknown): Typed {
  if (!isRecord(kept)) return {}
  const typed: Record<string, TypedText> = {}
  for (const [path, entry] of Object.entries(kept))
    if (isRecord(entry) && typeof entry.text === 'string' && typeof entry.reason === 'string')
      typed[path] = { text: entry.text, reason: entry.reason }
  return typed
}
