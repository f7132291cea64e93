import { readdirSync, readFileSync } from 'node:fs'
import { describe, expect, it } from 'vitest'
import { planDesign } from '#shared/design/plan-design.ts'
import { designSchema, type DesignDocument } from '#shared/design/schema.ts'
import { buildNote } from '#shared/note/build-note.ts'
import type { Note, NoteContext, Table } from '#shared/note/types.ts'
import {
  buildStressPlan,
  infeasiblePlan,
  resistor,
  sampleBudget,
  sampleCandidate,
  sampleContext,
  sampleDocument,
  sampleLine,
  samplePlan,
} from './sample.ts'

const sample = (changes: Partial<NoteContext> = {}) =>
  buildNote({ document: sampleDocument, plan: samplePlan, context: { ...sampleContext, ...changes } })

const tables = (note: Note): Table[] =>
  note.groups.flatMap((group) =>
    group.sections.flatMap((section) =>
      section.blocks.flatMap((block) => (block.type === 'table' ? [block.table] : [])),
    ),
  )

const section = (note: Note, id: string) =>
  note.groups.flatMap((group) => group.sections).find((candidate) => candidate.id === id)

/** Words apart from no-break spaces, for reading in a test. */
const plain = (text: string | undefined) => (text ?? '').replaceAll('\u00a0', ' ')

describe('answers of the first sheet', () => {
  const [linear, room, error, code] = sample().first.answers

  it('gives the linear range of the worst board, each end rounded towards the span', () => {
    // After S1: low limit met at −2.51270 m/s; sensor: high limit at 2.545000 m/s.
    expect(plain(linear?.figure)).toBe('−2.512 m/s to 2.545 m/s')
    expect(plain(linear?.small[0])).toBe('Required: −2.5 m/s to 2.5 m/s')
    expect(plain(linear?.small[1])).toContain('−2.562 m/s to 2.595 m/s')
  })

  it('gives the least room of all nodes with its pin and the rule', () => {
    expect(plain(room?.figure)).toBe('0.4 % over')
    expect(room?.small.join(' ')).toContain('Below, U1 output')
    expect(plain(room?.small.join(' '))).toContain('Rule: 3 %')
  })

  it('turns the errors at the converter into the measurand, rounded up', () => {
    // A tenth of each limit is left: 1.8·√(3.1² + 0.77²)·0.1 mV/√3 over 0.48008 V/(m/s) = 691.5 μm/s.
    expect(plain(error?.figure)).toBe('±692 μm/s')
    expect(plain(error?.small[0])).toBe('No target is stated')
    // 3.87 mV over 0.48008 V/(m/s) = 8.061 mm/s.
    expect(plain(error?.small[1])).toBe('As built, worst case: ±8.1 mm/s')
  })

  it('gives one code in the measurand and the codes used', () => {
    // 2.5 V/2^14 over 0.48008 V/(m/s) = 317.84 μm/s.
    expect(plain(code?.figure)).toBe('318 μm/s')
    expect(plain(code?.small[0])).toBe('15 732 of 16 384 codes used')
  })

  it('counts only whole codes as used', () => {
    const realised = sampleCandidate.realised && { ...sampleCandidate.realised, codesUsed: 15732.9 }
    const plan = { ...samplePlan, candidates: [{ ...sampleCandidate, ...(realised ? { realised } : {}) }] }
    const answers = buildNote({ document: sampleDocument, plan, context: sampleContext }).first.answers
    expect(plain(answers[3]?.small[0])).toBe('15 732 of 16 384 codes used')
  })

  it('does not say that more codes are used than there are', () => {
    const realised = sampleCandidate.realised && { ...sampleCandidate.realised, codesUsed: 25168 }
    const plan = { ...samplePlan, candidates: [{ ...sampleCandidate, ...(realised ? { realised } : {}) }] }
    const answers = buildNote({ document: sampleDocument, plan, context: sampleContext }).first.answers
    expect(plain(answers[3]?.small[0])).toBe('The span asks for 25 168 of 16 384 codes')
  })

  it('marks a linear range that does not reach the required span as over', () => {
    const levels = sampleCandidate.levels?.map((level) => ({
      ...level,
      worstClipsAt: { low: -2.9, high: 2.16 },
    }))
    const plan = { ...samplePlan, candidates: [{ ...sampleCandidate, levels: levels ?? [] }] }
    const [answer] = buildNote({ document: sampleDocument, plan, context: sampleContext }).first.answers
    expect(answer?.state).toBe('over')
    expect(plain(answer?.figure)).toBe('−2.90 m/s to 2.16 m/s')
  })

  it('says in words where one end is never met', () => {
    const levels = sampleCandidate.levels?.map((level) => ({
      ...level,
      worstClipsAt: { low: null, high: 2.7 },
    }))
    const plan = { ...samplePlan, candidates: [{ ...sampleCandidate, levels: levels ?? [] }] }
    const [answer] = buildNote({ document: sampleDocument, plan, context: sampleContext }).first.answers
    expect(plain(answer?.figure)).toBe('up to 2.7 m/s')
  })
})

describe('parts table', () => {
  const rows = (plan = samplePlan) =>
    buildNote({ document: sampleDocument, plan, context: sampleContext }).first.parts?.table.rows.map((row) =>
      row.cells.map(plain),
    ) ?? []

  it('lists wanted and chosen values with their series, and leaves out what nobody buys', () => {
    expect(rows()[0]).toEqual(['R1', 'Offset, S1', '24.93 kΩ', '24k9', 'E96, 0.1 %'])
    expect(rows().at(-1)).toEqual(['C9', 'Corner, filter', '100 nF', '100n', 'E6, 5 %, C0G'])
    expect(rows().flat()).not.toContain('RSOURCE')
  })

  it('puts parts that are alike in everything on one line', () => {
    const components = [
      resistor('R2', 24900, 24931, 'Gain, S1'),
      resistor('R3', 24900, 24931, 'Gain, S1'),
      resistor('R4', 24900, 24931, 'Offset, S1'),
    ]
    const plan = { ...samplePlan, candidates: [{ ...sampleCandidate, components }] }
    expect(rows(plan).map((row) => row[0])).toEqual(['R2, R3', 'R4'])
  })

  it('says which values a person fixed', () => {
    const components = [{ ...resistor('R2', 24900, 24931, 'Gain, S1'), chosen: true }]
    const plan = { ...samplePlan, candidates: [{ ...sampleCandidate, components }] }
    expect(rows(plan)[0]?.[4]).toBe('fixed by hand, 0.1 %')
  })
})

describe('marks and record', () => {
  it('marks every state before release as draft', () => {
    expect(sample().head.mark).toBe('Draft, not for manufacture')
    expect(sample({ status: 'in review' }).head.mark).toBe('Draft, not for manufacture')
    expect(sample({ status: 'superseded' }).head.mark).toMatch(/^Superseded/)
    expect(sample({ status: 'released' }).head.mark).toBeNull()
  })

  it('fills four fields in each of the three rows of the title block', () => {
    const block = sample().first.titleBlock
    expect(block.map((row) => row.length)).toEqual([4, 4, 4])
    const fields = Object.fromEntries(block.flat().map((field) => [field.label, field.value]))
    expect(fields).toMatchObject({
      Title: 'Flow velocity, older logger',
      'Identification no.': 'QH-0412',
      'Legal owner': 'Quellmoor Hydrometry',
      'Created by': 'I. Sorrelby',
      Status: 'Draft',
      'Date of issue': '2026-04-17',
      Language: 'en',
    })
  })

  it('says so where there is no number yet', () => {
    expect(sample({ number: null }).head.number).toBe('Design note, not numbered')
  })

  it('prints the whole hash once and its first 64 bits on each sheet', () => {
    const note = sample()
    expect(JSON.stringify(section(note, 'record')).replaceAll(' ', '')).toContain(samplePlan.designHash)
    expect(note.foot.left).toContain('5f0c 91ae 77d2 0b4e')
  })

  it('is the same for the same input', () => {
    expect(sample()).toEqual(sample())
  })
})

describe('a plan that cannot be built', () => {
  const note = buildNote({ document: sampleDocument, plan: infeasiblePlan, context: sampleContext })

  it('says so first, with the reason of each candidate', () => {
    expect(note.first.refusal?.text).toMatch(/^No arrangement can do this/)
    expect(note.first.refusal?.reasons).toEqual([
      'Direct connection: a gain of 3.429 is needed, a wire has 1.',
      'Inverting amplifier: needs a negative rail: the output would go to −0.31 V.',
    ])
    expect(note.first.purpose).toMatch(/^Asked for:/)
  })

  it('numbers its tables from 1', () => {
    expect(section(note, 'candidates')?.title).toBe('Table 1. Candidates considered')
    expect(section(sample(), 'picks')?.title).toMatch(/^Table 2/)
  })

  it('has no parts, no answers and no schematic', () => {
    expect(note.first.parts).toBeNull()
    expect(note.first.schematic).toBeNull()
    expect(note.first.answers).toEqual([])
  })

  it('names the arrangement that a person asked for when that one is not possible', () => {
    const plan = { ...samplePlan, candidates: samplePlan.candidates.slice(1), chosen: 1 }
    const asked = buildNote({ document: sampleDocument, plan, context: sampleContext })
    expect(asked.first.refusal?.text).toContain('inverting amplifier, is not possible here')
    expect(asked.first.parts).toBeNull()
  })
})

describe('later sheets', () => {
  it('has every section of a complete plan, each with its own anchor', () => {
    const ids = sample().groups.flatMap((group) => group.sections.map(({ id }) => id))
    expect(ids).toEqual([
      'findings',
      'equations',
      'picks',
      'headroom',
      'model',
      'loads',
      'over-voltage',
      'errors',
      'filter',
      'transfer',
      'assumptions',
      'cautions',
      'candidates',
      'record',
      'netlist',
      'values',
    ])
  })

  it('leaves out what the plan has not computed', () => {
    const { budget: _, model: __, loads: ___, ...candidate } = sampleCandidate
    const plan = { ...samplePlan, candidates: [candidate] }
    const note = buildNote({ document: sampleDocument, plan, context: sampleContext })
    expect(section(note, 'errors')).toBeUndefined()
    expect(section(note, 'model')).toBeUndefined()
    expect(section(note, 'loads')).toBeUndefined()
  })

  it('gives every row as many cells as the table has columns', () => {
    const stress = buildNote({ document: sampleDocument, plan: buildStressPlan(), context: sampleContext })
    for (const table of [...tables(sample()), ...tables(stress)])
      for (const row of table.rows) expect(row.cells).toHaveLength(table.columns.length)
  })

  it('names the parts of a second stage as they are drawn', () => {
    const plan = buildStressPlan()
    const [candidate] = plan.candidates
    const picks = candidate?.picks?.map((pick) => ({ ...pick, values: { R1: 11000 } })) ?? []
    const equations = [{ name: 'Gain, S2', symbolic: 'G = 1 + R1/R99', numeric: 'G = 2' }]
    const note = buildNote({
      document: sampleDocument,
      plan: { ...plan, candidates: [{ ...candidate!, picks, equations }] },
      context: sampleContext,
    })
    expect(JSON.stringify(section(note, 'picks'))).toContain('R1B 11k')
    expect(JSON.stringify(section(note, 'equations'))).toContain('1 + R1B/R99')
  })

  it('sums the smallest lines of the budget so that the table adds up to the worst case', () => {
    const budget = sampleBudget(
      Array.from({ length: 30 }, (_, i) =>
        sampleLine(`R${i}.initial`, `R${i}`, `R${i}`, {
          limit: 1e-3,
          unit: '',
          asBuilt: 1e-3,
          share: 1 / 30,
        }),
      ),
    )
    const plan = { ...samplePlan, candidates: [{ ...sampleCandidate, budget }] }
    const note = buildNote({ document: sampleDocument, plan, context: sampleContext })
    const rows = tables(note).find((table) => table.columns[0]?.title === 'What varies')?.rows ?? []
    expect(rows.at(-1)?.cells[0]).toBe('All others, 14 lines')
    // In codes, every figure rounded up at its second digit.
    const sum = rows.reduce((total, row) => total + Number(/[\d.]+/.exec(row.cells[4] ?? '')?.[0]), 0)
    const codes = budget.totals.calibrated.worst / samplePlan.lsb
    expect(sum).toBeGreaterThanOrEqual(codes)
    expect(sum).toBeLessThan(codes * 1.05)
  })
})

describe('design values', () => {
  const values = (document: DesignDocument) => {
    const note = buildNote({ document, plan: samplePlan, context: sampleContext })
    const block = section(note, 'values')?.blocks.find((candidate) => candidate.type === 'values')
    return block?.type === 'values' ? block.groups.flatMap((group) => group.rows) : []
  }

  it('lists every input, default or given', () => {
    const leaves = (value: unknown): number =>
      typeof value === 'object' && value !== null && !Array.isArray(value)
        ? Object.values(value).reduce<number>((sum, inner) => sum + leaves(inner), 0)
        : value === undefined
          ? 0
          : 1
    const design = designSchema.parse(sampleDocument)
    // `format` is printed in the record.
    expect(values(sampleDocument)).toHaveLength(leaves(design) - 1)
  })

  it('tells given values from defaults and writes each with its unit', () => {
    const row = (label: string) => values(sampleDocument).find((candidate) => candidate.label === label)
    expect(row('Source resistance')).toEqual({ label: 'Source resistance', value: '100\u00a0Ω', given: true })
    expect(row('Gain-bandwidth product')).toEqual({
      label: 'Gain-bandwidth product',
      value: '10\u00a0MHz',
      given: false,
    })
    expect(plain(row('Rail tolerance')?.value)).toBe('5 %')
    expect(plain(row('Measurand, low end')?.value)).toBe('−2.5 m/s')
  })

  it('writes values fixed by hand in code', () => {
    const rows = values({ ...sampleDocument, choose: { values: { R4: 25500, C9: 4.7e-9 } } })
    expect(rows.find((row) => row.label === 'R4')?.value).toBe('25k5')
    expect(rows.find((row) => row.label === 'C9')?.value).toBe('4n7')
  })

  it('keeps remarks as they were written', () => {
    const rows = values({ ...sampleDocument, notes: { cabinet: 'north wall', shelf: 3 } })
    expect(rows.slice(-2).map((row) => [row.label, row.value])).toEqual([
      ['cabinet', 'north wall'],
      ['shelf', '3'],
    ])
  })
})

describe.each(readdirSync('docs/examples').filter((file) => file.endsWith('.json')))('example %s', (file) => {
  const document = JSON.parse(readFileSync(`docs/examples/${file}`, 'utf8')) as DesignDocument
  const plan = planDesign(document)
  const note = buildNote({ document, plan, context: sampleContext })

  it('makes a complete note without a figure that is not known', () => {
    expect(note.first.refusal).toBeNull()
    expect(note.first.answers).toHaveLength(4)
    expect(JSON.stringify(note)).not.toMatch(/NaN|undefined|Infinity|\[object/)
    for (const answer of note.first.answers) expect(answer.figure).toMatch(/\d/)
  })

  it('calls the references by name in its tables, not by node', () => {
    expect(JSON.stringify(tables(note))).not.toMatch(/vadcref|vref/)
    const loads = plan.candidates[plan.chosen ?? 0]?.loads ?? []
    const named = tables(note).find((table) => table.columns[1]?.title === 'Drawn from it')
    expect(named?.rows.map((row) => row.cells[0]) ?? []).toEqual(
      loads.map(({ node }) => (node === 'vadcref' ? 'Converter reference' : 'Shift reference')),
    )
  })

  it('agrees with the plan about the least room', () => {
    const chosen = plan.candidates[plan.chosen ?? 0]
    const least = Math.min(...(chosen?.levels ?? []).flatMap((level) => [level.room.low, level.room.high]))
    const printed = Number(/[\d.]+/.exec(note.first.answers[1]?.figure ?? '')?.[0]) / 100
    expect(printed).toBeLessThanOrEqual(least)
    expect(printed).toBeGreaterThan(least - 0.001)
  })
})
