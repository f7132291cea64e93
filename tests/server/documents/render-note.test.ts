import { createHash } from 'node:crypto'
import { readFileSync } from 'node:fs'
import { beforeAll, describe, expect, it } from 'vitest'
import { toPrintable } from '#server/documents/glyphs.ts'
import { studyChosen } from '#server/documents/make-note.tsx'
import { renderNote } from '#server/documents/render-note.ts'
import { planDesign } from '#shared/design/plan-design.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import { buildNote, type NoteInput } from '#shared/note/build-note.ts'
import { buildStressPlan, infeasiblePlan, sampleContext, sampleDocument } from '#tests/shared/note/sample.ts'
import { readPdf, readSheets, squeeze } from './poppler.ts'

const hashOf = (pdf: Buffer) => createHash('sha256').update(pdf).digest('hex')

const readExample = (name: string): DesignDocument =>
  JSON.parse(readFileSync(`docs/examples/${name}.json`, 'utf8')) as DesignDocument

/** Keys of a note that say how, not what. */
const silent = new Set(['id', 'type', 'align', 'levels', 'state', 'draws'])

/** Every text of a note; lines of code by their words, since a long one is set on. */
function textsOf(value: unknown): string[] {
  if (typeof value === 'string') return [value]
  if (Array.isArray(value)) return value.flatMap(textsOf)
  if (typeof value === 'object' && value !== null) {
    return Object.entries(value).flatMap(([key, inner]) => (silent.has(key) ? [] : textsOf(inner)))
  }
  return []
}

/** All texts on the sheets; titles of groups stand in the outline only. */
function printable(input: NoteInput): string[] {
  const { head, foot, first, groups } = buildNote({ ...input, spread: studyChosen(input).spread })
  return textsOf([head, foot, first, groups.map(({ sections }) => sections)])
}

function expectAllPrinted(pdf: Buffer, input: NoteInput): void {
  const printed = squeeze(readSheets(pdf).join('\n'))
  expect(printable(input).filter((text) => !printed.includes(squeeze(toPrintable(text))))).toEqual([])
}

describe('a note on A4', () => {
  const document = readExample('flow-velocity')
  const plan = planDesign(document)
  const input: NoteInput = { document, plan, context: sampleContext }
  let pdf: Buffer
  let sheets: string[]

  beforeAll(async () => {
    pdf = await renderNote(input)
    sheets = readSheets(pdf)
  })

  it('prints every text and figure of the note', () => {
    expectAllPrinted(pdf, input)
  })

  it('prints the values of the chosen parts in the schematic and the table', () => {
    const first = sheets[0] ?? ''
    const chosen = plan.candidates[plan.chosen ?? 0]
    const resistors = chosen?.components?.filter((part) => part.kind === 'resistor' && !part.fixed) ?? []
    expect(resistors.length).toBeGreaterThan(2)
    const rows = buildNote(input).first.parts?.table.rows ?? []
    for (const row of rows) {
      const value = row.cells[3] ?? ''
      expect(first.split(value).length - 1, value).toBeGreaterThanOrEqual(2)
    }
  })

  it('has the answers, figures, parts and title block on the first sheet', () => {
    for (const text of [
      'Linear over',
      'Figure 1. Levels',
      'Figure 2. Signal chain',
      'Table 1.',
      'Holds only if',
      'Legal owner',
    ])
      expect(sheets[0]).toContain(text)
  })

  it('marks every sheet as a draft and numbers it', () => {
    expect(sheets.length).toBeGreaterThanOrEqual(4)
    sheets.forEach((sheet, index) => {
      expect(sheet).toContain('Draft, not for manufacture')
      expect(sheet).toContain(`${index + 1} of ${sheets.length}`)
    })
  })

  it('carries title, author, language and the date of issue', () => {
    const info = readPdf(pdf, 'pdfinfo', '-isodates')
    expect(info).toContain('Title:           Flow velocity – Design note QH-0412')
    expect(info).toContain('Author:          I. Sorrelby')
    expect(info).toContain('CreationDate:    2026-04-17T')
    expect(info).toMatch(/Page size: +595\.28 x 841\.89/)
    expect(/Lang \((\w+)\)/.exec(pdf.toString('latin1'))?.[1]).toBe('en')
  })

  it('has an outline of its sections and links to them', () => {
    const raw = pdf.toString('latin1')
    const titles = [...raw.matchAll(/\/Title \(([^)]*)\)/g)].map((match) => match[1])
    expect(/\/Outlines (\d+) 0 R/.exec(raw)?.[1]).toBeDefined()
    for (const title of ['Equations of the arrangement', 'Netlist', 'Record', 'Figure 1. Levels'])
      expect(titles).toContain(title)
    for (const { title } of buildNote(input).groups) expect(titles).toContain(title)
    for (const { id } of buildNote(input).groups.flatMap((group) => group.sections))
      expect(raw.includes(`(${id})`), id).toBe(true)
  })

  it('embeds subsets of its own fonts and no other', () => {
    const lines = readPdf(pdf, 'pdffonts').trim().split('\n').slice(2)
    expect(lines.length).toBeGreaterThanOrEqual(3)
    for (const line of lines) {
      expect(line).toMatch(/^[A-Z]{6}\+Roboto/)
      expect(line).toMatch(/yes yes yes/)
    }
  })

  it('gives the same bytes when it is made again', async () => {
    expect(hashOf(await renderNote(input))).toBe(hashOf(pdf))
  })
})

describe('a note on Letter', () => {
  it('has the same text block, so that all texts are there too', async () => {
    const document = readExample('stilling-well-level')
    const input: NoteInput = {
      document,
      plan: planDesign(document),
      context: { ...sampleContext, paper: 'Letter', symbols: 'ansi' },
    }
    const pdf = await renderNote(input)
    expect(readPdf(pdf, 'pdfinfo')).toMatch(/Page size: +612 x 792/)
    expectAllPrinted(pdf, input)
  })
})

describe('a note of a plan that cannot be built', () => {
  it('says so before anything else and leaves out parts and netlist', async () => {
    const input: NoteInput = { document: sampleDocument, plan: infeasiblePlan, context: sampleContext }
    const pdf = await renderNote(input)
    const sheets = readSheets(pdf)
    expectAllPrinted(pdf, input)
    const first = sheets[0] ?? ''
    expect(first.indexOf('No arrangement can do this')).toBeLessThan(first.indexOf('Asked for'))
    expect(sheets.join('')).not.toMatch(/Parts that set the answer|Signal chain|SPICE/)
  })
})

describe('a note with more than usual', () => {
  const document: DesignDocument = {
    ...sampleDocument,
    name: 'Stilling-well level at gauging station 4, second channel behind the boiler house, 水位',
    notes: { 'with a very long key that goes on': 'x'.repeat(400) },
  }
  const input: NoteInput = { document, plan: buildStressPlan(), context: sampleContext }

  it('loses nothing of many parts, pins, candidates and long lines', async () => {
    const pdf = await renderNote(input)
    const printed = squeeze(readSheets(pdf).join('\n'))
    const missing = printable(input).filter((text) => !printed.includes(squeeze(toPrintable(text))))
    expect(missing.filter((text) => !text.startsWith('xxx'))).toEqual([])
    expect(printed.match(/x/g)?.length).toBeGreaterThanOrEqual(400)
    expect(printed).toContain('U+6C34,U+4F4D')
  })
})
