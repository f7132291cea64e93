import { Link, View } from '@react-pdf/renderer'
import type { ReactNode } from 'react'
import type { Answer, FirstSheet } from '#shared/note/types.ts'
import { Heading, ListView, StatementsView } from './blocks.tsx'
import { stateColours } from './marks.tsx'
import { TableView } from './table.tsx'
import { Print } from './text.tsx'
import { colours, styles } from './theme.ts'

/** Findings printed on the first sheet; all of them follow on a later one. */
const FINDINGS = 3
const REASONS = 12
/** Up to this many lines the parts table stands beside the conditions, above it on its full width. */
const BESIDE = 9

interface FirstSheetProps {
  first: FirstSheet
  figures: { levels: ReactNode; schematic: ReactNode }
}

/** Answers, levels, circuit and parts: what has to be known at a glance. */
export function FirstSheetView({ first, figures }: FirstSheetProps): ReactNode {
  return (
    <View>
      <Print style={styles.title}>{first.title}</Print>
      {first.refusal ? <Refusal refusal={first.refusal} /> : null}
      <Print style={styles.lead}>{first.purpose}</Print>
      {first.answers.length > 0 ? <Answers answers={first.answers} /> : null}
      <Notices first={first} />
      {first.levels ? (
        <View wrap={false}>
          <Heading
            id="levels"
            title="Figure 1. Levels"
            aside="each bay is scaled to its own linear region; hatching is room left, dashes are worst-case parts"
          />
          {figures.levels}
          <ClipRow caption={first.levels.caption} clips={first.levels.clips} />
        </View>
      ) : null}
      {first.schematic ? (
        <View wrap={false}>
          <Heading id="chain" title="Figure 2. Signal chain" aside={first.schematic.aside} />
          {figures.schematic}
        </View>
      ) : null}
      <PartsAndConditions first={first} />
    </View>
  )
}

function Refusal({ refusal }: { refusal: NonNullable<FirstSheet['refusal']> }): ReactNode {
  return (
    <View style={styles.refusal}>
      <Print style={styles.refusalText}>{refusal.text}</Print>
      <ListView items={refusal.reasons.slice(0, REASONS)} />
      <More count={refusal.reasons.length - REASONS} to="candidates" />
    </View>
  )
}

function More({ count, to }: { count: number; to: string }): ReactNode {
  if (count <= 0) return null
  return (
    <Link src={`#${to}`} style={{ fontSize: 7.4, color: colours.woad, textDecoration: 'none' }}>
      {`and ${count} more on a later sheet`}
    </Link>
  )
}

function Answers({ answers }: { answers: readonly Answer[] }): ReactNode {
  return (
    <View style={styles.answers}>
      {answers.map((answer, index) => (
        <View
          key={answer.label}
          style={[
            styles.answer,
            index === 0 ? styles.answerFirst : {},
            { flexBasis: 0, flexGrow: SHARES[index] ?? 1 },
          ]}
        >
          <Print style={styles.answerLabel}>{answer.label}</Print>
          <Print
            style={[styles.answerFigure, { color: answer.state ? stateColours[answer.state] : colours.ink }]}
          >
            {answer.figure}
          </Print>
          {answer.small.map((line, row) => (
            <Print key={row} style={styles.answerSmall}>
              {line}
            </Print>
          ))}
        </View>
      ))}
    </View>
  )
}

const SHARES = [1.42, 1, 1.02, 0.92]

/** Cautions always, findings the worst few with a link to all. */
function Notices({ first }: { first: FirstSheet }): ReactNode {
  const findings = first.refusal ? [] : first.findings.filter((finding) => finding.state !== 'unknown')
  const cautions = first.cautions.map((text) => ({ state: 'unknown' as const, text }))
  const items = [...cautions, ...findings.slice(0, FINDINGS)]
  if (items.length === 0) return null
  return (
    <View style={{ marginTop: 4 }}>
      <StatementsView items={items} fontSize={7.4} />
      <More count={findings.length - FINDINGS} to="findings" />
    </View>
  )
}

function ClipRow({ caption, clips }: { caption: string; clips: readonly string[] }): ReactNode {
  return (
    <View style={{ marginTop: 2 }}>
      <Print style={{ fontSize: 7.2, color: colours.ink3 }}>{caption}</Print>
      <View style={[styles.row, { paddingVertical: 1.5 }]}>
        {clips.map((text, index) => (
          <View key={index} style={{ width: `${100 / clips.length}%`, paddingLeft: 14 }}>
            <Print style={[styles.cell, { color: colours.ink2 }]}>{text}</Print>
          </View>
        ))}
      </View>
    </View>
  )
}

function PartsAndConditions({ first }: { first: FirstSheet }): ReactNode {
  const { parts, conditions } = first
  if (!parts) return null
  const beside = parts.table.rows.length <= BESIDE
  const below = parts.below.map((text, index) => (
    <Print key={index} style={{ fontSize: 7.4, color: colours.ink2, marginTop: 2 }}>
      {text}
    </Print>
  ))
  const table = (
    <View style={beside ? { width: '60%' } : {}}>
      <Heading id="parts" title={parts.title} />
      <TableView table={parts.table} />
      {below}
    </View>
  )
  const list = conditions ? (
    <View style={beside ? { flex: 1, paddingLeft: 18 } : {}}>
      <Heading id="conditions" title={conditions.title} />
      <ListView items={conditions.items} fontSize={7.6} />
    </View>
  ) : null
  return beside ? (
    <View style={{ flexDirection: 'row' }} wrap={false}>
      {table}
      {list}
    </View>
  ) : (
    <View>
      {table}
      {list}
    </View>
  )
}
