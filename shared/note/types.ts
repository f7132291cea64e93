import type { Level, RoomState } from '#shared/design/plan.ts'

/**
 * The design note as data: every sentence, figure and table that is printed, without any layout. The PDF is one way
 * to set it; all texts are complete and carry their units.
 */

export type NoteStatus = 'draft' | 'in review' | 'released' | 'superseded'
export type Paper = 'A4' | 'Letter'

/** What a note says about itself and what the plan does not know. */
export interface NoteContext {
  /** Legal owner: the workspace's name, or `Visitor`. */
  workspaceName: string
  /** Identification number with the workspace's prefix, `QH-0412`; null where none is given yet. */
  number: string | null
  /** Revision letter; null before the first one. */
  revision: string | null
  status: NoteStatus
  authorName: string
  /** Date of issue, ISO 8601 (`2026-04-17` or a full time stamp); also the date in the file's metadata. */
  date: string
  paper: Paper
  language: 'en'
  /** Resistors as rectangles (IEC 60617) or zigzags (IEEE 315). */
  symbols: 'iec' | 'ansi'
  /** True where all names and figures are invented. */
  demo: boolean
}

export interface Column {
  title: string
  /** Share of the table's width. */
  share: number
  align?: 'right'
  strong?: boolean
}

export interface Row {
  cells: string[]
  /** State of room, marked and worded in the last cell. */
  state?: RoomState
  /** Set apart by a rule above: totals. */
  total?: boolean
}

export interface Table {
  columns: Column[]
  rows: Row[]
}

/** A figure with its label above and what it is measured against below. */
export interface Answer {
  label: string
  figure: string
  /** Lines in smaller type below it. */
  small: string[]
  state?: RoomState
}

/** One name with its equation in symbols and with the numbers put in. */
export interface EquationLine {
  name: string
  symbolic: string
  numeric: string
}

export interface Statement {
  state: RoomState
  text: string
}

export interface ValueRow {
  label: string
  value: string
  /** False where the value is the format's default. */
  given: boolean
}

export interface ValueGroup {
  title: string
  rows: ValueRow[]
}

/** Measurand, converter input and code along the nominal line. */
export interface TransferPoint {
  quantity: number
  volts: number
}

export interface TransferFigure {
  quantity: { name: string; unit: string }
  points: TransferPoint[]
}

/** Drawings between the tables. */
export type FigureName = 'transfer' | 'errors' | 'spread' | 'noise' | 'response'

export type Block =
  | { type: 'text'; text: string }
  | { type: 'list'; items: string[] }
  | { type: 'statements'; items: Statement[] }
  | { type: 'table'; table: Table }
  | { type: 'equations'; items: EquationLine[] }
  | { type: 'figure'; draws: FigureName }
  | { type: 'code'; lines: string[] }
  | { type: 'values'; groups: ValueGroup[] }

export interface Section {
  /** Anchor inside the file. */
  id: string
  /** Heading with its number: "Table 2. Headroom at every pin". */
  title: string
  /** Smaller words beside the heading. */
  aside?: string
  blocks: Block[]
}

/** Sections that belong together. */
export interface SheetGroup {
  id: string
  title: string
  /** Whether they begin on a new sheet or follow on. */
  newSheet: boolean
  sections: Section[]
}

export interface TitleField {
  label: string
  value: string
}

export interface LevelStrip {
  levels: Level[]
  /** Measurand at which each node meets its limits, worst case; one text for each node. */
  clips: string[]
  caption: string
}

export interface FirstSheet {
  title: string
  purpose: string
  /** Says first that the plan cannot be built, where that is so. */
  refusal: { text: string; reasons: string[] } | null
  answers: Answer[]
  /** Over and tight findings, worst first. */
  findings: Statement[]
  levels: LevelStrip | null
  schematic: { aside: string } | null
  parts: { title: string; table: Table; below: string[] } | null
  conditions: { title: string; items: string[] } | null
  cautions: string[]
  /** Three rows of four fields. */
  titleBlock: TitleField[][]
  /** Stands where a released note carries its verification code. */
  statement: string
  hashLine: string
}

export interface Note {
  meta: {
    title: string
    author: string
    subject: string
    keywords: string
    language: string
    date: string
    paper: Paper
    symbols: 'iec' | 'ansi'
  }
  head: { name: string; number: string; mark: string | null }
  foot: { left: string; right: string }
  first: FirstSheet
  groups: SheetGroup[]
}
