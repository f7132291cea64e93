import { createStore, type Store } from '#client/lib/store.ts'
import { keepVisitorWork, readVisitorWork, VISITOR_KEY } from '../draft/visitor-storage.ts'
import { firstExample } from '../examples.ts'
import { createPlanSession, type PlanSession } from './plan-session.ts'

/** What the title block says of a visitor's plan. */
export type VisitorSaving =
  | { kind: 'example' }
  | { kind: 'kept'; at: string }
  | { kind: 'not kept' }
  /** The same plan was changed in another tab of this browser. */
  | { kind: 'elsewhere' }

export interface VisitorSession extends PlanSession {
  saving: Store<VisitorSaving>
  /** Writes at once what waits. */
  keep(): void
  /** Takes over what the other tab made. */
  takeElsewhere(): void
}

const PAUSE = 250

let current: VisitorSession | null = null

/**
 * The one plan of a visitor. It is written to the browser from the first change on; an example that was only looked
 * at leaves nothing. Once it has moved into a workspace the next visit starts anew.
 */
export function visitorSession(): VisitorSession {
  const left = localStorage.getItem(VISITOR_KEY) === null && current?.saving.get().kind === 'kept'
  if (!current || left) current = open()
  return current
}

function open(): VisitorSession {
  const work = readVisitorWork(localStorage)
  const session = createPlanSession(work?.document ?? { ...firstExample }, work?.typed)
  const saving = createStore<VisitorSaving>(work ? { kind: 'kept', at: work.savedAt } : { kind: 'example' })
  let timer: ReturnType<typeof setTimeout> | undefined
  let written = session.draft.getState().edits

  const keep = () => {
    clearTimeout(timer)
    const { document, typed, edits } = session.draft.getState()
    if (edits === written || saving.get().kind === 'elsewhere') return
    written = edits
    const savedAt = new Date().toISOString()
    saving.set(
      keepVisitorWork(localStorage, { document, typed, savedAt })
        ? { kind: 'kept', at: savedAt }
        : { kind: 'not kept' },
    )
  }

  session.draft.subscribe(() => {
    clearTimeout(timer)
    timer = setTimeout(keep, PAUSE)
  })
  window.addEventListener('pagehide', keep)
  window.addEventListener('storage', (event) => {
    if (event.key === VISITOR_KEY && event.newValue !== null) saving.set({ kind: 'elsewhere' })
  })

  return {
    ...session,
    saving,
    keep() {
      // Whoever keeps this one decides against the other tab's.
      if (saving.get().kind === 'elsewhere') {
        saving.set({ kind: 'example' })
        written = -1
      }
      keep()
    },
    takeElsewhere() {
      const theirs = readVisitorWork(localStorage)
      if (!theirs) return
      session.draft.dispatch({
        type: 'replace',
        document: theirs.document,
        label: 'The plan of the other tab',
      })
      written = session.draft.getState().edits
      saving.set({ kind: 'kept', at: theirs.savedAt })
    },
  }
}
