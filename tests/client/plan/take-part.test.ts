import { describe, expect, it } from 'vitest'
import { takingOf } from '#client/features/plan/words/take-part.ts'
import type { BudgetLine, Improvement } from '#shared/design/plan.ts'
import { designSchema } from '#shared/design/schema.ts'
import { partClasses } from '#shared/parts/classes.ts'
import { firstExample } from '#client/features/plan/examples.ts'

const design = designSchema.parse(firstExample)

const lineOf = (path: string | null, limit: number): BudgetLine => ({
  id: 'x',
  label: 'x',
  source: 'x',
  path,
  limit,
  unit: '',
  distribution: 'rectangular',
  sensitivity: 1,
  standard: 1,
  calibrates: 'none',
  group: null,
  asBuilt: 1,
  zeroed: 1,
  calibrated: 1,
  share: 1,
})

const improvement = (more: Partial<Improvement>): Improvement => ({
  line: 'x',
  aim: 'half',
  needed: null,
  after: 1,
  part: null,
  text: 'x',
  ...more,
})

describe('the control that takes an improvement', () => {
  it('sets every figure of the class of parts that is better than the one in the design', () => {
    const found = partClasses.find(({ name }) => name.startsWith('0.02 %'))
    if (!found) throw new Error('no such class')
    const taking = takingOf(
      improvement({ needed: 3e-4, part: { name: found.name, limit: 2e-4, after: 1 } }),
      lineOf('parts.resistors.tolerance', design.parts.resistors.tolerance),
      design,
      'voltage',
    )
    expect(taking?.words).toBe(`Take a ${found.name}`)
    expect(taking?.changes).toEqual([
      { path: 'parts.resistors.tolerance', value: 2e-4 },
      { path: 'parts.resistors.drift', value: 5e-6 },
    ])
  })

  it('leaves alone what the design has better already', () => {
    const better = designSchema.parse({
      ...firstExample,
      parts: { resistors: { tolerance: 1e-3, drift: 1e-6 } },
    })
    const found = partClasses.find(({ name }) => name.startsWith('0.02 %'))
    const taking = takingOf(
      improvement({ needed: 3e-4, part: { name: found?.name ?? '', limit: 2e-4, after: 1 } }),
      lineOf('parts.resistors.tolerance', 1e-3),
      better,
      'voltage',
    )
    expect(taking?.changes.map(({ path }) => path)).toEqual(['parts.resistors.tolerance'])
  })

  it('asks for rejection in dB and for gain as gain', () => {
    const zeroDrift = partClasses.find(({ name }) => name.startsWith('zero-drift'))
    const taking = takingOf(
      improvement({ needed: 1e-6, part: { name: zeroDrift?.name ?? '', limit: 1e-7, after: 1 } }),
      lineOf('parts.amplifier.cmrr', 1e-5),
      design,
      'voltage',
    )
    const changes = Object.fromEntries((taking?.changes ?? []).map(({ path, value }) => [path, value]))
    expect(changes['parts.amplifier.cmrr']).toBe(130)
    expect(changes['parts.amplifier.a0']).toBeCloseTo(1e7, 0)
  })

  it('tightens the field itself where no class keeps the limit, on the safe side', () => {
    // A line that has been multiplied out over 100 K: the field holds a hundredth of its limit.
    const taking = takingOf(
      improvement({ needed: 0.8333e-3 }),
      lineOf('parts.resistors.drift', design.parts.resistors.drift * 100),
      design,
      'voltage',
    )
    const share = 0.8333e-3 / (design.parts.resistors.drift * 100)
    const value = taking?.changes[0]?.value as number
    expect(value).toBeLessThanOrEqual(design.parts.resistors.drift * share)
    expect(value).toBeGreaterThan(design.parts.resistors.drift * share * 0.9)
  })

  it('offers nothing where no field sets the line, or where not even 0 would do', () => {
    expect(takingOf(improvement({ needed: 1e-4 }), lineOf(null, 1e-3), design, 'voltage')).toBeNull()
    expect(takingOf(improvement({}), lineOf('parts.resistors.tolerance', 1e-3), design, 'voltage')).toBeNull()
  })
})
