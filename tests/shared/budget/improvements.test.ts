import { describe, expect, it } from 'vitest'
import type { DesignDocument } from '#shared/design/schema.ts'
import { classesFor, limitFor, partClasses } from '#shared/parts/classes.ts'
import { budgetOf, noiseOf } from '#tests/support/budgets.ts'
import { buildConverter, buildDesign, buildSensor } from '#tests/support/designs.ts'
import { expectClose } from '#tests/support/expect-close.ts'

/* Every proposal is carried out on the design itself, and the new budget must be what was promised. */

const base = (more: Partial<DesignDocument> = {}): DesignDocument =>
  buildDesign({
    sensor: buildSensor(-0.35, 0.35),
    converter: buildConverter({ reference: { voltage: 2.5, tolerance: 2e-3, drift: 2e-5 } }),
    parts: { resistors: { tolerance: 1e-4, drift: 2e-6 }, amplifier: { vos: 5e-5, vosDrift: 1e-6 } },
    ...more,
  })
const budget = (document: DesignDocument) => budgetOf(document, 'non-inverting-up', noiseOf(2e-5)).budget

describe('what the largest lines would have to be', () => {
  const asBuilt = (limit: number) => base({ target: { limit, state: 'asBuilt' } })

  it('is the limit with which the target is met, as the design itself then shows', () => {
    const missed = budget(asBuilt(1e-3))
    expect(missed.target?.met).toBe(false)
    const found = missed.improvements.find(({ line }) => line === 'converterReference.tolerance')
    expect(found?.aim).toBe('target')
    expect(found?.needed).toBeGreaterThan(0)
    expect(found?.needed).toBeLessThan(2e-3)
    const changed = budget({
      ...asBuilt(1e-3),
      converter: buildConverter({
        reference: { voltage: 2.5, tolerance: found?.needed ?? NaN, drift: 2e-5 },
      }),
    })
    expect(changed.target?.met).toBe(true)
    expectClose(changed.totals.asBuilt.expanded, found?.after ?? NaN, { relative: 1e-3 })
    expectClose(changed.totals.asBuilt.expanded, changed.target?.limit ?? NaN, { relative: 2e-3 })
  })

  it('names a class of parts that reaches it, and the total with all its figures in place', () => {
    const missed = budget(asBuilt(8e-4))
    const part = missed.improvements.find(({ line }) => line === 'converterReference.tolerance')?.part
    const own = partClasses.find(({ name }) => name === part?.name)
    if (!part || !own) throw new Error('there is a class that reaches it')
    const limit = (path: string) => limitFor(own, path) ?? NaN
    expect(part.limit).toBe(limit('converter.reference.tolerance'))
    const changed = budget({
      ...asBuilt(8e-4),
      converter: buildConverter({
        reference: {
          voltage: 2.5,
          tolerance: part.limit,
          drift: limit('converter.reference.drift'),
        },
      }),
    })
    expectClose(changed.totals.asBuilt.expanded, part.after, { relative: 1e-3 })
    expect(changed.target?.met).toBe(true)
  })

  it('names a class even where no line alone would do, if it would in every part', () => {
    const coarse = base({
      converter: buildConverter({ reference: { voltage: 2.5 } }),
      parts: { resistors: { tolerance: 1e-2, drift: 1e-6 }, amplifier: { vos: 0, vosDrift: 0 } },
      target: { limit: 2e-3, state: 'asBuilt' },
    })
    const missed = budget(coarse)
    const [found] = missed.improvements
    const alike = missed.lines.slice(0, 5).filter(({ path }) => path === 'parts.resistors.tolerance')
    expect(alike.length).toBeGreaterThan(2)
    expect(found?.line).toBe(alike[0]?.id)
    // one entry holds them all
    expect(missed.improvements.filter(({ part }) => part?.name === found?.part?.name)).toEqual([found])
    const names = alike.map(({ source }) => source)
    const listed = `${names.slice(0, -1).join(', ')} and ${names.at(-1) ?? ''}`
    expect(found?.text).toBe(
      `${listed} tolerance: none alone would meet the target; with the class ${found?.part?.name ?? ''} throughout they would`,
    )
    expect(found?.needed).toBeNull()
    expect(found?.part?.name).toContain('resistor')
    expect(found?.part?.after).toBeLessThanOrEqual(missed.target?.limit ?? NaN)
  })

  it('says so where the rest alone is too large', () => {
    const missed = budget(asBuilt(1e-5))
    expect(missed.improvements.length).toBe(5)
    for (const found of missed.improvements) {
      expect(found.needed).toBeNull()
      expect(found.after).toBeGreaterThan(missed.target?.limit ?? NaN)
      expect(found.text).toContain('would not meet the target')
    }
  })

  it('halves the total where the target is met or none is stated', () => {
    for (const document of [asBuilt(0.1), base()]) {
      const met = budget(document)
      const { expanded } = met.totals[met.target?.state ?? 'calibrated']
      for (const found of met.improvements) {
        expect(found.aim).toBe('half')
        if (found.needed === null) expect(found.after).toBeGreaterThan(expanded / 2)
        else {
          expect(found.after).toBeLessThanOrEqual(expanded / 2)
          expectClose(found.after, expanded / 2, { relative: 1e-2 })
        }
      }
    }
  })

  it('are the largest of the state that is judged, the largest first', () => {
    const found = budget(base())
    expect(found.improvements.map(({ line }) => line)).toEqual(found.lines.slice(0, 5).map(({ id }) => id))
  })
})

describe('classes of parts', () => {
  it('are listed from the loosest, by the field whose limit they set', () => {
    const tolerances = classesFor('parts.resistors.tolerance').map(({ limit }) => limit)
    expect(tolerances).toEqual([1e-2, 5e-3, 1e-3, 5e-4, 2e-4, 1e-4])
    expect(classesFor('converter.reference.drift').length).toBe(3)
    expect(classesFor('shiftReference.tolerance').length).toBe(3)
    expect(classesFor('parts.amplifier.vos').map(({ limit }) => limit)).toEqual([5e-3, 1e-4, 5e-6])
    expect(classesFor('converter.inl')).toEqual([])
  })

  it('have names of their own and limits above zero', () => {
    expect(new Set(partClasses.map(({ name }) => name)).size).toBe(partClasses.length)
    for (const { limits } of partClasses)
      for (const limit of Object.values(limits)) expect(limit).toBeGreaterThan(0)
  })
})
