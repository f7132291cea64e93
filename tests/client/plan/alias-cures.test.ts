import { describe, expect, it } from 'vitest'
import { aliasCures } from '#client/features/plan/words/alias-cures.ts'
import type { FilterPlan } from '#shared/design/plan.ts'

const filter = (more: Partial<NonNullable<FilterPlan['alias']>>, kind: FilterPlan['kind'] = 'rc') =>
  ({
    kind,
    response: 'butterworth',
    order: 1,
    alias: {
      frequency: 980,
      wanted: 84,
      reached: 14,
      state: 'tight',
      orders: { butterworth: 4, bessel: null, chebyshev: 3 },
      rateFor: 3.241e6,
      ...more,
    },
  }) as unknown as FilterPlan

describe('what would reach the alias attenuation', () => {
  it('is the fewest poles of each response that does, fewest first, then a sample rate', () => {
    expect(aliasCures(filter({})).map(({ words }) => words.replaceAll('\u00a0', ' '))).toEqual([
      'Take 3 poles, Chebyshev',
      'Take 4 poles, Butterworth',
      'Sample at 3.25 MHz',
    ])
  })

  it('never samples slower than it has to', () => {
    const rate = aliasCures(filter({})).at(-1)?.changes[0]?.value as number
    expect(rate).toBe(3.25e6)
    expect(aliasCures(filter({ rateFor: 3.3e6 })).at(-1)?.changes[0]?.value).toBe(3.3e6)
  })

  it('keeps the kind of sections that was chosen', () => {
    const kinds = aliasCures(filter({}, 'multiple-feedback')).flatMap(({ changes }) =>
      changes.filter(({ path }) => path === 'choose.filter.kind').map(({ value }) => value),
    )
    expect(new Set(kinds)).toEqual(new Set(['multiple-feedback']))
  })

  it('takes one pole without sections, unless one pole stands there already', () => {
    const onePole = filter({ orders: { butterworth: 1, bessel: null, chebyshev: null } })
    expect(aliasCures({ ...onePole, kind: 'none', order: 0 })[0]?.changes[0]).toEqual({
      path: 'choose.filter.kind',
      value: 'rc',
    })
    expect(aliasCures(onePole).map(({ label }) => label)).toEqual(['Sample rate'])
  })

  it('is nothing where it is reached already', () => {
    expect(aliasCures(filter({ state: 'clear' }))).toEqual([])
    expect(aliasCures({ ...filter({}), alias: null })).toEqual([])
  })
})
