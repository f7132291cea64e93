import { describe, expect, it } from 'vitest'
import { findingsInShort } from '#client/features/plan/frame/findings-column.tsx'
import { listFindings, pressing, splitHeadline, toDraftPath } from '#client/features/plan/words/findings.ts'
import { answerSteps } from '#client/features/plan/words/step-answers.ts'
import { stepOfPath, steps } from '#client/features/plan/words/steps.ts'
import { emptyDocument, examples, firstExample } from '#client/features/plan/examples.ts'
import { changeKind } from '#client/features/plan/steps/sensor-step.tsx'
import { toPartsCsv } from '#client/features/plan/review/parts-csv.ts'
import { toSummary } from '#client/features/plan/review/summary.ts'
import { fileName } from '#client/features/plan/review/downloads.tsx'
import { fieldAt, leavesOf } from '#client/features/plan/form/introspect.ts'
import type { PlanState } from '#client/features/plan/session/plan-session.ts'
import type { Component } from '#shared/design/plan.ts'
import { planDesign } from '#shared/design/plan-design.ts'
import { readDesign } from '#shared/design/read.ts'

const state = (more: Partial<PlanState>): PlanState => ({
  planned: null,
  status: 'refused',
  faults: [],
  message: null,
  at: null,
  ...more,
})

const faultsOf = (document: unknown) => {
  const read = readDesign(document)
  return read.ok ? [] : read.faults
}

describe('findings', () => {
  it('show the first sentence as a headline, whatever decimals it holds', () => {
    expect(splitHeadline('Clips at 5.016 m. 5.20 m is required: short by 0.184 m.')).toEqual({
      title: 'Clips at 5.016 m',
      text: '5.20 m is required: short by 0.184 m.',
    })
    expect(splitHeadline('Needs a negative rail: U1 output would go to −0.31 V.')).toEqual({
      title: 'Needs a negative rail',
      text: 'U1 output would go to −0.31 V.',
    })
    expect(splitHeadline('Nothing fits.')).toEqual({ title: 'Nothing fits', text: '' })
  })

  it('call what is missing an open question and what is wrong a fault', () => {
    const faults = faultsOf(emptyDocument)
    const open = listFindings({
      document: emptyDocument,
      typed: {},
      planning: state({ faults }),
      candidate: null,
      sensorKind: 'voltage',
    })
    expect(open.map(({ severity }) => severity)).toEqual(faults.map(() => 'open'))
    expect(open.find(({ path }) => path === 'sensor.output')?.text).toContain(
      'sensor output, low; sensor output, high',
    )

    const wrong = { ...firstExample, rails: { positive: 0 } }
    const list = listFindings({
      document: wrong,
      typed: {},
      planning: state({ faults: faultsOf(wrong) }),
      candidate: null,
      sensorKind: 'voltage',
    })
    expect(list).toMatchObject([{ severity: 'over', step: 'converter', path: 'rails.positive' }])
  })

  it('put text that cannot be read first, and only once', () => {
    const list = listFindings({
      document: firstExample,
      typed: { 'sensor.output.high': { text: '0,3x', reason: 'not a number' } },
      planning: state({ faults: [{ path: 'sensor.output.high', reason: 'x', accepted: 'y' }] }),
      candidate: null,
      sensorKind: 'voltage',
    })
    expect(list.map(({ title }) => title)).toEqual(['Sensor output, high cannot be read'])
  })

  it('read list items of a path as the draft writes them', () => {
    expect(toDraftPath('choose.stages[0].gain')).toBe('choose.stages.0.gain')
  })
})

describe('the head of a narrow page', () => {
  const note = {
    key: 'a',
    severity: 'caution' as const,
    title: 'Clamp current',
    text: '',
    path: null,
    step: 'errors' as const,
  }
  it('counts what asks for work, else what is to be noted', () => {
    expect(findingsInShort([])).toBe('No findings')
    expect(findingsInShort([note, { ...note, key: 'b' }])).toBe('2 to note')
    expect(findingsInShort([note, { ...note, key: 'b', severity: 'tight' }])).toBe('1 finding')
  })
})

describe('steps', () => {
  it('are home to every field of the design', () => {
    for (const section of [
      'name',
      'sensor',
      'converter',
      'rails',
      'shiftReference',
      'parts',
      'temperature',
      'target',
    ])
      for (const spec of leavesOf(fieldAt(section, 'voltage')))
        expect(stepOfPath(spec.path), spec.path).not.toBe('review')
  })

  it('say what they have answered, and the review what it waits for', () => {
    const plan = planDesign(firstExample)
    const candidate = plan.candidates[plan.chosen ?? -1] ?? null
    const answers = answerSteps({ document: firstExample, findings: [], candidate, awaited: false })
    expect(answers.map(({ state }) => state)).toEqual(steps.map(() => 'done'))
    expect(answers.map(({ text }) => text.replaceAll('\u00a0', ' ')).slice(0, 3)).toEqual([
      '−2.5 to 2.5 m/s',
      '−0.35 to 0.35 V',
      '0 to 2.5 V, 14 bit',
    ])
    const findings = listFindings({
      document: emptyDocument,
      typed: {},
      planning: state({ faults: faultsOf(emptyDocument) }),
      candidate: null,
      sensorKind: 'voltage',
    })
    expect(pressing(findings).length).toBeGreaterThan(3)
    const open = answerSteps({ document: emptyDocument, findings, candidate: null, awaited: false })
    expect(open.at(-1)).toMatchObject({ state: 'open', text: 'waits for 1, 2, 3' })
    expect(open.map(({ state }) => state)).not.toContain('over')
  })
})

describe('examples', () => {
  it.each(examples)('$title is a design that can be built', ({ document }) => {
    const plan = planDesign(document)
    expect(plan.chosen).not.toBeNull()
    expect(plan.candidates[plan.chosen ?? -1]?.feasible).toBe(true)
  })
})

describe('another sensor kind', () => {
  it('keeps the measurand and what both kinds know, and drops what means another thing', () => {
    const before = { ...firstExample.sensor, beyond: { low: -0.4, high: 0.4 }, sourceResistance: 100 }
    const after = changeKind(before, 'bridge')
    expect(after).toMatchObject({
      kind: 'bridge',
      quantity: firstExample.sensor.quantity,
      sourceResistance: 100,
    })
    expect(after).not.toHaveProperty('output')
    expect(after).not.toHaveProperty('beyond')
  })
})

describe('the review', () => {
  it('lists every given value, and leads back to its field', () => {
    const read = readDesign(firstExample)
    const groups = toSummary({ ...firstExample }, read.ok ? read.design : null, null)
    const lines = groups.flatMap((group) => group.lines)
    const text = (path: string) => lines.find((line) => line.path === path)?.text.replaceAll('\u00a0', ' ')
    expect(text('sensor.output.low')).toBe('−0.35 V')
    expect(text('converter.sampleRate')).toBe('1 kHz')
    expect(text('rails.tolerance')).toBe('2 %')
    expect(lines.find((line) => line.path === 'temperature.low')).toMatchObject({ given: false })
  })

  it('lists no answer of a group that was never begun', () => {
    const lines = toSummary({ ...firstExample }, null, null).flatMap((group) => group.lines)
    expect(lines.some((line) => line.path.startsWith('sensor.fault'))).toBe(false)
    expect(lines.some((line) => line.path.startsWith('converter.guard'))).toBe(false)
  })
})

describe('downloads', () => {
  const part = (more: Partial<Component>): Component => ({
    ref: 'R1',
    kind: 'resistor',
    value: 4700,
    tolerance: 0.001,
    nodes: [],
    fixed: false,
    group: null,
    stage: 'S1',
    sets: 'Gain',
    chosen: false,
    ...more,
  })

  it('keep text that a spreadsheet would run as a formula from being one, and numbers as numbers', () => {
    const csv = toPartsCsv([part({ sets: '=1+1' }), part({ ref: 'U1', name: 'say "sedge", twice' })])
    const lines = csv.split('\r\n')
    expect(lines[1]).toBe("R1,resistor,4700,Ohm,0.001,,'=1+1,S1,no")
    expect(lines[2]).toContain('"say ""sedge"", twice"')
    expect(lines[3]).toBe('')
  })

  it('leave out what is not bought', () => {
    expect(toPartsCsv([part({ fixed: true })]).split('\r\n')).toHaveLength(2)
  })

  it('have names that every file system takes', () => {
    expect(fileName('Level: a/b?')).toBe('Level- a-b-')
    expect(fileName('...')).toBe('plan')
  })
})
