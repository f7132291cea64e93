import { describe, expect, it } from 'vitest'
import { planDesign } from '#shared/design/plan-design.ts'
import { buildConverter, buildDesign, buildDifferentialSensor, buildSensor } from '#tests/support/designs.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { planChosen, valueOf } from '#tests/support/plans.ts'

/* A board that is built already: what a person types is obeyed, and the same analyses say what it does. */

const fixed = { R1: 10000, R2: 100000, Rf: 30000, Rg: 10000 }

describe('a circuit with every value fixed', () => {
  const document = buildDesign({
    rails: { positive: 5, negative: -5 },
    choose: { arrangement: 'non-inverting-up', values: fixed },
  })
  const chosen = planChosen(document)

  it('is analysed with exactly these values', () => {
    for (const [ref, value] of Object.entries(fixed)) expect(valueOf(chosen, ref)).toBe(value)
    expect(
      chosen.components
        .filter((c) => c.chosen)
        .map((c) => c.ref)
        .sort(),
    ).toEqual(Object.keys(fixed).sort())
    expect(chosen.picks.length).toBe(1)
  })

  it('reaches the ends that its equations give', () => {
    // Source 100 Ω in series with R1; signal and reference weighted by conductance, times 1 + Rf/Rg.
    const [g1, g2] = [1 / 10100, 1 / 100000]
    const out = (s: number) => ((s * g1 + 2.5 * g2) / (g1 + g2)) * 4
    expectClose(chosen.realised.ideal.low, out(-0.35), { absolute: 1e-7 })
    expectClose(chosen.realised.ideal.high, out(0.35), { absolute: 1e-7 })
  })

  it('is said to be off by how much, and what a free choice would do', () => {
    const finding = chosen.findings.find((f) => f.code === 'fixed-values')
    expect(finding).toBeDefined()
    const { low, high } = chosen.target
    const { ideal } = chosen.realised
    const error = Math.max(Math.abs(ideal.low - low), Math.abs(ideal.high - high)) / (high - low)
    expectClose(finding?.numbers.error ?? NaN, error, { absolute: 1e-6 })
    expect(finding?.text).toMatch(/off by \d/)
    expect(finding?.numbers.best).toBeLessThan(0.01)
    expect(finding?.path).toBe('choose.values')
  })

  it('that misses the converter is infeasible, and shows all its analyses nevertheless', () => {
    expect(chosen.feasible).toBe(false)
    expect(chosen.reasons.map((r) => r.code)).toContain('converter-low')
    expect(chosen.headroom.find((h) => h.pin === 'Converter input')?.state).toBe('over')
    expect(chosen.levels.length).toBe(3)
    expect(chosen.netlist).toMatch(/^R2 vref mix 100000$/m)
  })
})

it('a part driven past its largest gain is analysed all the same', () => {
  const chosen = planChosen(
    buildDesign({
      sensor: buildDifferentialSensor(-1e-6, 1e-6),
      parts: { instrumentation: { gainMaximum: 1000 } },
      choose: { arrangement: 'integrated-instrumentation-grounded', values: { Rg: 25 } },
    }),
  )
  const { low, high } = chosen.realised.ideal
  expectClose((high - low) / 2e-6, 1 + 50000 / 25, { relative: 1e-6 })
})

describe('a circuit with some values fixed', () => {
  it('has the rest picked from the series, to the smallest error that they leave', () => {
    const values = { R1: 12345, Rg: 9999 }
    const chosen = planChosen(buildDesign({ choose: { arrangement: 'non-inverting-up', values } }))
    expect(valueOf(chosen, 'R1')).toBe(12345)
    expect(valueOf(chosen, 'Rg')).toBe(9999)
    expect(chosen.feasible).toBe(true)
    expect(chosen.components.find((c) => c.ref === 'R2')?.chosen).toBe(false)
    expect(chosen.picks[chosen.pick]?.error).toBeLessThan(0.02)
    for (const { values: all } of chosen.picks) expect([all.R1, all.Rg]).toEqual([12345, 9999])
  })

  it('that could be freely chosen just as well raises no finding about it', () => {
    const free = planChosen(buildDesign({ choose: { arrangement: 'non-inverting-up' } }))
    const values = { R1: valueOf(free, 'R1') }
    const again = planChosen(buildDesign({ choose: { arrangement: 'non-inverting-up', values } }))
    expect(again.findings.map((f) => f.code)).not.toContain('fixed-values')
  })

  it('says which fixed value belongs to no part of the arrangement', () => {
    const chosen = planChosen(
      buildDesign({ choose: { arrangement: 'non-inverting-up', values: { R77: 1000 } } }),
    )
    expect(chosen.findings.find((f) => f.code === 'unused-value')?.text).toMatch(/R77/)
  })

  it('says when the pick asked for does not exist', () => {
    const chosen = planChosen(buildDesign({ choose: { arrangement: 'non-inverting-up', pick: 99 } }))
    expect(chosen.findings.find((f) => f.code === 'pick-beyond')?.numbers.count).toBe(chosen.picks.length)
    expect(chosen.pick).toBe(chosen.picks.length - 1)
  })

  it('takes filter and drive as typed', () => {
    const chosen = planChosen(
      buildDesign({ choose: { values: { R9: 330 }, drive: { capacitance: 2.2e-8 } } }),
    )
    expect([valueOf(chosen, 'R9'), valueOf(chosen, 'C9')]).toEqual([330, 2.2e-8])
    expectClose(chosen.filter.corner, 1 / (2 * Math.PI * 330 * 2.2e-8), { relative: 1e-9 })
  })
})

describe('a matched pair that is not', () => {
  const sensor = buildDifferentialSensor(0.02, 0.3, { low: 0, high: 2 })
  const document = (values: Record<string, number>) =>
    buildDesign({
      sensor: { ...sensor, sourceResistance: 0 },
      rails: { positive: 5, negative: -5 },
      parts: { resistors: { tolerance: 0, drift: 0 } },
      choose: { arrangement: 'difference-grounded', values, filter: { kind: 'none' } },
    })
  const matched = { R1: 10000, R3: 10000, R2: 75000, R4: 75000 }

  it('shows as an error of common mode: Acm = R4/(R3+R4)·(1+R2/R1) − R2/R1', () => {
    const spread = (values: Record<string, number>) => {
      const { worst } = planChosen(document(values)).realised
      return worst.low.high - worst.low.low
    }
    const off = { ...matched, R4: 76000 }
    const leak = (off.R4 / (off.R3 + off.R4)) * (1 + off.R2 / off.R1) - off.R2 / off.R1
    // Offset and rejection of the amplifier widen both alike.
    expectClose(spread(off) - spread(matched), 2 * Math.abs(leak), { relative: 0.01 })
  })

  it('is in parts list and netlist as typed', () => {
    const chosen = planChosen(document({ ...matched, R4: 76000 }))
    expect([valueOf(chosen, 'R2'), valueOf(chosen, 'R4')]).toEqual([75000, 76000])
    expect(chosen.netlist).toMatch(/^R4 \S+ 0 76000$/m)
  })
})

describe('copies of a fixed value', () => {
  const three = (values: Record<string, number>, more = {}) =>
    planChosen(
      buildDesign({
        sensor: buildDifferentialSensor(-0.02, 0.03),
        rails: { positive: 5, negative: -5 },
        parts: { resistors: { tolerance: 0, drift: 0, series: 'E12', ...more } },
        choose: { arrangement: 'three-amplifier', values },
      }),
    )

  it('follow it: a gain in the second stage keeps its pairs equal', () => {
    const chosen = three({ R3: 10000, R5: 47000 })
    expect(['R3', 'R4', 'R5', 'R6'].map((ref) => valueOf(chosen, ref))).toEqual([10000, 10000, 47000, 47000])
    const { R1 = NaN, Rg = NaN } = chosen.picks[chosen.pick]?.values ?? {}
    const gain =
      ((chosen.realised.ideal.high - chosen.realised.ideal.low) / 0.05) *
      (1 + chosen.filter.resistance / 1e12)
    expectClose(gain, (1 + (2 * R1) / Rg) * 4.7, { relative: 1e-9 })
  })

  it('are standard values even where the preferred impedance is none', () => {
    const chosen = three({}, { preferred: 12345, minimum: 2000, maximum: 8000 })
    const series = [2200, 2700, 3300, 3900, 4700, 5600, 6800]
    for (const ref of ['R1', 'R2', 'R3', 'R4', 'R5', 'R6']) expect(series).toContain(valueOf(chosen, ref))
  })

  it('of a two-amplifier stage may be unequal, as on a board that exists', () => {
    const values = { R1: 5100, R2: 20000, R3: 5100, R4: 20000, Rg: 7870 }
    const chosen = planChosen(
      buildDesign({
        sensor: buildDifferentialSensor(-0.1, 0.1, { low: 0, high: 0 }),
        converter: buildConverter({ input: { low: -1.25, high: 1.25 } }),
        rails: { positive: 5, negative: -5 },
        choose: { arrangement: 'two-amplifier-grounded', values, filter: { kind: 'none' } },
      }),
    )
    const gain = (chosen.realised.ideal.high - chosen.realised.ideal.low) / 0.2
    expectClose(gain, 1 + 20000 / 5100 + (2 * 20000) / 7870, { relative: 1e-9 })
  })
})

describe('stages that a person describes', () => {
  const document = buildDesign({
    sensor: buildSensor(-0.01, 0.02),
    rails: { positive: 5, negative: -5 },
    parts: { resistors: { series: 'E12', tolerance: 0, drift: 0 } },
  })

  it('are taken: arrangement and gain of the first, arrangement of the second', () => {
    const stages = [
      { ref: 'S1' as const, arrangement: 'non-inverting', gain: 5 },
      { ref: 'S2' as const, arrangement: 'non-inverting-up' },
    ]
    const chosen = planChosen({ ...document, choose: { stages } })
    expect(chosen.arrangement).toBe('non-inverting+non-inverting-up')
    expectClose(chosen.stages?.[0]?.gain ?? NaN, 5, { relative: 0.05 })
  })

  it('have the pick that is asked for in the list that is shown', () => {
    const choose = {
      arrangement: 'non-inverting+non-inverting-up',
      stages: [{ ref: 'S1' as const, gain: 5 }],
    }
    const chosen = planChosen({ ...document, choose: { ...choose, pick: 2 } })
    expect(chosen.pick).toBe(2)
    const taken = chosen.picks[2]?.values ?? {}
    for (const [ref, value] of Object.entries(taken)) expect(valueOf(chosen, `${ref}B`)).toBe(value)
  })

  it('keep the level that is asked for at the reference leg', () => {
    const chosen = planChosen(
      buildDesign({
        sensor: buildDifferentialSensor(-0.02, 0.03),
        rails: { positive: 5, negative: -5 },
        parts: { resistors: { tolerance: 0, drift: 0 } },
        choose: { arrangement: 'difference', stages: [{ ref: 'S1', reference: 1.25 }] },
      }),
    )
    const [r7, r8] = [valueOf(chosen, 'R7'), valueOf(chosen, 'R8')]
    expectClose((2.5 * r8) / (r7 + r8), 1.25, { relative: 0.01 })
  })
})

it('an arrangement that is not among those for the signal is said to be unknown, and the plan chooses for itself', () => {
  const plan = planDesign(buildDesign({ choose: { arrangement: 'three-amplifier' } }))
  expect(plan.findings[0]?.code).toBe('unknown-arrangement')
  expect(plan.findings[0]?.path).toBe('choose.arrangement')
  expect(plan.chosen).toBe(0)
})
