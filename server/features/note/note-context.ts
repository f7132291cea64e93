import type { Paper } from '#shared/api/note.ts'
import type { NoteContext } from '#shared/note/types.ts'

interface DraftNote {
  workspaceName: string
  authorName: string
  /** ISO 8601. */
  date: string
  paper: Paper
  demo: boolean
}

/** What stands on the note of a draft besides the design and its plan. */
export function draftContext(draft: DraftNote): NoteContext {
  return { ...draft, number: null, revision: null, status: 'draft', language: 'en', symbols: 'iec' }
}
