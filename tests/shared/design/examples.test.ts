import { readdirSync, readFileSync } from 'node:fs'
import { join } from 'node:path'
import { describe, expect, it } from 'vitest'
import { planDesign } from '#shared/design/plan-design.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import { closedForm } from '#tests/support/closed-forms.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { runOp } from '#tests/support/ngspice.ts'
import { chosenOf, type Chosen } from '#tests/support/plans.ts'
import { root } from '#tests/support/source-imports.ts'
import { parseDesign } from '#tests/support/trials.ts'

/** What each example's sensor gives at both ends, V, and its codes, worked out by hand. */
const byHand: Record<string, { sensor: [number, number]; lsb: number; source: number; reference: number }> = {
  // 5 V · 20 mV/V · 850/1100 … 1080/1100; 4.096 V in 16 bits; half the bridge a leg
  'air-pressure': {
    sensor: [0.0772727272727, 0.0981818181818],
    lsb: 62.5e-6,
    source: 1500,
    reference: 4.096,
  },
  'battery-voltage': { sensor: [8, 16], lsb: 152.587890625e-6, source: 0, reference: 2.5 },
  conductivity: { sensor: [0, 1], lsb: 152.587890625e-6, source: 50, reference: 2.5 },
  'differential-transmitter': { sensor: [-1, 1], lsb: 152.587890625e-6, source: 100, reference: 2.5 },
  'flow-velocity': { sensor: [-0.35, 0.35], lsb: 152.587890625e-6, source: 100, reference: 2.5 },
  'logger-ten-volts': { sensor: [-10, 10], lsb: 152.587890625e-6, source: 100, reference: 2.5 },
  'relative-humidity': { sensor: [0.1, 1], lsb: 152.587890625e-6, source: 100, reference: 2.5 },
  // 5 V · 2 mV/V · −0.1/5 … 5.2/5
  'stilling-well-level': { sensor: [-0.0002, 0.0104], lsb: 62.5e-6, source: 175, reference: 4.096 },
}

const folder = join(root, 'docs/examples')
const files = readdirSync(folder).filter((name) => name.endsWith('.json'))

it('has figures worked out by hand for every example', () => {
  expect(files.map((name) => name.replace('.json', '')).sort()).toEqual(Object.keys(byHand).sort())
})

describe.each(Object.entries(byHand))('docs/examples/%s.json', (name, hand) => {
  const document = JSON.parse(readFileSync(join(folder, `${name}.json`), 'utf8')) as DesignDocument
  const design = parseDesign(document)
  const plan = planDesign(document)
  const chosen = chosenOf(plan)

  it('plans, with a feasible arrangement in front and nothing over', () => {
    expect(plan.chosen).toBe(0)
    expect(chosen.feasible).toBe(true)
    expect(plan.findings).toEqual([])
    expect(chosen.headroom.filter((h) => h.state === 'over')).toEqual([])
    expect(chosen.findings.filter((f) => f.severity === 'over')).toEqual([])
    expect(chosen.bound.proven).toBe(true)
  })

  it('asks for the gain and offset of the line from the sensor onto its target', () => {
    const [s0, s1] = hand.sensor
    const { target, gain, offset, sensor } = plan.required
    expectClose(sensor.low, s0, { absolute: 1e-12 })
    expectClose(sensor.high, s1, { absolute: 1e-12 })
    expectClose(gain, (target.high - target.low) / (s1 - s0), { relative: 1e-8 })
    expectClose(gain * s0 + offset, target.low, { absolute: 1e-9 })
    expectClose(plan.lsb, hand.lsb, { relative: 1e-12 })
  })

  it('reaches the ends that its values give by hand', () => {
    const { ideal } = chosen.realised
    for (const [end, signal] of [
      ['low', hand.sensor[0]],
      ['high', hand.sensor[1]],
    ] as const)
      // The arms of a bridge change with its signal, by a millionth of what its middle resistance is taken for.
      expectClose(ideal[end], calculated(chosen, signal, hand), {
        absolute: 2e-6 * Math.abs(ideal.high - ideal.low),
      })
  })

  it('has the codes of its ends: ⌊y/LSB + ½⌋', () => {
    const { converter, codes, codesUsed } = chosen.realised
    expect(codes).toEqual({
      low: Math.floor(converter.low / hand.lsb + 0.5),
      high: Math.floor(converter.high / hand.lsb + 0.5),
    })
    expectClose(codesUsed, Math.abs(converter.high - converter.low) / hand.lsb, { relative: 1e-9 })
  })

  it('keeps every board inside the converter’s range, with the guard that it prints', () => {
    const { low, high } = design.converter.input
    const { worst } = chosen.realised
    expect(Math.min(worst.low.low, worst.high.low)).toBeGreaterThan(low)
    expect(Math.max(worst.low.high, worst.high.high)).toBeLessThan(high)
    const { guarded } = plan.required
    expectClose(guarded.low, low + chosen.guard.low * (high - low), { absolute: 1e-9 })
    expectClose(guarded.high, high - chosen.guard.high * (high - low), { absolute: 1e-9 })
    expect(chosen.target.low).toBeGreaterThanOrEqual(guarded.low - 1e-9)
    expect(chosen.target.high).toBeLessThanOrEqual(guarded.high + 1e-9)
  })

  it('keeps the readings beyond the span inside as well', () => {
    const { sensor, converter } = design
    if (!sensor.beyond || sensor.kind !== 'voltage') return
    const { gain, offset } = chosen.realised
    for (const s of [sensor.beyond.low, sensor.beyond.high]) {
      expect(gain * s + offset).toBeGreaterThan(converter.input.low)
      expect(gain * s + offset).toBeLessThan(converter.input.high)
    }
  })

  it('has worst-case ends within what the first-order budget adds up for its network', () => {
    const { worst, converter } = chosen.realised
    // The bound holds neither the converter's own errors nor readings that differ from each other.
    const outside =
      /^(converter\.(?!inputCurrent)|noise$|calibration\.)|\.(selfHeating|loopGain|loading|nonlinearity)$/
    const lines = chosen.budget.lines.filter(({ id }) => !outside.test(id))
    const sum = lines.reduce((total, line) => total + line.asBuilt, 0)
    const halves = (['low', 'high'] as const).map((end) => (worst[end].high - worst[end].low) / 2)
    // The sum is of first order, at its own worst point; the bound is exact, at either end.
    expectClose(sum, Math.max(...halves), { relative: 0.05, absolute: 1e-6 })
    for (const end of ['low', 'high'] as const) {
      expect(worst[end].low).toBeLessThan(converter[end])
      expect(worst[end].high).toBeGreaterThan(converter[end])
    }
  })

  it('has the operating point of ngspice on its netlist', async () => {
    const { adc } = await runOp(chosen.netlist)
    const { low, high } = chosen.realised.converter
    expectClose(adc ?? NaN, low, { absolute: 1e-6 * Math.abs(high - low) })
  })
})

/** y by hand: stages one after the other, then the filter's resistor against the converter's input. */
function calculated(chosen: Chosen, signal: number, hand: { source: number; reference: number }): number {
  const around = {
    commonMode: 2.5,
    source: hand.source,
    reference: hand.reference,
    referenceResistance: 0,
    k: 50000,
  }
  const values = (suffix: string) =>
    Object.fromEntries(
      chosen.components.flatMap((c) => {
        const own = new RegExp(`^(R[1-8fgs])${suffix}$`).exec(c.ref)
        return own?.[1] && c.value !== undefined ? [[own[1], c.value]] : []
      }),
    )
  const [first = '', second] = chosen.arrangement.split('+')
  const u = closedForm(first, values(''), { ...around, signal })
  const v = second === undefined ? u : closedForm(second, values('B'), { ...around, signal: u, source: 0 })
  return (v * 1e12) / (1e12 + chosen.filter.resistance)
}
