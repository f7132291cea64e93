import { misreadFields, type Typed, type TypedText } from './draft-state.ts'
import type { DraftDocument } from './paths.ts'

/** A channel's draft that the server does not have yet, kept in the browser until it does. */
export interface Unsaved {
  /** null where only text that cannot be read waits. */
  document: DraftDocument | null
  typed: Typed
  /** Version that it was based on. */
  version: number
  /** Somebody else saved first, and nobody has decided yet. */
  conflict: boolean
}

type KeyValueStore = Pick<Storage, 'getItem' | 'setItem' | 'removeItem'>

const PREFIX = 'spandrel.unsaved.'

/** How long the rest of a tab that never came back is kept, ms: 30 days. */
const KEPT_FOR = 30 * 24 * 3600 * 1000

/** Each tab keeps its own: two of them may hold different work on one channel. */
export const unsavedKey = (channelId: string, tab: string): string => `${PREFIX}${channelId}.${tab}`

const misread = (typed: Typed): Typed =>
  Object.fromEntries(misreadFields(typed).map(({ path, text, reason }) => [path, { text, reason }]))

export function keepUnsaved(store: KeyValueStore, key: string, unsaved: Unsaved): void {
  try {
    const at = Date.now()
    store.setItem(key, JSON.stringify({ ...unsaved, typed: misread(unsaved.typed), at }))
  } catch {
    // A browser that keeps nothing still has the draft in memory, and the server gets it all the same.
  }
}

export function forgetUnsaved(store: KeyValueStore, key: string): void {
  try {
    store.removeItem(key)
  } catch {
    // As above.
  }
}

export function readUnsaved(store: KeyValueStore, key: string): Unsaved | null {
  try {
    const kept: unknown = JSON.parse(store.getItem(key) ?? 'null')
    if (!isRecord(kept) || typeof kept.version !== 'number') return null
    const document = isRecord(kept.document) ? kept.document : null
    return { document, version: kept.version, conflict: kept.conflict === true, typed: toTyped(kept.typed) }
  } catch {
    return null
  }
}

/** Removes what tabs left behind that have not come back for long. */
export function sweepUnsaved(store: Storage, now = Date.now()): void {
  try {
    const keys = Array.from({ length: store.length }, (_, index) => store.key(index))
    for (const key of keys)
      if (key?.startsWith(PREFIX) && now - keptAt(store.getItem(key)) > KEPT_FOR) store.removeItem(key)
  } catch {
    // As above.
  }
}

function keptAt(text: string | null): number {
  try {
    const kept: unknown = JSON.parse(text ?? 'null')
    return isRecord(kept) && typeof kept.at === 'number' ? kept.at : 0
  } catch {
    return 0
  }
}

const isRecord = (value: unknown): value is Record<string, unknown> =>
  typeof value === 'object' && value !== null && !Array.isArray(value)

function toTyped(kept: unknown): Typed {
  if (!isRecord(kept)) return {}
  const typed: Record<string, TypedText> = {}
  for (const [path, entry] of Object.entries(kept))
    if (isRecord(entry) && typeof entry.text === 'string' && typeof entry.reason === 'string')
      typed[path] = { text: entry.text, reason: entry.reason }
  return typed
}
