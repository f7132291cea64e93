import { describe, expect, it } from 'vitest'
import { partsCost } from '#shared/filters/cost.ts'
import { pickPole, PREFERRED_DRIVE } from '#shared/filters/pick-pole.ts'
import { pickSection, type SectionRequest } from '#shared/filters/pick-section.ts'
import { standardValues } from '#shared/parts/series.ts'
import { createRandom } from '#tests/support/random.ts'
import { expectClose } from '#tests/support/expect-close.ts'

const tolerance = { resistor: 0.01, capacitor: 0.05 }

/** Every set of the lists, by formulas written for themselves. */
function everySet({ kind, lists, f0, q }: SectionRequest) {
  const all: { set: number[]; error: number; limit: number }[] = []
  for (const A of lists.A)
    for (const B of lists.B)
      for (const C1 of lists.C1)
        for (const C2 of lists.C2) {
          // 1 + a·s + b·s², nodal analysis of either circuit: f0 = 1/(2π√b), Q = √b/a.
          const a = kind === 'sallen-key' ? C2 * (A + B) : C2 * (2 * B + A)
          const b = A * B * C1 * C2
          const real = { f0: 1 / (2 * Math.PI * Math.sqrt(b)), q: Math.sqrt(b) / a }
          const error = Math.max(Math.abs(real.f0 / f0 - 1), Math.abs(real.q / q - 1))
          // d ln Q/d ln p = ½ − share of a that moves with p; of three resistors R1 moves a alone, the other way round.
          const slopes =
            kind === 'sallen-key'
              ? [0.5 - A / (A + B), 0.5 - B / (A + B)]
              : [B / (A + 2 * B), 0.5 - (A + B) / (A + 2 * B), 0.5 - (2 * B) / (A + 2 * B)]
          const forQ =
            slopes.reduce((sum, slope) => sum + Math.abs(slope), 0) * tolerance.resistor + tolerance.capacitor
          const forF = tolerance.resistor + tolerance.capacitor
          all.push({ set: [A, B, C1, C2], error, limit: Math.max(forQ, forF) / 10 })
        }
  return all
}

describe.each(['sallen-key', 'multiple-feedback'] as const)('a %s section', (kind) => {
  const random = createRandom(kind.length)
  const R = standardValues('E6', 1000, 100_000)
  const targets = Array.from({ length: 40 }, () => ({
    f0: 10 ** (2 + 2.5 * random()),
    q: 0.5 + 1.6 * random(),
  }))

  it.each(targets)('has the smallest error of all sets and then the cheapest, f0 $f0, Q $q', ({ f0, q }) => {
    const C = standardValues('E6', 1e-10, 1e-7)
    const request: SectionRequest = {
      kind,
      f0,
      q,
      // Two lists of the same values: nothing may hang on their being one array.
      lists: { A: R, B: [...R], C1: C, C2: C },
      gain: 1,
      tolerance,
      preferred: 10_000,
    }
    const all = everySet(request)
    const best = all.reduce((a, b) => (b.error < a.error ? b : a))
    const pick = pickSection(request)
    if (!pick) throw new Error('nothing found')
    expectClose(pick.optimum, best.error, { relative: 1e-9, absolute: 1e-12 })
    const { R1, R2, C1, C2, R3 } = pick.values
    const found = all.find(({ set }) => set.join() === [R3 ?? R1, R2, C1, C2].join())
    expectClose(found?.error ?? NaN, pick.error, { relative: 1e-9, absolute: 1e-12 })
    // The limit goes by the tolerance at the best set; with several equally good ones any of their limits.
    const limits = all
      .filter(({ error }) => error <= best.error * (1 + 1e-9) + 1e-13)
      .map(({ limit }) => limit)
    const price = (s: (typeof all)[number], allowed: number) =>
      partsCost(10_000)(s.set.slice(0, 2), s.set.slice(2), { of: s.error, allowed })
    const cheapest = limits.map((limit) => {
      const allowed = Math.max(best.error, limit)
      const near = all.filter(({ error }) => error <= allowed * (1 + 1e-9))
      return [Math.min(...near.map((s) => price(s, allowed))), found ? price(found, allowed) : NaN] as const
    })
    expect(cheapest.some(([least, own]) => Math.abs(least - own) < 2e-6)).toBe(true)
  })

  it('is the same from one list as from two alike, the larger of two exchangeable resistors first', () => {
    const C = standardValues('E6', 1e-10, 1e-7)
    const base = { kind, f0: 1234, q: 0.7, gain: 1, tolerance, preferred: 10_000 }
    const one = pickSection({ ...base, lists: { A: R, B: R, C1: C, C2: C } })
    const two = pickSection({ ...base, lists: { A: R, B: [...R], C1: C, C2: C } })
    expectClose(one?.optimum ?? NaN, two?.optimum ?? NaN, { relative: 1e-9 })
    expectClose(one?.error ?? NaN, two?.error ?? NaN, { relative: 1e-9 })
    if (kind === 'sallen-key') expect(one?.values.R1).toBeGreaterThanOrEqual(one?.values.R2 ?? NaN)
  })

  it('obeys single values, however far off they lead', () => {
    const C = standardValues('E6', 1e-10, 1e-7)
    const pick = pickSection({
      kind,
      f0: 1000,
      q: 0.7,
      lists: { A: [47_000], B: R, C1: [1e-10], C2: C },
      gain: 1,
      tolerance,
      preferred: 10_000,
    })
    expect(pick?.values.R3 ?? pick?.values.R1).toBe(47_000)
    expect(pick?.values.C1).toBe(1e-10)
    const all = everySet({
      kind,
      f0: 1000,
      q: 0.7,
      lists: { A: [47_000], B: R, C1: [1e-10], C2: C },
      gain: 1,
      tolerance,
      preferred: 0,
    })
    expectClose(pick?.optimum ?? NaN, Math.min(...all.map(({ error }) => error)), { relative: 1e-9 })
  })

  it('does not exist where no value of the window comes near', () => {
    const lists = { A: R, B: R, C1: [1e-10, 2.2e-10], C2: [1e-10, 2.2e-10] }
    expect(pickSection({ kind, f0: 1, q: 0.7, lists, gain: 1, tolerance, preferred: 10_000 })).toBeNull()
  })
})

describe('a single pole', () => {
  const random = createRandom(9)
  const lists = { R: standardValues('E12', 100, 100_000), C: standardValues('E6', 1e-10, 1e-6) }

  it.each(Array.from({ length: 30 }, () => [10 ** (1 + 4 * random())]))(
    'at %f Hz has the smallest error of all pairs and then the cheapest',
    (f0) => {
      const pick = pickPole(f0, lists, tolerance)
      const all = lists.R.flatMap((R) =>
        lists.C.map((C) => ({ R, C, error: Math.abs(1 / (2 * Math.PI * R * C) / f0 - 1) })),
      )
      const optimum = Math.min(...all.map(({ error }) => error))
      expectClose(pick.optimum, optimum, { relative: 1e-9 })
      const allowed = Math.max(optimum, 0.006)
      const price = ({ R, C, error }: (typeof all)[number]) =>
        partsCost(PREFERRED_DRIVE)([R], [C], { of: error, allowed })
      const least = Math.min(...all.filter(({ error }) => error <= allowed * (1 + 1e-9)).map(price))
      expectClose(price(pick), least, { absolute: 2e-6 })
    },
  )
})
