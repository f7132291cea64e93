import { Text, View } from '@react-pdf/renderer'
import type { ReactNode } from 'react'
import { toRuns } from '#shared/note/equation-runs.ts'
import type {
  Block,
  EquationLine,
  FigureName,
  Section,
  Statement,
  ValueGroup,
  ValueRow,
} from '#shared/note/types.ts'
import { toPrintable } from './glyphs.ts'
import { CautionMark, StateMark, stateColours } from './marks.tsx'
import { TableView } from './table.tsx'
import { Print } from './text.tsx'
import { colours, styles } from './theme.ts'

interface HeadingProps {
  title: string
  aside?: string | undefined
  /** Anchor that links inside the file lead to; also the entry in the outline. */
  id?: string
}

/**
 * A place that links inside the file lead to, and its entry in the outline. The entry shows the whole sheet: the
 * library knows the place of a nested box only within its parent.
 */
export const toAnchor = (id: string, title: string) => ({
  id,
  bookmark: { title: toPrintable(title), fit: true },
})

export function Heading({ title, aside, id }: HeadingProps): ReactNode {
  return (
    <View style={styles.heading} minPresenceAhead={70} {...(id ? toAnchor(id, title) : {})}>
      <Print style={styles.headingTitle}>{title}</Print>
      {aside ? <Print style={styles.headingAside}>{aside}</Print> : null}
    </View>
  )
}

export type Figures = Record<FigureName, ReactNode>

/** A section with its heading; `figures` are what stands for its figure blocks. */
export function SectionView({ section, figures }: { section: Section; figures: Figures }): ReactNode {
  const isDrawn = (block: Block) => block.type === 'figure' && figures[block.draws] !== null
  // Heading, sentence and first figure are one thing where no table stands between; what follows may run on.
  const first = section.blocks.findIndex(isDrawn)
  const together = section.blocks.slice(0, first).some((block) => block.type === 'table') ? 0 : first + 1
  const draw = (blocks: readonly Block[]) =>
    blocks.map((block, index) =>
      block.type === 'figure' ? (
        <View key={index} wrap={false}>
          {figures[block.draws]}
        </View>
      ) : (
        <BlockView key={index} block={block} />
      ),
    )
  const heading = <Heading title={section.title} aside={section.aside} id={section.id} />
  if (together === 0)
    return (
      <View wrap={!isShort(section)}>
        {heading}
        {draw(section.blocks)}
      </View>
    )
  return (
    <View>
      <View wrap={false}>
        {heading}
        {draw(section.blocks.slice(0, together))}
      </View>
      {draw(section.blocks.slice(together))}
    </View>
  )
}

/** Short sections stay on one sheet; long ones run on, with their head rows repeated. */
function isShort(section: Section): boolean {
  const lines = section.blocks.reduce((sum, block) => sum + linesOf(block), 0)
  return lines <= SHORT
}

const SHORT = 14

function linesOf(block: Block): number {
  switch (block.type) {
    case 'table':
      return block.table.rows.reduce(
        (sum, row) => sum + Math.ceil(Math.max(...row.cells.map((c) => c.length)) / 60),
        1,
      )
    case 'list':
    case 'statements':
      return block.items.length * 2
    case 'equations':
      return block.items.length * 3
    case 'figure':
    case 'values':
      return SHORT + 1
    case 'code':
      return block.lines.length
    case 'text':
      return Math.ceil(block.text.length / 120)
  }
}

function BlockView({ block }: { block: Exclude<Block, { type: 'figure' }> }): ReactNode {
  switch (block.type) {
    case 'text':
      return <Print style={styles.paragraph}>{block.text}</Print>
    case 'list':
      return <ListView items={block.items} />
    case 'statements':
      return <StatementsView items={block.items} />
    case 'table':
      return (
        <View style={{ marginTop: 3, marginBottom: 4 }}>
          <TableView table={block.table} />
        </View>
      )
    case 'equations':
      return <EquationsView items={block.items} />
    case 'code':
      return <CodeView lines={block.lines} />
    case 'values':
      return <ValuesView groups={block.groups} />
  }
}

export function ListView({ items, fontSize }: { items: readonly string[]; fontSize?: number }): ReactNode {
  return (
    <View>
      {items.map((item, index) => (
        <View key={index} style={styles.item} wrap={false}>
          <View style={styles.dash} />
          <Print style={[styles.itemText, fontSize === undefined ? {} : { fontSize }]}>{item}</Print>
        </View>
      ))}
    </View>
  )
}

export function StatementsView({
  items,
  fontSize,
}: {
  items: readonly Statement[]
  fontSize?: number
}): ReactNode {
  return (
    <View style={{ marginTop: 3 }}>
      {items.map((item, index) => (
        <View key={index} style={[styles.item, { alignItems: 'flex-start' }]} wrap={false}>
          <View style={{ width: 13, marginTop: 1.2 }}>
            {item.state === 'unknown' ? <CautionMark /> : <StateMark state={item.state} />}
          </View>
          <Print
            style={[
              styles.itemText,
              { color: stateColours[item.state] },
              fontSize === undefined ? {} : { fontSize },
            ]}
          >
            {item.text}
          </Print>
        </View>
      ))}
    </View>
  )
}

/** Each equation twice, in symbols and with the numbers put in, aligned after its name. */
function EquationsView({ items }: { items: readonly EquationLine[] }): ReactNode {
  return (
    <View>
      {items.map((item, index) => (
        <View key={index} style={[styles.row, { paddingVertical: 3 }]} wrap={false}>
          <Print style={[styles.cell, { width: 78, fontWeight: 500 }]}>{item.name}</Print>
          <View style={{ flex: 1 }}>
            <EquationText text={item.symbolic} />
            <EquationText text={item.numeric} />
          </View>
        </View>
      ))}
    </View>
  )
}

const SIZE = 8.8

function EquationText({ text }: { text: string }): ReactNode {
  return (
    <Text style={{ fontSize: SIZE, lineHeight: 1.5 }}>
      {toRuns(toPrintable(text)).map((run, index) => (
        <Text
          key={index}
          style={
            run.style === 'symbol'
              ? { fontStyle: 'italic' }
              : run.style === 'subscript'
                ? { verticalAlign: 'sub', fontSize: 0.72 * SIZE }
                : {}
          }
        >
          {run.text}
        </Text>
      ))}
    </Text>
  )
}

/** Lines as they stand; a long one is set on with an indent, as SPICE continues it. */
function CodeView({ lines }: { lines: readonly string[] }): ReactNode {
  return (
    <View style={{ borderLeftWidth: 0.75, borderLeftColor: colours.hair, paddingLeft: 8 }}>
      {lines.map((line, index) => (
        <Print key={index} style={{ fontSize: 7.4, lineHeight: 1.35, paddingLeft: 12, textIndent: -12 }}>
          {line === '' ? ' ' : line}
        </Print>
      ))}
    </View>
  )
}

/** Groups of values in two columns, read downwards on the left, then on the right. */
function ValuesView({ groups }: { groups: readonly ValueGroup[] }): ReactNode {
  return (
    <View>
      {groups.map((group) => {
        const half = Math.ceil(group.rows.length / 2)
        return (
          <View key={group.title} style={{ marginTop: 5 }} wrap={group.rows.length > 40}>
            <Print style={{ fontSize: 8, fontWeight: 600 }}>{group.title}</Print>
            <View style={{ flexDirection: 'row' }}>
              <ValueColumn rows={group.rows.slice(0, half)} />
              <View style={{ width: 16 }} />
              <ValueColumn rows={group.rows.slice(half)} />
            </View>
          </View>
        )
      })}
    </View>
  )
}

function ValueColumn({ rows }: { rows: readonly ValueRow[] }): ReactNode {
  return (
    <View style={{ flex: 1 }}>
      {rows.map((row, index) => (
        <View key={index} style={[styles.row, { paddingVertical: 0.9 }]} wrap={false}>
          <Print style={[styles.cell, { flex: 1.25, color: colours.ink2 }]}>{row.label}</Print>
          <Print style={[styles.cell, { flex: 1, textAlign: 'right', fontWeight: row.given ? 600 : 400 }]}>
            {row.value}
          </Print>
        </View>
      ))}
    </View>
  )
}
