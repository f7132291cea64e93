import type { Candidate, Plan } from '#shared/design/plan.ts'
import { designSchema, type Design, type DesignDocument } from '#shared/design/schema.ts'
import type { Spread } from '#shared/studies/types.ts'
import { toAnswers } from './answers.ts'
import { toClipText } from './analysis-tables.ts'
import { toCautions, toConditions } from './conditions.ts'
import { toFindings } from './findings.ts'
import { toGroups } from './groups.ts'
import { toAmplifierLines, toPartsTable } from './parts-table.ts'
import type { FirstSheet, Note, NoteContext, TitleField } from './types.ts'
import { statusWords, toMark, toNumberLine, toPurpose, toRefusal, toSupplyLine } from './wording.ts'

export interface NoteInput {
  document: DesignDocument
  plan: Plan
  context: NoteContext
  /** Monte Carlo run of the chosen candidate; absent: the note has no such sheet. */
  spread?: Spread | null
}

/**
 * Everything that a design note says, in the order of its sheets. Pure: the same design, plan and context give the
 * same note. Throws ZodError for a document that is not a design.
 */
export function buildNote({ document, plan, context, spread = null }: NoteInput): Note {
  const design = designSchema.parse(document)
  const candidate = plan.chosen === null ? null : (plan.candidates[plan.chosen] ?? null)
  const date = context.date.slice(0, 10)
  return {
    meta: {
      title: `${design.name} – ${toNumberLine(context)}`,
      author: context.authorName,
      subject: `${statusWords[context.status]} design note of ${context.workspaceName}`,
      keywords: `signal conditioning, ${design.sensor.quantity.name}, ${design.converter.bits} bit, SHA-256 ${plan.designHash}`,
      language: context.language,
      date: context.date,
      paper: context.paper,
      symbols: context.symbols,
    },
    head: { name: design.name, number: toNumberLine(context), mark: toMark(context.status) },
    foot: {
      left: `${context.workspaceName}, ${date}. SHA-256 ${shortHash(plan.designHash)}`,
      right: context.demo ? 'Demonstration data' : '',
    },
    first: toFirstSheet(design, plan, candidate, context),
    groups: toGroups({ document, design, plan, candidate, spread }),
  }
}

function toFirstSheet(
  design: Design,
  plan: Plan,
  candidate: Candidate | null,
  context: NoteContext,
): FirstSheet {
  const refusal = toRefusal(plan, candidate)
  const levels = candidate?.levels ?? []
  const stands = candidate !== null && refusal === null
  const { quantity } = design.sensor
  return {
    title: design.name,
    purpose: toPurpose(design, plan, stands),
    refusal,
    answers: candidate?.realised ? toAnswers(design, plan, candidate) : [],
    findings: toFindings([...(candidate?.findings ?? []), ...plan.findings]),
    levels:
      levels.length > 0
        ? {
            levels,
            clips: levels.map((level) => toClipText(level.worstClipsAt, quantity.unit, quantity)),
            caption: `${quantity.name} at which each node meets its lower and upper limit, worst case`,
          }
        : null,
    schematic: stands && candidate.components ? { aside: toSupplyLine(design) } : null,
    parts:
      stands && candidate.components
        ? {
            title: 'Table 1. Parts that set the answer',
            table: toPartsTable(design, candidate),
            below: toAmplifierLines(candidate),
          }
        : null,
    conditions: stands ? { title: 'Holds only if', items: toConditions(design, candidate) } : null,
    cautions: toCautions(plan),
    titleBlock: toTitleBlock(design, context),
    statement: toStatement(context),
    hashLine: `SHA-256 ${shortHash(plan.designHash)}, first 64 bits of the design's hash; the full value stands under Record.`,
  }
}

function toTitleBlock(design: Design, context: NoteContext): TitleField[][] {
  return [
    [
      { label: 'Title', value: design.name },
      { label: 'Document type', value: 'Design note' },
      { label: 'Identification no.', value: context.number ?? 'not numbered' },
      { label: 'Revision', value: context.revision ?? 'none yet' },
    ],
    [
      { label: 'Legal owner', value: context.workspaceName },
      { label: 'Created by', value: context.authorName },
      { label: 'Approved by', value: context.status === 'released' ? 'see revision' : 'nobody yet' },
      { label: 'Sheet', value: '' },
    ],
    [
      {
        label: 'Verification',
        value: context.status === 'released' ? 'see revision' : 'no code before release',
      },
      { label: 'Status', value: statusWords[context.status] },
      { label: 'Date of issue', value: context.date.slice(0, 10) },
      { label: 'Language', value: context.language },
    ],
  ]
}

function toStatement(context: NoteContext): string {
  return context.status === 'released'
    ? 'Released'
    : 'Draft. Not for manufacture: nobody has signed it and it can change without notice.'
}

/** First 64 bits in groups of four, as on the screen. */
export const shortHash = (hash: string): string => (hash.slice(0, 16).match(/.{1,4}/g) ?? []).join(' ')
