import { renderToStream } from '@react-pdf/renderer'
import { buffer } from 'node:stream/consumers'
import { buildNote, type NoteInput } from '#shared/note/build-note.ts'
import type { Note } from '#shared/note/types.ts'
import { drawFigures } from './figures.tsx'
import { registerFonts } from './fonts.ts'
import { findUnprintable, REPLACEMENT } from './glyphs.ts'
import { NoteDocument } from './note-document.tsx'

/** Sets a note in this very thread, which it keeps busy for some tenths of a second. */
export async function makeNote(input: NoteInput): Promise<Buffer> {
  registerFonts()
  const note = withMissingSigns(buildNote(input))
  return buffer(await renderToStream(<NoteDocument note={note} figures={drawFigures({ ...input, note })} />))
}

const SIGNS = 40

/** Says at the end which signs could not be printed. */
export function withMissingSigns(note: Note): Note {
  const missing = findUnprintable(note)
  if (missing.length === 0) return note
  const code = (sign: string) => `U+${(sign.codePointAt(0) ?? 0).toString(16).toUpperCase().padStart(4, '0')}`
  const codes = missing.slice(0, SIGNS).map(code).join(', ')
  const more = missing.length > SIGNS ? ` and ${missing.length - SIGNS} more` : ''
  const text = `Signs that the note's typeface does not hold are printed as ${REPLACEMENT}: ${codes}${more}. The design file keeps them.`
  return {
    ...note,
    groups: note.groups.map((group, index) =>
      index === note.groups.length - 1
        ? {
            ...group,
            sections: [...group.sections, { id: 'signs', title: 'Signs', blocks: [{ type: 'text', text }] }],
          }
        : group,
    ),
  }
}
