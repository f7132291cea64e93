import type { NoteInput } from '#shared/note/build-note.ts'

/** The design note as a PDF file. The same input gives the same bytes. */
export async function renderNote(input: NoteInput): Promise<Buffer> {
  const { makeNote } = await import('./make-note.tsx')
  return makeNote(input)
}
