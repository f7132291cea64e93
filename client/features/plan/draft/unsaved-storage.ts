import { misreadFields, type Typed, type TypedText } from './draft-state.ts'
import type { DraftDocument } from './paths.ts'

/** A channel's draft that the server does not have yet, kept in the browser until it does. */
export interface Unsaved {
  /** null where only text that cannot be read waits. */
  document: DraftDocument | null
  typed: Typed
  /** Version that it was based on. */
  version: number
}

type KeyValueStore = Pick<Storage, 'getItem' | 'setItem' | 'removeItem'>

const keyOf = (channelId: string): string => `spandrel.unsaved.${channelId}`

const misread = (typed: Typed): Typed =>
  Object.fromEntries(misreadFields(typed).map(({ path, text, reason }) => [path, { text, reason }]))

export function keepUnsaved(store: KeyValueStore, channelId: string, unsaved: Unsaved): void {
  try {
    store.setItem(keyOf(channelId), JSON.stringify({ ...unsaved, typed: misread(unsaved.typed) }))
  } catch {
    // A browser that keeps nothing still has the draft in memory, and the server gets it all the same.
  }
}

export function forgetUnsaved(store: KeyValueStore, channelId: string): void {
  try {
    store.removeItem(keyOf(channelId))
  } catch {
    // As above.
  }
}

export function readUnsaved(store: KeyValueStore, channelId: string): Unsaved | null {
  try {
    const kept: unknown = JSON.parse(store.getItem(keyOf(channelId)) ?? 'null')
    if (!isRecord(kept) || typeof kept.version !== 'number') return null
    const document = isRecord(kept.document) ? kept.document : null
    return { document, version: kept.version, typed: toTyped(kept.typed) }
  } catch {
    return null
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
