import { describe, expect, it } from 'vitest'
import {
  evaluateForm,
  type Pick,
  type PickRequest,
  type PickResult,
  pickValues,
  type ValueForm,
} from '#shared/amplifiers/picker/index.ts'
import { standardValues } from '#shared/parts/series.ts'
import { exhaust, staysInside } from './exhaustive.ts'
import { formMakers, requestFor, seeded } from './scenarios.ts'

const e96 = standardValues('E96', 1e3, 1e6)
const e24 = standardValues('E24', 1e3, 1e6)
const e12 = standardValues('E12', 1e3, 1e5)

function ask(
  form: ValueForm,
  target: [number, number],
  list: readonly number[],
  more: Partial<PickRequest> = {},
): PickRequest {
  const refs = ['R1', 'R2', 'R3', 'R4', 'R7', 'R8', 'Rf', 'Rg', 'Rs']
  return {
    form,
    target,
    lists: { ...Object.fromEntries(refs.map((ref) => [ref, list])), ...more.lists },
    tolerance: Object.fromEntries(refs.map((ref) => [ref, 0.001])),
    preferred: 10_000,
    ...Object.fromEntries(Object.entries(more).filter(([key]) => key !== 'lists')),
  }
}

function found(result: PickResult): Extract<PickResult, { ok: true }> {
  if (!result.ok) throw new Error(result.reason)
  return result
}

const up: ValueForm = { kind: 'non-inverting-up', signal: [-0.35, 0.35], source: 50, reference: 2.5 }
const wide: [number, number] = [0.05, 2.45]

describe('what a pick says of itself', () => {
  const result = found(pickValues(ask(up, wide, e96)))

  it('is the output of the form and the larger miss over the span', () => {
    for (const pick of [...result.best, ...result.picks]) {
      expect(pick.ends).toEqual(evaluateForm(up, pick.values))
      const miss = Math.max(Math.abs(pick.ends[0] - wide[0]), Math.abs(pick.ends[1] - wide[1]))
      expect(pick.error).toBeCloseTo(miss / 2.4, 14)
      expect(pick.distinct).toBe(new Set(Object.values(pick.values)).size)
    }
  })

  it('is ordered by error and by cost, with distinct end points', () => {
    const rises = (values: number[]): boolean =>
      values.every((value, i) => i === 0 || value >= (values[i - 1] as number))
    expect(result.best).toHaveLength(8)
    expect(rises(result.best.map((pick) => pick.error))).toBe(true)
    expect(rises(result.picks.map((pick) => pick.cost))).toBe(true)
    expect(new Set(result.best.map((pick) => pick.ends.join())).size).toBe(8)
    expect(result.best[0]?.error).toBeCloseTo(result.optimum, 12)
  })

  it('calls practical what misses by no more than max(E_min, T/10)', () => {
    expect(result.threshold).toBe(Math.max(result.optimum, result.toleranceError / 10))
    expect(result.picks.every((pick) => pick.practical && pick.error <= result.threshold)).toBe(true)
    for (const pick of result.best) expect(pick.practical).toBe(pick.error <= result.threshold)
  })

  it('survives JSON, also where a resistor is left open', () => {
    const open = pickValues(
      ask({ kind: 'non-inverting', signal: [0, 2] }, [0, 2], e24, {
        lists: { Rg: [...e24, Infinity], Rf: [0, ...e24] },
      }),
    )
    expect(JSON.parse(JSON.stringify(open))).toEqual(open)
    expect(found(open).picks[0]).toMatchObject({ values: { Rf: 0 }, cost: 0, distinct: 0, error: 0 })
  })

  it('returns as many as asked for', () => {
    const few = found(pickValues(ask(up, wide, e96, { count: 3 })))
    expect(few.best).toEqual(result.best.slice(0, 3))
  })
})

describe('the same request', () => {
  it('has the same answer whatever was asked in between', () => {
    const request = ask(up, wide, e24)
    const before = pickValues(request)
    pickValues({ ...request, preferred: 1000 })
    pickValues(ask({ ...up, source: 777 }, wide, e24))
    for (let i = 0; i < 40; i++) pickValues(ask(up, [0.1, 2 + i / 100], standardValues('E12', 1e3, 1e4 + i)))
    expect(pickValues(request)).toEqual(before)
  })

  it('is answered anew when its list was changed in place', () => {
    const list = [1000, 2400, 5100, 10_000]
    const form: ValueForm = { kind: 'attenuator', signal: [0, 10] }
    const before = found(pickValues(ask(form, [0, 5], list)))
    expect(before.best[0]?.values).toEqual({ R1: 5100, R2: 5100 })
    list[2] = 4700
    expect(found(pickValues(ask(form, [0, 5], list))).best[0]?.values).toEqual({ R1: 4700, R2: 4700 })
  })

  it('may bring its stock in any order and twice', () => {
    const sorted = [1000, 1500, 3300, 10_000, 33_000]
    const shuffled = [33_000, 1000, 3300, 3300, 10_000, 1500, 1000]
    expect(pickValues(ask(up, wide, shuffled))).toEqual(pickValues(ask(up, wide, sorted)))
  })
})

describe('values that a person fixed', () => {
  it('are obeyed, and the others follow them', () => {
    const result = found(pickValues(ask(up, wide, e96, { lists: { Rg: [3300], R2: [47_000] } })))
    for (const pick of [...result.best, ...result.picks])
      expect(pick.values).toMatchObject({ Rg: 3300, R2: 47_000 })
  })

  it('are all answered, however far from the target', () => {
    const lists = { Rf: [1e6], Rg: [1000] }
    const result = found(
      pickValues(ask({ kind: 'non-inverting', signal: [0, 1] }, [0, 0.01], e96, { lists })),
    )
    expect(result.best).toHaveLength(1)
    expect(result.picks).toHaveLength(1)
    expect(result.best[0]).toMatchObject({ values: { Rf: 1e6, Rg: 1000 }, ends: [0, 1001], practical: true })
    expect(result.optimum).toBeCloseTo(100_099, 6)
  })
})

describe('links and open places', () => {
  it('save a part where they cost nothing', () => {
    const lists = { Rf: [0, ...e24], Rg: [...e24, Infinity] }
    const result = found(pickValues(ask(up, [0.7325, 0.7675], e24, { lists })))
    expect(result.best.some((pick) => pick.values['Rg'] === undefined)).toBe(true)
  })

  it('do not hide their neighbours where link meets link, which has no meaning', () => {
    const form: ValueForm = { kind: 'level-shift', signal: [0, 1], reference: 2.5 }
    const lists = { R1: [0], R2: [10_000], R3: [0, 10_000] }
    const result = found(pickValues(ask(form, [0, 0.9], e24, { lists })))
    expect(result.best.map((pick) => pick.values)).toEqual([{ R1: 0, R2: 10_000, R3: 10_000 }])
  })
})

describe('what cannot be picked', () => {
  it('is outside the window beyond ten spans, with the closest pick', () => {
    const result = pickValues(ask({ kind: 'non-inverting', signal: [0, 1] }, [0, 0.01], e96))
    expect(result.ok).toBe(false)
    if (result.ok) return
    expect(result.reason).toBe('outside-window')
    expect(result.closest?.values).toEqual({ Rf: 1000, Rg: 1e6 })
    expect(result.closest?.error).toBeCloseTo(99.1, 9)
  })

  it('is no allowed pair where a list is empty', () => {
    expect(pickValues(ask(up, wide, e24, { lists: { Rf: [] } }))).toEqual({
      ok: false,
      reason: 'no-allowed-pair',
    })
  })

  it.each([
    ['a pair with a table', up, ['Rf', 'Rg']],
    ['a pair with the source resistance', up, ['R1', 'R2']],
    ['two resistors of different pairs', up, ['R1', 'Rg']],
    ['the only pair', { kind: 'inverting', signal: [0, -1], source: 10 }, ['Rf', 'Rg']],
    ['a loaded pair', { kind: 'non-inverting-down', signal: [0.5, 1], reference: 2.5 }, ['Rf', 'Rg']],
  ] as const)('is no allowed pair where the demand on %s cannot be met', (_, form, refs) => {
    const pairs = [{ refs: [...refs] as [string, string], minimumSum: 3e6 }]
    const copy = { ...form, signal: [...form.signal] } as ValueForm
    expect(pickValues(ask(copy, wide, e24, { pairs }))).toEqual({ ok: false, reason: 'no-allowed-pair' })
  })

  it('is no allowed pair where a part cannot have that gain', () => {
    const form: ValueForm = {
      kind: 'gain-single',
      signal: [0, 1],
      k: 50_000,
      gainMinimum: 100,
      level: { volts: 0 },
    }
    expect(pickValues(ask(form, [0, 2], e12.slice(1)))).toEqual({ ok: false, reason: 'no-allowed-pair' })
  })
})

describe('a broken promise of the caller', () => {
  it.each([
    ['a target without a span', { target: [1, 1] as [number, number] }],
    ['a target that is no number', { target: [NaN, 1] as [number, number] }],
    ['a preferred impedance of 0', { preferred: 0 }],
    ['a negative value', { lists: { Rf: [-1000, 1000] } }],
    ['a demand on a resistor that is not there', { pairs: [{ refs: ['R1', 'R9'] as [string, string] }] }],
  ])('is refused: %s', (_, more) => {
    expect(() => pickValues(ask(up, wide, e24, more))).toThrow(RangeError)
  })

  it('is refused: a resistor without a list', () => {
    expect(() => pickValues({ ...ask(up, wide, e24), lists: { R1: e24 } })).toThrow(/R2/)
  })
})

describe('ends that have to stay inside the converter', { timeout: 60_000 }, () => {
  const names = Object.keys(formMakers)

  it('are those of the cheapest practical picks that do, as exhaustive search finds them', () => {
    const random = seeded(77)
    let narrowed = 0
    for (let i = 0; i < 250; i++) {
      const form = (formMakers[names[i % names.length] as string] as (typeof formMakers)[string])(random)
      const request = requestFor(form, random, { series: 'E6', minimum: 1e3, maximum: 2.2e4 })
      const [low, high] = [Math.min(...request.target), Math.max(...request.target)]
      const free = exhaust(request)
      if (!free || free.picks.length === 0) continue
      // About as much room as the tolerances take, so that some picks stay inside and some do not.
      const room = free.toleranceError * (high - low) * (0.8 + 0.3 * random())
      const inside: [number, number] = [low - room, high + room]
      const wanted = exhaust({ ...request, inside })
      const actual = pickValues({ ...request, inside })
      if (!wanted || wanted.picks.length === 0) continue
      if (JSON.stringify(wanted.picks) !== JSON.stringify(free.picks)) narrowed++
      expect(found(actual).picks.map((pick) => pick.values)).toEqual(wanted.picks.map((pick) => pick.values))
    }
    expect(narrowed).toBeGreaterThan(10)
  })

  it('come from a target shrunk by the tolerances where the full one leaves no room', () => {
    const request = ask({ kind: 'difference', signal: [-1, 1], level: { reference: 2.5 } }, [0, 2.5], e96, {
      inside: [0, 2.5],
      lists: { R7: e96, R8: e96 },
    })
    const result = found(pickValues(request))
    expect(result.picks.length).toBeGreaterThan(0)
    for (const pick of result.picks) {
      expect(staysInside(request, pick)).toBe(true)
      expect(pick.practical).toBe(pick.error <= result.threshold + 1e-11)
    }
    expect(result.optimum).toBe(found(pickValues({ ...request, inside: [-1, 9] })).optimum)
  })
})

describe('the optimum on the full window', { timeout: 60_000 }, () => {
  /** Least larger miss over the span, over every member of two lists of factors: u = p(α) + β·d(α). */
  function least(
    lines: Iterable<[number, number, number, number]>,
    factors: Float64Array,
    target: [number, number],
  ): number {
    let best = Infinity
    for (const [p0, p1, d0, d1] of lines) {
      for (const factor of factors) {
        const miss = Math.max(Math.abs(p0 + factor * d0 - target[0]), Math.abs(p1 + factor * d1 - target[1]))
        if (miss < best) best = miss
      }
    }
    return best / Math.abs(target[1] - target[0])
  }

  const distinct = (make: (a: number, b: number) => number): Float64Array =>
    new Float64Array(new Set(e24.flatMap((a) => e24.map((b) => make(a, b)))))

  it('is that of all E24 combinations of four resistors: non-inverting, offset up', () => {
    const lines = [...distinct((r1, r2) => (r1 + 50) / r2)].map((rho): [number, number, number, number] => {
      const mix = (s: number): number => (s + 2.5 * rho) / (1 + rho)
      return [0, 0, mix(-0.35), mix(0.35)]
    })
    const optimum = least(
      lines,
      distinct((rf, rg) => 1 + rf / rg),
      wide,
    )
    expect(found(pickValues(ask(up, wide, e24))).optimum).toBeCloseTo(optimum, 12)
  })

  it('is that of all E24 combinations of four resistors: inverting, offset up', () => {
    const form: ValueForm = { kind: 'inverting-up', signal: [-0.35, 0.35], source: 120, reference: 3 }
    const lines = [...distinct((rf, rg) => rf / (rg + 120))].map((nu): [number, number, number, number] => [
      0.35 * nu,
      -0.35 * nu,
      3 * (1 + nu),
      3 * (1 + nu),
    ])
    const optimum = least(
      lines,
      distinct((r1, r2) => r2 / (r1 + r2)),
      [2.45, 0.05],
    )
    expect(found(pickValues(ask(form, [2.45, 0.05], e24))).optimum).toBeCloseTo(optimum, 12)
  })

  it('is that of all E96 combinations of three resistors: level shift', () => {
    const form: ValueForm = { kind: 'level-shift', signal: [-10, 10], source: 100, reference: 2.5 }
    let best = Infinity
    for (const r1 of e96) {
      for (const r2 of e96) {
        const [g1, g2] = [1 / (r1 + 100), 1 / r2]
        for (const r3 of e96) {
          const total = g1 + g2 + 1 / r3
          const low = (-10 * g1 + 2.5 * g2) / total
          const high = (10 * g1 + 2.5 * g2) / total
          best = Math.min(best, Math.max(Math.abs(low - 0.1), Math.abs(high - 2.4)))
        }
      }
    }
    const pick = found(pickValues(ask(form, [0.1, 2.4], e96))).best[0] as Pick
    expect(pick.error).toBeCloseTo(best / 2.3, 12)
  })
})
