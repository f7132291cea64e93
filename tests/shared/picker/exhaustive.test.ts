import { describe, expect, it } from 'vitest'
import { formRefs, type Pick, type PickRequest, pickValues } from '#shared/amplifiers/picker/index.ts'
import { exhaust } from './exhaustive.ts'
import { formMakers, requestFor, seeded, type Window } from './scenarios.ts'

const wide: Window = { series: 'E6', minimum: 1e3, maximum: 47e3 }
const fine: Window = { series: 'E12', minimum: 1e3, maximum: 8.2e3 }
const finest: Window = { series: 'E24', minimum: 1e3, maximum: 6.8e3 }

/** Picks of two searches, each with its values spelled out. */
function expectSamePicks(actual: Pick[], wanted: Pick[], refs: readonly string[], context: string): void {
  const spell = (pick: Pick): string => refs.map((ref) => `${ref}=${pick.values[ref] ?? 'open'}`).join(' ')
  expect(actual.map(spell), context).toEqual(wanted.map(spell))
  actual.forEach((pick, i) => {
    const other = wanted[i] as Pick
    expect(Math.abs(pick.error - other.error), context).toBeLessThan(1e-10 * Math.max(1, other.error))
    expect(Math.abs(pick.cost - other.cost), context).toBeLessThan(1e-5 * Math.max(1, other.cost))
    expect(pick.distinct, context).toBe(other.distinct)
  })
}

function compare(request: PickRequest): 'same' | 'none' {
  const context = JSON.stringify(request, (_, value: unknown) =>
    Array.isArray(value) && value.length > 6 ? `${value.length} values` : value,
  )
  const actual = pickValues(request)
  const wanted = exhaust(request)
  if (!wanted) {
    expect(actual.ok, context).toBe(false)
    return 'none'
  }
  if (!actual.ok) throw new Error(`${actual.reason} for ${context}`)
  const refs = formRefs(request.form)
  expect(Math.abs(actual.optimum - wanted.optimum), context).toBeLessThan(1e-10 * Math.max(1, wanted.optimum))
  expectSamePicks(actual.best, wanted.best, refs, context)
  expect(Math.abs(actual.toleranceError - wanted.toleranceError), context).toBeLessThanOrEqual(
    1e-6 * wanted.toleranceError,
  )
  expectSamePicks(actual.picks, wanted.picks, refs, context)
  return 'same'
}

describe.each(Object.keys(formMakers))('%s', { timeout: 60_000 }, (name) => {
  const make = formMakers[name] as (typeof formMakers)[string]
  const refs = formRefs(make(seeded(1))).length
  const rounds = refs < 4 ? 100 : 50

  function run(
    seed: number,
    window: Window,
    count: number,
    options: { special?: boolean; demands?: boolean },
  ): number {
    const random = seeded(seed)
    let same = 0
    for (let i = 0; i < count; i++)
      if (compare(requestFor(make(random), random, window, options)) === 'same') same++
    return same
  }

  it('finds what exhaustive search finds on E6: best, the best few, and the cheapest practical ones', () => {
    expect(run(11, wide, rounds, {})).toBeGreaterThan(rounds / 3)
  })

  it('finds it with fixed values, stock lists, links, open places and narrowed windows', () => {
    expect(run(12, wide, rounds, { special: true })).toBeGreaterThan(rounds / 3)
  })

  it('finds it under demands on pairs', () => {
    expect(run(13, wide, rounds, { demands: true, special: true })).toBeGreaterThan(rounds / 4)
  })

  it('finds it on E12', () => {
    expect(run(14, fine, rounds / 2, {})).toBeGreaterThan(rounds / 8)
  })

  it('finds it on E24', () => {
    expect(run(15, finest, refs < 4 ? 30 : 2, {})).toBeGreaterThan(0)
  })
})
