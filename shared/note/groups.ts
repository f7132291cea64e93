import type { Candidate, Equation, Plan } from '#shared/design/plan.ts'
import type { Design, DesignDocument } from '#shared/design/schema.ts'
import type { Spread } from '#shared/studies/types.ts'
import { formatRange } from '#shared/units/format-quantity.ts'
import {
  toHeadroomTable,
  toLoadTable,
  toModelTable,
  toOverVoltageTable,
  toVerdicts,
} from './analysis-tables.ts'
import { toCandidatesTable, toDrawnRef, toPicksTable } from './candidates-table.ts'
import { toAssumptions, toCautions } from './conditions.ts'
import { toDesignValues } from './design-values.ts'
import { figure } from './figures.ts'
import { toFindings } from './findings.ts'
import { toPickSentence } from './parts-table.ts'
import { toQualitySections } from './quality-sections.ts'
import { toTransferSentence, toTransferTable } from './transfer.ts'
import type { Block, Section, SheetGroup } from './types.ts'

interface Input {
  document: DesignDocument
  design: Design
  plan: Plan
  candidate: Candidate | null
  spread: Spread | null
}

/** The sheets after the first one; sections without content are left out, tables numbered as they come. */
export function toGroups(input: Input): SheetGroup[] {
  const { candidate } = input
  const number = numbering(candidate?.feasible ? 2 : 1)
  const groups: SheetGroup[] = []
  const add = (id: string, title: string, sections: (Section | null)[]) => {
    const present = sections.filter((section) => section !== null)
    if (present.length > 0) groups.push({ id, title, newSheet: id === 'record', sections: present })
  }
  if (candidate)
    add('analysis', 'Equations, headroom and model', [
      findings(input, candidate),
      equations(candidate),
      values(input, candidate, number),
      headroom(input, candidate, number),
      model(input, candidate, number),
      loads(candidate, number),
      overVoltage(candidate, number),
    ])
  if (candidate)
    add(
      'quality',
      'Error, spread, noise, filter and drive',
      toQualitySections({ design: input.design, plan: input.plan, candidate, spread: input.spread, number }),
    )
  add('basis', 'Transfer, assumptions and candidates', [
    candidate ? transfer(input, candidate, number) : null,
    section('assumptions', 'Assumptions', [{ type: 'list', items: toAssumptions(input.design, candidate) }]),
    section('cautions', 'Cautions', [{ type: 'list', items: toCautions(input.plan) }]),
    section('candidates', `Table ${number()}. Candidates considered`, [
      { type: 'table', table: toCandidatesTable(input.plan) },
    ]),
  ])
  add('record', 'Record, netlist and design values', [
    record(input.plan),
    candidate?.netlist ? netlist(candidate.netlist) : null,
    section('values', 'Design values', [
      {
        type: 'text',
        text: 'All inputs of the plan in the order of the design file. Values in bold were given; the others are the defaults of the format.',
      },
      { type: 'values', groups: toDesignValues(input.document, input.design) },
    ]),
  ])
  return groups
}

/** Numbers of tables from `first` on; table 1 of a plan that stands is on the first sheet. */
function numbering(first: number): () => number {
  let next = first
  return () => next++
}

const section = (id: string, title: string, blocks: Block[], aside?: string): Section => ({
  id,
  title,
  blocks,
  ...(aside ? { aside } : {}),
})

function findings({ plan }: Input, candidate: Candidate): Section | null {
  const items = toFindings([...(candidate.findings ?? []), ...plan.findings])
  return items.length > 0 ? section('findings', 'Findings', [{ type: 'statements', items }]) : null
}

function equations(candidate: Candidate): Section | null {
  if (!candidate.equations?.length) return null
  const stages = candidate.stages?.map((stage) => `${stage.ref}: gain ${figure(stage.gain, '')}`) ?? []
  return section(
    'equations',
    'Equations of the arrangement',
    [{ type: 'equations', items: candidate.equations.map((equation) => withDrawnRefs(candidate, equation)) }],
    [candidate.title, ...stages].join('; '),
  )
}

/** In the equations of the second stage the parts are named as in the drawing. */
function withDrawnRefs(candidate: Candidate, equation: Equation): Equation {
  if (!equation.name.endsWith(', S2')) return equation
  const symbolic = equation.symbolic.replace(/\bR[A-Za-z0-9]+\b/g, (ref) => toDrawnRef(candidate, ref))
  return { ...equation, symbolic }
}

function values(input: Input, candidate: Candidate, number: () => number): Section | null {
  const sentenceOf = toPickSentence(input.design, candidate)
  const table = candidate.feasible ? toPicksTable(candidate) : null
  if (!table) return null
  const blocks: Block[] = sentenceOf ? [{ type: 'text', text: sentenceOf }] : []
  return section('picks', `Table ${number()}. Sets of standard values`, [...blocks, { type: 'table', table }])
}

function headroom({ design }: Input, candidate: Candidate, number: () => number): Section | null {
  if (!candidate.headroom?.length) return null
  return section(
    'headroom',
    `Table ${number()}. Headroom at every pin`,
    [{ type: 'table', table: toHeadroomTable(candidate.headroom, design.sensor.quantity) }],
    'worst case over every board and the whole span; what is left is measured on one board',
  )
}

function model({ design }: Input, candidate: Candidate, number: () => number): Section | null {
  if (!candidate.model?.length) return null
  return section(
    'model',
    `Table ${number()}. Is the ideal model good enough`,
    [
      { type: 'table', table: toModelTable(candidate.model) },
      { type: 'statements', items: toVerdicts(candidate.model) },
    ],
    `real amplifier against ideal, at full scale; allowed: ${figure(design.rules.modelError, 'LSB')}`,
  )
}

function loads(candidate: Candidate, number: () => number): Section | null {
  if (!candidate.loads?.length) return null
  return section(
    'loads',
    `Table ${number()}. Loading of references`,
    [{ type: 'table', table: toLoadTable(candidate.loads) }],
    'largest current of all boards',
  )
}

function overVoltage(candidate: Candidate, number: () => number): Section | null {
  if (!candidate.overVoltage?.length) return null
  return section(
    'over-voltage',
    `Table ${number()}. Over-voltage at the converter`,
    [{ type: 'table', table: toOverVoltageTable(candidate.overVoltage) }],
    'with rails at their highest',
  )
}

function transfer({ design, plan }: Input, candidate: Candidate, number: () => number): Section | null {
  const table = toTransferTable(design, plan, candidate)
  if (!table) return null
  const blocks: Block[] = [
    { type: 'text', text: toTransferSentence(design, candidate) },
    { type: 'figure', draws: 'transfer' },
    { type: 'table', table },
  ]
  return section('transfer', `Figure 3 and table ${number()}. Transfer`, blocks)
}

function netlist(text: string): Section {
  return section(
    'netlist',
    'Netlist',
    [{ type: 'code', lines: text.replace(/\s+$/, '').split(/\r?\n/) }],
    'complete; runs in any SPICE 3-compatible simulator',
  )
}

function record(plan: Plan): Section {
  const target = formatRange(plan.required.target.low, plan.required.target.high, 'V')
  return section('record', 'Record', [
    {
      type: 'list',
      items: [
        `Planned by Spandrel engine ${plan.engine}, plan format ${plan.format}.`,
        `SHA-256 of the design, canonical JSON after RFC 8785, before defaults: ${groupHash(plan.designHash)}`,
        `Required of the chain: gain ${figure(plan.required.gain, '')} V/${plan.required.per}, offset ${figure(plan.required.offset, 'V')}, onto ${target}.`,
        'To compute it again: write the values in bold into a design file and run "npm run --silent plan -- design.json", or send the file to /api/plan. The same engine gives the same plan to the last digit.',
        'A changed design has another hash: compare it with the one above before relying on a copy.',
      ],
    },
  ])
}

/** Groups of eight, so that a full hash can wrap and be read out. */
const groupHash = (hash: string): string => (hash.match(/.{1,8}/g) ?? []).join(' ')
