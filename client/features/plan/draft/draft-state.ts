import { setAt, type DraftDocument } from './paths.ts'

/** What stands in a field, kept as it was typed. `reason` says why it could not be read; absent when it could. */
export interface TypedText {
  text: string
  reason?: string
}

export type Typed = Readonly<Record<string, TypedText>>

/** One state of the work: all that undo brings back. */
export interface Snapshot {
  document: DraftDocument
  typed: Typed
  /** Changes where the whole document was replaced: figures of another origin say nothing about this one. */
  origin: number
}

export interface HistoryEntry extends Snapshot {
  /** What the change was, in words, for "Undone: …". */
  label: string
  /** Field that changed, so that undo can lead back to it. */
  path: string | null
}

export interface DraftState extends Snapshot {
  past: readonly HistoryEntry[]
  future: readonly HistoryEntry[]
  /** Field that is being typed in: further keystrokes there belong to the same undo step. */
  open: string | null
  /** Rises with every change of the document or of what is typed. */
  edits: number
  /** Rises when values change from outside the fields (undo, replaced document), so that they show them. */
  revision: number
  /** Origins given so far. */
  origins: number
}

export interface Change {
  path: string
  /** undefined removes the key. */
  value: unknown
}

export type DraftAction =
  | {
      type: 'type'
      path: string
      value: unknown
      text: string
      label: string
      /** Keys that must follow this one, in the same undo step. */
      also?: readonly Change[]
    }
  | { type: 'misread'; path: string; text: string; reason: string; label: string }
  | { type: 'leave'; path: string }
  | { type: 'set'; changes: readonly Change[]; label: string; path?: string }
  | { type: 'replace'; document: DraftDocument; label: string }
  | { type: 'load'; document: DraftDocument; typed?: Typed }
  | { type: 'undo' }
  | { type: 'redo' }

/** Undo steps that are kept; older ones are let go. */
const DEPTH = 300

export function createDraft(document: DraftDocument, typed: Typed = {}): DraftState {
  return { document, typed, origin: 0, origins: 0, past: [], future: [], open: null, edits: 0, revision: 0 }
}

export function draftReducer(state: DraftState, action: DraftAction): DraftState {
  switch (action.type) {
    case 'type':
      return typedInto(state, action.path, action.label, {
        document: (action.also ?? []).reduce(
          (document, change) => setAt(document, change.path, change.value),
          setAt(state.document, action.path, action.value),
        ),
        typed: { ...state.typed, [action.path]: { text: action.text } },
      })
    case 'misread':
      return typedInto(state, action.path, action.label, {
        document: state.document,
        typed: { ...state.typed, [action.path]: { text: action.text, reason: action.reason } },
      })
    case 'leave':
      return state.open === action.path ? { ...state, open: null } : state
    case 'set':
      return set(state, action.changes, action.label, action.path ?? action.changes[0]?.path ?? null)
    case 'replace':
      return {
        ...remember(state, action.label, null),
        document: action.document,
        typed: {},
        ...newOrigin(state),
        revision: state.revision + 1,
      }
    case 'load':
      return {
        ...createDraft(action.document, action.typed),
        ...newOrigin(state),
        edits: state.edits,
        revision: state.revision + 1,
      }
    case 'undo':
      return travel(state, 'past')
    case 'redo':
      return travel(state, 'future')
  }
}

const newOrigin = ({ origins }: DraftState) => ({ origin: origins + 1, origins: origins + 1 })

/** Pushes the present onto the past; the future is gone as soon as something new is done. */
function remember(state: DraftState, label: string, path: string | null): DraftState {
  const { document, typed, origin } = state
  const entry: HistoryEntry = { document, typed, origin, label, path }
  return {
    ...state,
    past: [...state.past, entry].slice(-DEPTH),
    future: [],
    open: null,
    edits: state.edits + 1,
  }
}

function typedInto(
  state: DraftState,
  path: string,
  label: string,
  next: Omit<Snapshot, 'origin'>,
): DraftState {
  const before = state.typed[path]
  const after = next.typed[path]
  // The same text read again (a field that is only left) is no change.
  if (before && before.text === after?.text && before.reason === after?.reason) return state
  if (state.open === path) return { ...state, ...next, future: [], edits: state.edits + 1 }
  return { ...remember(state, label, path), ...next, open: path }
}

function set(state: DraftState, changes: readonly Change[], label: string, path: string | null): DraftState {
  let document = state.document
  const typed: Record<string, TypedText> = { ...state.typed }
  for (const change of changes) {
    document = setAt(document, change.path, change.value)
    for (const key of Object.keys(typed))
      if (key === change.path || key.startsWith(`${change.path}.`)) delete typed[key]
  }
  return { ...remember(state, label, path), document, typed, revision: state.revision + 1 }
}

function travel(state: DraftState, from: 'past' | 'future'): DraftState {
  const entry = state[from].at(-1)
  if (!entry) return state
  const { document, typed, origin, origins } = state
  const here: HistoryEntry = { document, typed, origin, label: entry.label, path: entry.path }
  return {
    document: entry.document,
    typed: entry.typed,
    origin: entry.origin,
    origins,
    past: from === 'past' ? state.past.slice(0, -1) : [...state.past, here],
    future: from === 'future' ? state.future.slice(0, -1) : [...state.future, here],
    open: null,
    edits: state.edits + 1,
    revision: state.revision + 1,
  }
}

/** Fields whose text could not be read, with the reason. */
export const misreadFields = (typed: Typed): { path: string; text: string; reason: string }[] =>
  Object.entries(typed).flatMap(([path, entry]) =>
    entry.reason === undefined ? [] : [{ path, text: entry.text, reason: entry.reason }],
  )
