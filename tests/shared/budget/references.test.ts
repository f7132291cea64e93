import { describe, expect, it } from 'vitest'
import { buildConverter, buildDesign, buildSensor } from '#tests/support/designs.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { planChosen, valueOf } from '#tests/support/plans.ts'

describe('the load of a reference', () => {
  const design = (tolerance: number, reference: object = {}) =>
    buildDesign({
      sensor: buildSensor(-10, 10, { sourceResistance: 0 }),
      converter: buildConverter({ reference: { voltage: 2.5, ...reference } }),
      parts: { resistors: { tolerance, drift: 0 } },
      choose: { arrangement: 'level-shift' },
    })

  /** Current from the reference into the common node of three resistors, by Ohm's and Kirchhoff's laws. */
  const current = (s: number, r1: number, r2: number, r3: number) => {
    const node = (s / r1 + 2.5 / r2) / (1 / r1 + 1 / r2 + 1 / r3)
    return (2.5 - node) / r2
  }

  it('is what its resistors draw at the end that draws most', () => {
    const chosen = planChosen(design(0))
    const [r1, r2, r3] = ['R1', 'R2', 'R3'].map((ref) => valueOf(chosen, ref)) as [number, number, number]
    const load = chosen.loads.find((l) => l.node === 'vadcref')
    // The bias current of the amplifier is picoamperes.
    expectClose(load?.source ?? NaN, current(-10, r1, r2, r3), { relative: 1e-5 })
    expect(load?.sink).toBe(0)
    expect(load?.state).toBe('clear')
  })

  it('is largest with the resistors at the corner that draws most', () => {
    const tolerance = 0.05
    const chosen = planChosen(design(tolerance))
    const [r1, r2, r3] = ['R1', 'R2', 'R3'].map((ref) => valueOf(chosen, ref)) as [number, number, number]
    const corners = [-1, 1].flatMap((a) =>
      [-1, 1].flatMap((b) =>
        [-1, 1].map((c) =>
          current(-10, r1 * (1 + a * tolerance), r2 * (1 + b * tolerance), r3 * (1 + c * tolerance)),
        ),
      ),
    )
    expectClose(chosen.loads[0]?.source ?? NaN, Math.max(...corners), { relative: 1e-5 })
  })

  it('includes the excitation of a bridge that the same reference feeds', () => {
    const chosen = planChosen(
      buildDesign({
        sensor: {
          kind: 'bridge',
          quantity: { name: 'Water level', unit: 'm', low: 0, high: 5 },
          excitation: { same: 'converter' },
          sensitivity: 0.01,
          bridgeResistance: 1000,
        },
        converter: buildConverter({ reference: { voltage: 2.5, source: 0.02 } }),
        rails: { positive: 5, negative: -5 },
        parts: { resistors: { tolerance: 0, drift: 0 } },
        choose: { arrangement: 'two-amplifier' },
      }),
    )
    const [r7, r8] = [valueOf(chosen, 'R7'), valueOf(chosen, 'R8')]
    expectClose(chosen.loads[0]?.source ?? NaN, 2.5 / 1000 + 2.5 / (r7 + r8), { relative: 1e-4 })
  })

  it('moves the shared node: a reference with output resistance stands in the realised offset', () => {
    const stiff = planChosen(design(0))
    const values = Object.fromEntries(['R1', 'R2', 'R3'].map((ref) => [ref, valueOf(stiff, ref)]))
    const soft = design(0, { outputResistance: 100 })
    const chosen = planChosen({ ...soft, choose: { arrangement: 'level-shift', values } })
    const [r1, r2, r3] = [values.R1!, values.R2! + 100, values.R3!]
    const node = (s: number) => (s / r1 + 2.5 / r2) / (1 / r1 + 1 / r2 + 1 / r3)
    expectClose(chosen.realised.ideal.low, node(-10), { relative: 1e-8 })
    expectClose(chosen.realised.ideal.high, node(10), { relative: 1e-8 })
  })
})
