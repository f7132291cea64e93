import { describe, expect, it } from 'vitest'
import { planDesign } from '#shared/design/plan-design.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import { compareVariants, type Comparison } from '#shared/studies/compare.ts'
import { answersOf, type Variant } from '#shared/studies/variant-answers.ts'
import { buildConverter, buildDesign, buildSensor } from '#tests/support/designs.ts'
import { expectClose } from '#tests/support/expect-close.ts'

const variant = (document: DesignDocument): Variant => ({
  document: document as unknown as Variant['document'],
  plan: planDesign(document),
})

const base = variant(buildDesign())
const effect = (comparison: Comparison, id: string) => comparison.effects.find((found) => found.id === id)
const linksOf = (comparison: Comparison, path: string) =>
  comparison.links.filter((link) => link.path === path).map((link) => link.effect)

describe('two variants of a channel', () => {
  it('that are the same have no cause and no effect', () => {
    expect(compareVariants(base, base)).toEqual({ causes: [], effects: [], links: [], untried: 0 })
  })

  it('show answers that moved with direction, amount and which is better', () => {
    const wider = variant(buildDesign({ rails: { positive: 6, tolerance: 0.02 } }))
    const comparison = compareVariants(base, wider)
    expect(comparison.causes).toEqual([{ path: 'rails.positive', a: 5, b: 6, idle: false }])
    const [before, after] = [base, wider].map((v) => answersOf(v).find(({ id }) => id === 'room')?.value)
    const room = effect(comparison, 'room')
    // The limit that is near stays where it is while the region grows: the same volts are a smaller share of it.
    expect(Number(after)).toBeLessThan(Number(before))
    expect(room).toMatchObject({ a: before, b: after, direction: 'down', better: false, display: 'percent' })
    expectClose(room?.change ?? NaN, Number(after) - Number(before), { absolute: 1e-12 })
    // One edit explains all that moved.
    expect(linksOf(comparison, 'rails.positive')).toEqual(comparison.effects.map(({ id }) => id))
  })

  it('mirror each other when they change places', () => {
    const other = variant(buildDesign({ sensor: buildSensor(-0.3, 0.35) }))
    const [there, back] = [compareVariants(base, other), compareVariants(other, base)]
    const numbers = there.effects.filter(({ change }) => change !== null)
    expect(numbers.length).toBeGreaterThan(3)
    for (const { id, change, better } of numbers) {
      const mirrored = effect(back, id)
      expect(mirrored?.change).toBe(-(change ?? NaN))
      expect(mirrored?.better).toBe(better === null ? null : !better)
    }
  })

  it('list a part that only one has as added or removed', () => {
    const filtered = buildDesign()
    const bare = variant(buildDesign({ choose: { filter: { kind: 'none' } } }))
    const comparison = compareVariants(variant(filtered), bare)
    expect(effect(comparison, 'part.R9')).toMatchObject({ direction: 'removed', b: null, unit: 'Ω' })
    expect(effect(compareVariants(bare, variant(filtered)), 'part.C9')).toMatchObject({ direction: 'added' })
  })
})

describe('cause and effect', () => {
  it('joins an effect to the one edit that explains it, and finds an edit without effect', () => {
    const edited = variant(
      buildDesign({
        name: 'Flow velocity, second board',
        rails: { positive: 6, tolerance: 0.02 },
        parts: { amplifier: { en: 2e-8 } },
      }),
    )
    const comparison = compareVariants(base, edited)
    expect(comparison.causes.map(({ path, idle }) => [path, idle])).toContainEqual(['name', true])
    expect(linksOf(comparison, 'name')).toEqual([])
    expect(linksOf(comparison, 'rails.positive')).toContain('room')
    for (const { path, effect: id } of comparison.links) {
      expect(comparison.causes.some((cause) => cause.path === path)).toBe(true)
      expect(comparison.effects.some((found) => found.id === id)).toBe(true)
    }
  })

  it('names no edit where two work together on an answer', () => {
    const moved = variant(buildDesign({ sensor: buildSensor(-0.3, 0.4) }))
    const comparison = compareVariants(base, moved)
    expect(comparison.causes.map(({ path }) => path)).toEqual(['sensor.output.low', 'sensor.output.high'])
    expect(effect(comparison, 'offset')).toBeDefined()
    expect(comparison.links.filter((link) => link.effect === 'offset')).toEqual([])
    expect(comparison.causes.every(({ idle }) => idle === false)).toBe(true)
  })

  it('leaves open what an edit does that alone makes no design', () => {
    const shifted = variant(buildDesign({ converter: buildConverter({ input: { low: 2.6, high: 4.9 } }) }))
    const comparison = compareVariants(base, shifted)
    // A low end of 2.6 V above a high end of 2.5 V is refused.
    expect(comparison.causes.find(({ path }) => path === 'converter.input.low')?.idle).toBeNull()
    expect(comparison.untried).toBeGreaterThanOrEqual(1)
  })

  it('tries no more edits than it may, and counts the rest', () => {
    const edited = variant(
      buildDesign({ name: 'Other', rails: { positive: 5.5, tolerance: 0.01 }, notes: { text: 'changed' } }),
    )
    const told: [number, number][] = []
    const comparison = compareVariants(base, edited, {
      most: 2,
      onProgress: (done, of) => told.push([done, of]),
    })
    expect(comparison.causes.length).toBe(4)
    expect(comparison.untried).toBe(2)
    expect(comparison.causes.slice(2).every(({ idle }) => idle === null)).toBe(true)
    expect(told).toEqual([
      [1, 2],
      [2, 2],
    ])
  })
})
