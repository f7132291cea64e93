import { Document, View } from '@react-pdf/renderer'
import type { ReactNode } from 'react'
import type { Note, SheetGroup } from '#shared/note/types.ts'
import { SectionView, toAnchor } from './blocks.tsx'
import { FirstSheetView } from './first-sheet.tsx'
import { Sheets } from './frame.tsx'
import { toPrintable } from './glyphs.ts'

export interface NoteFigures {
  levels: ReactNode
  schematic: ReactNode
  transfer: ReactNode
}

interface NoteDocumentProps {
  note: Note
  figures: NoteFigures
}

/** The whole note. Both dates are the date of issue, so that the same note gives the same bytes. */
export function NoteDocument({ note, figures }: NoteDocumentProps): ReactNode {
  const date = new Date(note.meta.date)
  return (
    <Document
      title={toPrintable(note.meta.title)}
      author={toPrintable(note.meta.author)}
      subject={toPrintable(note.meta.subject)}
      keywords={toPrintable(note.meta.keywords)}
      creator="Spandrel"
      producer="Spandrel"
      language={note.meta.language}
      creationDate={date}
      modificationDate={date}
      pageMode="useOutlines"
    >
      <Sheets note={note}>
        <FirstSheetView first={note.first} figures={figures} />
        {note.groups.map((group) => (
          <Group key={group.id} group={group} figure={figures.transfer} />
        ))}
      </Sheets>
    </Document>
  )
}

function Group({ group, figure }: { group: SheetGroup; figure: ReactNode }): ReactNode {
  return (
    <View break={group.newSheet} {...toAnchor(group.id, group.title)}>
      {group.sections.map((section) => (
        <SectionView key={section.id} section={section} figure={figure} />
      ))}
    </View>
  )
}
