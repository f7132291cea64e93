import { Page, View } from '@react-pdf/renderer'
import type { ReactNode } from 'react'
import type { Note } from '#shared/note/types.ts'
import { toPrintable } from './glyphs.ts'
import { ArchMark } from './marks.tsx'
import { Print } from './text.tsx'
import { TitleBlock } from './title-block.tsx'
import { pageSize, sideMargin, styles } from './theme.ts'

interface SheetsProps {
  note: Note
  children: ReactNode
}

/**
 * All sheets of a note: the content flows from one to the next, the frame around it is drawn for each. The first one
 * carries the title block, whose room is taken from that sheet only.
 */
export function Sheets({ note, children }: SheetsProps): ReactNode {
  const side = sideMargin(note.meta.paper)
  return (
    <Page
      size={pageSize(note.meta.paper)}
      style={[styles.page, { paddingHorizontal: side }]}
      bookmark={{ title: toPrintable(note.first.title), fit: true, expanded: true }}
      layout={(sheet) => (
        <>
          <RunningHead note={note} />
          <View style={styles.region}>{sheet.children}</View>
          <Foot note={note} number={sheet.pageNumber ?? 1} total={sheet.totalPages ?? 1} />
        </>
      )}
    >
      {children}
    </Page>
  )
}

function RunningHead({ note }: { note: Note }): ReactNode {
  return (
    <View style={styles.head}>
      <ArchMark size={13} />
      <Print style={styles.product}>Spandrel</Print>
      <Print style={styles.headMark}>{note.head.mark ?? ''}</Print>
      <Print style={styles.headNumber}>{note.head.number}</Print>
    </View>
  )
}

function Foot({ note, number, total }: { note: Note; number: number; total: number }): ReactNode {
  const sheet = `${number} of ${total}`
  if (number === 1)
    return (
      <View>
        <TitleBlock rows={note.first.titleBlock} statement={note.first.statement} sheet={sheet} />
        <View style={styles.hashLine}>
          <Print style={styles.small}>{note.first.hashLine}</Print>
          <Print style={styles.small}>{note.foot.right}</Print>
        </View>
      </View>
    )
  return (
    <View style={styles.foot}>
      <Print style={styles.small}>{[note.foot.left, note.foot.right].filter(Boolean).join('. ')}</Print>
      <Print style={styles.small}>{`Sheet ${sheet}`}</Print>
    </View>
  )
}
