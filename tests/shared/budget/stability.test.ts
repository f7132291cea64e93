import { readFileSync } from 'node:fs'
import { describe, expect, it } from 'vitest'
import { findCrossover } from '#shared/analysis/stability.ts'
import { responseChain } from '#shared/budget/response-chain.ts'
import { checkStability, withSampling } from '#shared/budget/stability.ts'
import { planDesign } from '#shared/design/plan-design.ts'
import type { StabilityEntry } from '#shared/design/plan.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import { layoutSchematic } from '#shared/schematic/layout.ts'
import {
  arrangementDesigns,
  buildConverter,
  buildDesign,
  buildSensor,
  withExactResistors,
} from '#tests/support/designs.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { buildTrial, parseDesign } from '#tests/support/trials.ts'

function stabilityOf(document: DesignDocument, id: string): StabilityEntry[] {
  const design = parseDesign({ ...document, choose: { ...document.choose, arrangement: id } })
  return checkStability(design, buildTrial(design, id).spec)
}

/** The document with further values fixed. */
const fixing = (document: DesignDocument, values: Record<string, number>): DesignDocument => ({
  ...document,
  choose: { ...document.choose, values: { ...document.choose?.values, ...values } },
})

const bare = { phaseMargin: 90, cin: { common: 0, differential: 0 } }
const follower = (series: number, more: Partial<DesignDocument> = {}): DesignDocument =>
  buildDesign({
    sensor: buildSensor(0.2, 2.2, { sourceResistance: 0 }),
    parts: { amplifier: bare, capacitors: { tolerance: 0.1, drift: 0 } },
    choose: { values: { R9: series, C9: 1e-8 } },
    ...more,
  })

describe('an amplifier into a reservoir', () => {
  it('of 10 nF straight at its 100 Ω output has 7° left; behind 100 Ω more it has 89°', () => {
    const [straight] = stabilityOf(follower(1e-3), 'follower')
    expect(Math.round(straight?.phaseMargin ?? NaN)).toBe(7)
    expect(straight?.state).toBe('over')
    const [behind] = stabilityOf(follower(100), 'follower')
    expect(Math.round(behind?.phaseMargin ?? NaN)).toBe(89)
    expect(behind?.state).toBe('clear')
    expect(behind?.cures).toEqual([])
  })

  it('is worst at an end of the capacitor that the tolerance allows', () => {
    const [entry] = stabilityOf(follower(1e-3), 'follower')
    const ends = [0.9, 1.1].map((factor) => {
      const [moved] = stabilityOf(fixing(follower(1e-3), { C9: factor * 1e-8 }), 'follower')
      return moved?.phaseMargin ?? NaN
    })
    expectClose(entry?.worst ?? NaN, Math.min(...ends), { absolute: 1e-6 })
    expect(entry?.worst).toBeLessThan(entry?.phaseMargin ?? NaN)
  })

  it('is cured by the smallest larger resistor that reaches 60°, as planning with it shows', () => {
    const [entry] = stabilityOf(follower(1e-3), 'follower')
    const cure = entry?.cures.find((c) => c.kind === 'series-resistor')
    expect(cure?.values.C9).toBe(1e-8)
    const [cured] = stabilityOf(fixing(follower(1e-3), cure?.values ?? {}), 'follower')
    expectClose(cured?.worst ?? NaN, cure?.phaseMargin ?? NaN, { absolute: 0.01 })
    expect(cured?.worst).toBeGreaterThanOrEqual(60)
    const [before] = stabilityOf(fixing(follower(1e-3), { R9: (cure?.value ?? NaN) / 1.03 }), 'follower')
    expect(before?.worst).toBeLessThan(60)
    expect(cure?.text).toContain('R9')
  })

  it('has no feedback capacitor to offer where it follows', () => {
    const [entry] = stabilityOf(follower(1e-3), 'follower')
    expect(entry?.cures.map((c) => c.kind)).toEqual(['series-resistor'])
  })

  it('is loaded by the sampling capacitor as well', () => {
    const small = { choose: { values: { R9: 1e-3, C9: 1e-12 } } }
    const [without] = stabilityOf(follower(1, small), 'follower')
    expect(without?.phaseMargin).toBeGreaterThan(85)
    const converter = buildConverter({ samplingCapacitance: 1e-8 })
    const [loaded] = stabilityOf(follower(1, { ...small, converter }), 'follower')
    expect(Math.round(loaded?.phaseMargin ?? NaN)).toBe(7)
    const behind = buildConverter({ samplingCapacitance: 1e-8, switchResistance: 100 })
    const [switched] = stabilityOf(follower(1, { ...small, converter: behind }), 'follower')
    expect(Math.round(switched?.phaseMargin ?? NaN)).toBe(89)
  })
})

describe('an amplifier with capacitance at its − input', () => {
  const [id, document] = arrangementDesigns.find(([name]) => name === 'three-amplifier')!
  const entries = stabilityOf(document, id)

  it('is cured by the smallest capacitor across its feedback, as planning with it shows', () => {
    const sick = entries.filter((e) => e.cures.length > 0)
    expect(sick.length).toBeGreaterThan(0)
    const values = Object.assign({}, ...sick.map((e) => e.cures.at(-1)?.values)) as Record<string, number>
    const cured = stabilityOf(fixing(document, values), id)
    for (const entry of cured) expect(entry.worst).toBeGreaterThanOrEqual(45)
    for (const { amplifier, cures } of sick) {
      const alone = stabilityOf(fixing(document, cures.at(-1)?.values ?? {}), id)
      const found = alone.find((e) => e.amplifier === amplifier)
      expectClose(found?.worst ?? NaN, cures.at(-1)?.phaseMargin ?? NaN, { absolute: 0.01 })
      expect(found?.state).toBe('clear')
    }
  })

  it('has that capacitor in parts, netlist and drawing', () => {
    const plan = planDesign(withExactResistors(fixing(document, { CU1: 1e-11, CU4: 1e-11 })))
    const candidate = plan.candidates.find((c) => c.arrangement === id)
    const part = candidate?.components?.find((c) => c.ref === 'CU1')
    expect(part).toMatchObject({ kind: 'capacitor', value: 1e-11, chosen: true, sets: 'Steadies U1' })
    expect(candidate?.netlist).toMatch(/^CU1 /m)
    // U4 buffers the level: it follows, and there is no place for one
    expect(candidate?.components?.some((c) => c.ref === 'CU4')).toBe(false)
    expect(candidate?.findings?.some((f) => f.path === 'choose.values.CU4')).toBe(true)
    const design = parseDesign(fixing(document, { CU1: 1e-11 }))
    const drawing = layoutSchematic(responseChain(design, buildTrial(design, id).spec).network)
    expect(drawing.listed).toBe(false)
    expect(drawing.parts.some((p) => p.ref === 'CU1')).toBe(true)
  })

  it('is judged by the states of the rule', () => {
    for (const { worst, state } of entries)
      expect(state).toBe((worst ?? 90) < 30 ? 'over' : (worst ?? 90) < 45 ? 'tight' : 'clear')
  })
})

describe('every arrangement', () => {
  it.each(arrangementDesigns)('%s has a crossover for each amplifier of its own', (id, document) => {
    const design = parseDesign(document)
    const { spec } = buildTrial(design, id)
    const network = withSampling(design, responseChain(design, spec).network)
    const own = network.elements.flatMap((e) => (e.kind === 'amplifier' && !e.macro ? [e.ref] : []))
    const entries = checkStability(design, spec)
    expect(entries.map((e) => e.amplifier)).toEqual(own)
    for (const entry of entries) {
      const found = findCrossover(network, entry.amplifier, { poles: 2 })
      expect(entry.crossover).toBe(found?.frequency)
      expect(entry.worst).toBeLessThanOrEqual(entry.phaseMargin ?? NaN)
      if (entry.state !== 'clear') expect(entry.cures.length).toBeGreaterThan(0)
    }
  })
})

describe('a drive that makes the amplifier oscillate', () => {
  const document = JSON.parse(readFileSync('docs/examples/flow-velocity.json', 'utf8')) as DesignDocument
  const driven = (resistance: number, capacitance: number, values: Record<string, number> = {}) =>
    planDesign({
      ...document,
      choose: { arrangement: 'non-inverting-up', drive: { resistance, capacitance }, values },
    }).candidates.find((c) => c.arrangement === 'non-inverting-up')

  it('is a finding with finite figures, not a failure', () => {
    const candidate = driven(1, 1e-8)
    expect(candidate?.feasible).toBe(false)
    expect(candidate?.reasons.map((r) => r.code)).toContain('phase-margin')
    expect(candidate?.dynamics).toMatchObject({ settling: null, overshoot: null })
  })

  it('is cured by capacitor and resistor together where neither does it alone', () => {
    const [entry] = driven(2, 2.2e-8)?.stability ?? []
    const [cure] = entry?.cures ?? []
    expect(Object.keys(cure?.values ?? {}).sort()).toEqual(['C9', 'CU1', 'R9'])
    const { values = {} } = cure ?? {}
    const cured = planDesign({ ...document, choose: { arrangement: 'non-inverting-up', values } })
    const [after] = cured.candidates[cured.chosen ?? 0]?.stability ?? []
    expectClose(after?.worst ?? 0, cure?.phaseMargin ?? NaN, { absolute: 0.01 })
    expect(after?.state).toBe('clear')
  })
})

describe('a plan of its own', () => {
  const document = JSON.parse(readFileSync('docs/examples/flow-velocity.json', 'utf8')) as DesignDocument

  it('adds the capacitor that an amplifier needs, and says what it would be without', () => {
    const plan = planDesign(document)
    const candidate = plan.candidates[plan.chosen ?? 0]
    const part = candidate?.components?.find((c) => c.ref === 'CU1')
    expect(part).toMatchObject({ kind: 'capacitor', chosen: false })
    expect(candidate?.stability?.[0]?.state).toBe('clear')
    expect(candidate?.findings?.find((f) => f.code === 'steadied')?.text).toMatch(/without it .* 40°/)
    expect(candidate?.netlist).toContain('CU1 ')
  })

  it('leaves a circuit that exists without it', () => {
    const free = planDesign(document)
    const parts = free.candidates[free.chosen ?? 0]?.components ?? []
    const values = Object.fromEntries(
      parts.flatMap((c) => (c.kind === 'resistor' && !c.fixed ? [[c.ref, c.value ?? 0]] : [])),
    )
    const plan = planDesign({
      ...document,
      choose: { arrangement: free.candidates[free.chosen ?? 0]?.arrangement, values },
    })
    const candidate = plan.candidates[plan.chosen ?? 0]
    expect(candidate?.components?.some((c) => c.ref === 'CU1')).toBe(false)
    expect(candidate?.findings?.some((f) => f.code === 'phase-margin' && f.severity === 'tight')).toBe(true)
  })
})
