import { renderToStream } from '@react-pdf/renderer'
import { buffer } from 'node:stream/consumers'
import { buildNote, type NoteInput } from '#shared/note/build-note.ts'
import { prepareCandidate } from '#shared/design/plan-design.ts'
import { computeCurves } from '#shared/studies/curves.ts'
import { runSpread } from '#shared/studies/spread.ts'
import type { Curves, Spread } from '#shared/studies/types.ts'
import type { Note } from '#shared/note/types.ts'
import { drawFigures } from './figures.tsx'
import { registerFonts } from './fonts.ts'
import { findUnprintable, REPLACEMENT } from './glyphs.ts'
import { NoteDocument } from './note-document.tsx'

/** What the plan does not hold: boards as many and as seeded as the design says, and curves. */
export function studyChosen({ document, plan }: NoteInput): { spread: Spread | null; curves: Curves | null } {
  const candidate = plan.chosen === null ? undefined : plan.candidates[plan.chosen]
  const prepared = candidate?.budget ? prepareCandidate(document, candidate) : null
  if (!prepared) return { spread: null, curves: null }
  return { spread: runSpread(prepared), curves: computeCurves(prepared.design, prepared.spec) }
}

/** Sets a note in this very thread, which it keeps busy for some tenths of a second. */
export async function makeNote(input: NoteInput): Promise<Buffer> {
  registerFonts()
  const studies = studyChosen(input)
  const note = withMissingSigns(buildNote({ ...input, spread: studies.spread }))
  const figures = drawFigures({ ...input, ...studies, note })
  return buffer(await renderToStream(<NoteDocument note={note} figures={figures} />))
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
