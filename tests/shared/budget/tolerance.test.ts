import { describe, expect, it } from 'vitest'
import { buildConverter, buildDesign, buildSensor } from '#tests/support/designs.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { planChosen, valueOf, type Chosen } from '#tests/support/plans.ts'

/* First-order lines against closed forms: relative sensitivity ±(1 − ratio) of a divider, ±(1 − 1/G) of a gain. */

const faultless = { vos: 0, vosDrift: 0, ib: 0, ios: 0, cmrr: 200, psrr: 200, a0: 1e9 }

const line = (chosen: Chosen, id: string) => {
  const found = chosen.tolerance.lines.find((l) => l.id === id)
  if (!found) throw new Error(`there is no line ${id}: ${chosen.tolerance.lines.map((l) => l.id).join(', ')}`)
  return found
}

describe('what a resistor’s tolerance does to the ends', () => {
  it('is Vout·(1 − 1/G)·t for the resistors of a gain', () => {
    const chosen = planChosen(
      buildDesign({
        sensor: buildSensor(0.05, 0.24, { sourceResistance: 0 }),
        parts: { resistors: { tolerance: 0.01, drift: 0 }, amplifier: faultless },
        choose: { arrangement: 'non-inverting', filter: { kind: 'none' } },
      }),
    )
    const gain = 1 + valueOf(chosen, 'Rf') / valueOf(chosen, 'Rg')
    for (const [ref, sign] of [
      ['Rf', 1],
      ['Rg', -1],
    ] as const) {
      const { low, high } = line(chosen, `${ref}.initial`)
      expectClose(low, sign * 0.05 * gain * (1 - 1 / gain) * 0.01, { relative: 1e-5 })
      expectClose(high, sign * 0.24 * gain * (1 - 1 / gain) * 0.01, { relative: 1e-5 })
    }
  })

  it('is Vout·(1 − ratio)·t for the resistors of a divider, and drift adds its own line', () => {
    const chosen = planChosen(
      buildDesign({
        sensor: buildSensor(1, 9, { sourceResistance: 0 }),
        temperature: { low: 5, high: 65 },
        parts: { resistors: { tolerance: 0.01, drift: 1e-4 }, amplifier: faultless },
        choose: { arrangement: 'attenuator', filter: { kind: 'none' } },
      }),
    )
    const [r1, r2] = [valueOf(chosen, 'R1'), valueOf(chosen, 'R2')]
    const share = r2 / (r1 + r2)
    expectClose(line(chosen, 'R2.initial').high, 9 * share * (1 - share) * 0.01, { relative: 1e-5 })
    expectClose(line(chosen, 'R1.initial').high, -9 * share * (1 - share) * 0.01, { relative: 1e-5 })
    expectClose(line(chosen, 'R2.temperature').high, 9 * share * (1 - share) * 1e-4 * 40, { relative: 1e-5 })
  })

  it('sums to nothing over all resistors that move together, as a ratio does', () => {
    const chosen = planChosen(
      buildDesign({
        sensor: buildSensor(-0.35, 0.35, { sourceResistance: 0 }),
        parts: { resistors: { tolerance: 0.01, drift: 0 }, amplifier: faultless },
        choose: { arrangement: 'non-inverting-up', filter: { kind: 'none' } },
      }),
    )
    const lines = chosen.tolerance.lines.filter((l) => l.id.endsWith('.initial'))
    expect(lines.length).toBe(4)
    for (const end of ['low', 'high'] as const)
      expectClose(
        lines.reduce((sum, l) => sum + l[end], 0),
        0,
        { absolute: 1e-9 },
      )
  })
})

describe('what amplifier and references do to the ends', () => {
  it('is offset times noise gain, and bias current times the resistance at the + pin', () => {
    const chosen = planChosen(
      buildDesign({
        sensor: buildSensor(0.05, 0.24, { sourceResistance: 1000 }),
        temperature: { low: 25, high: 25 },
        parts: {
          resistors: { tolerance: 0, drift: 0 },
          amplifier: { ...faultless, vos: 1e-3, ios: 2e-9, ibDoubling: 0 },
        },
        choose: { arrangement: 'non-inverting', filter: { kind: 'none' } },
      }),
    )
    const [rf, rg] = [valueOf(chosen, 'Rf'), valueOf(chosen, 'Rg')]
    const gain = 1 + rf / rg
    expectClose(Math.abs(line(chosen, 'U1.vos').high), 1e-3 * gain, { relative: 1e-5 })
    // Half of Ios into the + pin, half out of the − pin.
    expectClose(Math.abs(line(chosen, 'U1.ios').high), 1e-9 * (1000 * gain + rf), { relative: 1e-4 })
  })

  it('cancels where one reference makes the offset and scales the converter', () => {
    const shared = (more: object) =>
      planChosen(
        buildDesign({
          sensor: buildSensor(-0.35, 0.35, { sourceResistance: 0 }),
          converter: buildConverter({ reference: { voltage: 2.5, tolerance: 0.01 } }),
          parts: { resistors: { tolerance: 0, drift: 0 }, amplifier: faultless },
          choose: { arrangement: 'non-inverting-up', filter: { kind: 'none' } },
          ...more,
        }),
      )
    const one = shared({})
    // y = (G·s + b·Vref/Vnominal)·Vnominal/Vref: only the signal's part still moves.
    const { gain } = one.realised
    expectClose(line(one, 'converterReference').high, -gain * 0.35 * 0.01, { relative: 1e-3 })
    expectClose(line(one, 'converterReference').low, gain * 0.35 * 0.01, { relative: 1e-3 })
    const two = shared({ shiftReference: { voltage: 2.5, tolerance: 0.01 } })
    expectClose(line(two, 'shiftReference').high, two.realised.offset * 0.01, { relative: 1e-3 })
    expectClose(line(two, 'converterReference').high, -two.realised.converter.high * 0.01, { relative: 1e-6 })
  })

  it('adds to a worst case by magnitudes and to a root of squares', () => {
    const { tolerance } = planChosen(buildDesign({ choose: { arrangement: 'non-inverting-up' } }))
    for (const end of ['low', 'high'] as const) {
      const sizes = tolerance.lines.map((l) => Math.abs(l[end]))
      expectClose(
        tolerance.worst[end],
        sizes.reduce((a, b) => a + b),
        { relative: 1e-9 },
      )
      expectClose(tolerance.rss[end], Math.hypot(...sizes), { relative: 1e-9 })
    }
  })
})
