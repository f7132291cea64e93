import { Document, View } from '@react-pdf/renderer'
import type { ReactNode } from 'react'
import type { Note, SheetGroup } from '#shared/note/types.ts'
import { SectionView, toAnchor, type Figures } from './blocks.tsx'
import { FirstSheetView } from './first-sheet.tsx'
import { Sheets } from './frame.tsx'
import { toPrintable } from './glyphs.ts'

export interface NoteFigures extends Figures {
  levels: ReactNode
  schematic: ReactNode
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
          <Group key={group.id} group={group} figures={figures} />
        ))}
      </Sheets>
    </Document>
  )
}

function Group({ group, figures }: { group: SheetGroup; figures: Figures }): ReactNode {
  return (
    <View break={group.newSheet} {...toAnchor(group.id, group.title)}>
      {group.sections.map((section) => (
        <SectionView key={section.id} section={section} figures={figures} />
      ))}
    </View>
  )
}
