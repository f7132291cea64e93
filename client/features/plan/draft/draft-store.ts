import { createDraft, draftReducer, type DraftAction, type DraftState, type Typed } from './draft-state.ts'
import type { DraftDocument } from './paths.ts'

/** A draft outside React, so that it survives a change of route and can be saved while the page is being left. */
export interface DraftStore {
  getState(): DraftState
  dispatch(action: DraftAction): void
  subscribe(listener: () => void): () => void
}

export function createDraftStore(document: DraftDocument, typed: Typed = {}): DraftStore {
  let state = createDraft(document, typed)
  const listeners = new Set<() => void>()
  return {
    getState: () => state,
    dispatch(action) {
      const next = draftReducer(state, action)
      if (next === state) return
      state = next
      for (const listener of [...listeners]) listener()
    },
    subscribe(listener) {
      listeners.add(listener)
      return () => listeners.delete(listener)
    },
  }
}
