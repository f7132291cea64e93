import { createStore, type Store } from '#client/lib/store.ts'
import type { DraftDocument } from './paths.ts'
import { isDraft } from './visitor-storage.ts'

/** A state of the work that was set aside, to hold the draft against. */
export interface KeptVariant {
  document: DraftDocument
  /** ISO 8601. */
  at: string
}

type KeyValueStore = Pick<Storage, 'getItem' | 'setItem' | 'removeItem'>

const PREFIX = 'spandrel.kept.'

/** One for each channel, and one for a visitor's plan. */
export const keptKey = (channelId: string | null): string => `${PREFIX}${channelId ?? 'visitor'}`

/** Anything but a design, whole or in the making, counts as nothing kept. */
export function readKept(store: KeyValueStore, key: string): KeptVariant | null {
  try {
    const kept: unknown = JSON.parse(store.getItem(key) ?? 'null')
    if (typeof kept !== 'object' || kept === null) return null
    const { document, at } = kept as Partial<Record<string, unknown>>
    return isDraft(document) && typeof at === 'string' ? { document, at } : null
  } catch {
    return null
  }
}

/** Writes or, with null, forgets it; false where the browser keeps nothing: it then lasts as long as the page. */
export function writeKept(store: KeyValueStore, key: string, kept: KeptVariant | null): boolean {
  try {
    if (kept === null) store.removeItem(key)
    else store.setItem(key, JSON.stringify(kept))
    return true
  } catch {
    return false
  }
}

export interface KeptStore extends Store<KeptVariant | null> {
  keep(document: DraftDocument): void
  forget(): void
}

const stores = new Map<string, KeptStore>()

/** The kept variant of a channel (null: of the visitor's plan); the same for all parts of the page. */
export function keptVariant(channelId: string | null): KeptStore {
  const key = keptKey(channelId)
  const known = stores.get(key)
  if (known) return known
  const store = createStore<KeptVariant | null>(readKept(localStorage, key))
  const put = (kept: KeptVariant | null) => {
    writeKept(localStorage, key, kept)
    store.set(kept)
  }
  const opened: KeptStore = {
    ...store,
    keep: (document) => put({ document, at: new Date().toISOString() }),
    forget: () => put(null),
  }
  stores.set(key, opened)
  return opened
}
