import { StyleSheet } from '@react-pdf/renderer'
import type { Paper } from '#shared/note/types.ts'
import { TEXT } from './fonts.ts'

/** Print colours: the light pigments on white paper, inks in black. */
export const colours = {
  sheet: '#ffffff',
  poche: '#dcdcdc',
  pocheLine: '#8c8c8c',
  hair: '#9a9a9a',
  edge: '#444444',
  frame: '#000000',
  ink: '#000000',
  ink2: '#222222',
  ink3: '#444444',
  woad: '#1a4787',
  woadWash: '#dbe6f6',
  verdigris: '#0a5f4f',
  verdigrisWash: '#e3f3ee',
  ochre: '#775106',
  ochreWash: '#f8edd3',
  minium: '#a32b0f',
  miniumWash: '#fde6de',
  heather: '#6b3979',
} as const

const MILLIMETRE = 72 / 25.4

/** One text block for both papers: 176.7 mm wide, so that a sheet printed on the other paper loses nothing. */
export const BLOCK_WIDTH = 176.7 * MILLIMETRE

const widths: Record<Paper, number> = { A4: 595.28, Letter: 612 }

export const sideMargin = (paper: Paper): number => (widths[paper] - BLOCK_WIDTH) / 2

export const pageSize = (paper: Paper): 'A4' | 'LETTER' => (paper === 'A4' ? 'A4' : 'LETTER')

/** Sizes in points; nothing is set below 7. */
export const styles = StyleSheet.create({
  /** Set on each text, not on the page: the frame of a sheet would apply the page's leading twice. */
  text: { fontSize: 8.4, lineHeight: 1.36 },

  page: {
    fontFamily: TEXT,
    fontSize: 8.4,
    color: colours.ink,
    paddingTop: 26,
    paddingBottom: 22,
  },
  region: { flexGrow: 1, flexShrink: 1, flexBasis: 0 },

  head: {
    flexDirection: 'row',
    alignItems: 'center',
    borderBottomWidth: 1.5,
    borderBottomColor: colours.ink,
    paddingBottom: 5,
    marginBottom: 12,
  },
  product: { fontSize: 9.4, fontWeight: 600, marginLeft: 5, width: 142 },
  headMark: {
    width: BLOCK_WIDTH - 320,
    textAlign: 'center',
    fontSize: 8.6,
    fontWeight: 600,
    color: colours.minium,
  },
  headNumber: { width: 160, textAlign: 'right', fontSize: 8, color: colours.ink2 },

  foot: {
    marginTop: 8,
    flexDirection: 'row',
    justifyContent: 'space-between',
    borderTopWidth: 0.5,
    borderTopColor: colours.hair,
    paddingTop: 4,
  },

  title: { fontSize: 19.5, lineHeight: 1.16, fontWeight: 600 },
  lead: { fontSize: 8.8, lineHeight: 1.45, color: colours.ink2, marginTop: 4 },

  refusal: {
    marginTop: 10,
    borderWidth: 1.2,
    borderColor: colours.minium,
    paddingVertical: 7,
    paddingHorizontal: 9,
  },
  refusalText: { fontSize: 10.5, fontWeight: 600, color: colours.minium, marginBottom: 3 },

  answers: {
    flexDirection: 'row',
    borderTopWidth: 0.75,
    borderBottomWidth: 0.75,
    borderColor: colours.ink,
    marginTop: 10,
  },
  answer: {
    paddingTop: 5,
    paddingBottom: 6,
    paddingHorizontal: 8,
    borderLeftWidth: 0.5,
    borderLeftColor: colours.hair,
  },
  answerFirst: { paddingLeft: 0, borderLeftWidth: 0 },
  answerLabel: { fontSize: 7.2, lineHeight: 1.25, color: colours.ink3 },
  answerFigure: { fontSize: 12.6, lineHeight: 1.3, fontWeight: 600 },
  answerSmall: { fontSize: 7.2, lineHeight: 1.25, color: colours.ink2 },

  heading: {
    flexDirection: 'row',
    flexWrap: 'wrap',
    alignItems: 'baseline',
    marginTop: 11,
    marginBottom: 4,
    columnGap: 7,
  },
  headingTitle: { fontSize: 9.6, fontWeight: 600, lineHeight: 1.25 },
  headingAside: { fontSize: 7.4, color: colours.ink3, flexShrink: 1, lineHeight: 1.25 },

  row: { flexDirection: 'row', borderTopWidth: 0.5, borderTopColor: colours.hair, paddingVertical: 2 },
  headRow: { flexDirection: 'row', paddingBottom: 2, alignItems: 'flex-end' },
  totalRow: { borderTopWidth: 0.9, borderTopColor: colours.ink },
  cell: { fontSize: 7.4, lineHeight: 1.28, paddingRight: 5 },
  headCell: { fontSize: 7.1, lineHeight: 1.2, color: colours.ink3, paddingRight: 5 },

  paragraph: { marginBottom: 3 },
  item: { flexDirection: 'row', marginBottom: 1.5 },
  dash: { width: 4, height: 0.75, backgroundColor: colours.ink, marginTop: 5.2, marginRight: 5 },
  itemText: { flex: 1 },

  titleBlock: { borderWidth: 1.5, borderColor: colours.ink, flexDirection: 'row', marginTop: 10 },
  titleStatement: {
    width: 92,
    padding: 6,
    borderRightWidth: 0.75,
    borderRightColor: colours.ink,
    justifyContent: 'space-between',
  },
  titleField: { paddingHorizontal: 6, paddingTop: 3, paddingBottom: 3.5 },
  titleLabel: { fontSize: 7, lineHeight: 1.15, color: colours.ink3 },
  titleValue: { fontSize: 7.9, lineHeight: 1.3, fontWeight: 500 },
  hashLine: { flexDirection: 'row', justifyContent: 'space-between', marginTop: 4 },
  small: { fontSize: 7, color: colours.ink3 },
})
