import { describe, expect, it } from 'vitest'
import { assess } from '#shared/budget/assess.ts'
import type { Design } from '#shared/design/schema.ts'
import {
  arrangementDesigns,
  buildConverter,
  buildDesign,
  buildDifferentialSensor,
  buildSensor,
  withExactResistors,
} from '#tests/support/designs.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { planChosen, valueOf } from '#tests/support/plans.ts'
import { buildTrial, parseDesign } from '#tests/support/trials.ts'

const exact = { tolerance: 0, drift: 0 }

/** An amplifier with nothing wrong with it but what a test gives it. */
const faultless = {
  vos: 0,
  vosDrift: 0,
  ib: 0,
  ios: 0,
  cmrr: 200,
  psrr: 200,
  a0: 1e9,
  rout: 1e-3,
  rin: 1e15,
  rcm: 1e15,
}

const noFilter = { filter: { kind: 'none' as const } }

describe('the room at the pins of a follower', () => {
  const chosen = planChosen(
    buildDesign({
      sensor: buildSensor(0.5, 2, { sourceResistance: 1000 }),
      rails: { positive: 5, tolerance: 0.04 },
      temperature: { low: -15, high: 65 },
      parts: {
        amplifier: {
          ...faultless,
          vos: 1e-3,
          vosDrift: 1e-5,
          ib: 1e-8,
          ibDoubling: 10,
          psrr: 60,
          inputLow: 0.1,
          inputHigh: 1.2,
          outputLow: 0.05,
          outputHigh: 0.07,
        },
      },
      choose: { arrangement: 'follower', ...noFilter },
    }),
  )
  const pin = (name: string) => chosen.headroom.find((h) => h.pin === name)

  it('has the limits of the part and the nominal rails as its region', () => {
    expect(pin('U1 + input')?.allowed).toEqual({ low: 0.1, high: 3.8 })
    expect(pin('U1 output')?.allowed).toEqual({ low: 0.05, high: 4.93 })
  })

  it('has an output that strays by offset, its drift, bias current in the source and supply rejection', () => {
    // 40 K from 25 °C at either end; the bias current doubles every 10 K and may be nothing when cold.
    const offset = 1e-3 + 1e-5 * 40
    const bias = 1e-8 * 2 ** (40 / 10) * 1000
    const supply = 5 * 0.04 * 10 ** (-60 / 20)
    const out = pin('U1 output')?.reached
    expectClose(out?.low ?? NaN, 0.5 - offset - bias - supply, { absolute: 2e-8 })
    expectClose(out?.high ?? NaN, 2 + offset + supply, { absolute: 2e-8 })
  })

  it('is measured to the rail of the same board: the upper one may be low', () => {
    const input = pin('U1 + input')
    expectClose(input?.margin.high ?? NaN, 5 * 0.96 - 1.2 - 2, { absolute: 1e-7 })
    expectClose(input?.margin.low ?? NaN, 0.5 - 1e-8 * 2 ** 4 * 1000 - 0.1, { absolute: 1e-7 })
  })
})

describe('the swing of an output under load', () => {
  const values = { Rf: 1000, Rg: 1000 }
  const loaded = (amplifier: object) =>
    planChosen(
      buildDesign({
        sensor: buildSensor(0.1, 1.2, { sourceResistance: 0 }),
        parts: { resistors: exact, amplifier: { ...faultless, ...amplifier } },
        choose: { arrangement: 'non-inverting', values, ...noFilter },
      }),
    ).headroom.find((h) => h.pin === 'U1 output')

  it('shrinks by the current that it sources: I = Vout/(Rf + Rg)', () => {
    const entry = loaded({ outputHigh: 0.02, outputResistanceHigh: 500 })
    expectClose(entry?.nominalMargin.high ?? NaN, 5 - 0.02 - 2.4 - 500 * (2.4 / 2000), { absolute: 1e-6 })
  })

  it('shrinks by the current that it sinks: feedback returned to a reference pulls it up', () => {
    const entry = planChosen(
      buildDesign({
        sensor: buildSensor(8, 16, { sourceResistance: 0 }),
        parts: { resistors: exact, amplifier: { ...faultless, outputLow: 0.02, outputResistanceLow: 50 } },
        choose: { arrangement: 'weighted-difference', ...noFilter },
      }),
    )
    const [r1, r2] = [valueOf(entry, 'R1'), valueOf(entry, 'R2')]
    const { low } = entry.realised.ideal
    // One current runs from the reference through R1 and R2 into the output.
    const sunk = (2.5 - low) / (r1 + r2)
    expect(sunk).toBeGreaterThan(0)
    const output = entry.headroom.find((h) => h.pin === 'U1 output')
    expectClose(output?.nominalMargin.low ?? NaN, low - 0.02 - 50 * sunk, { absolute: 1e-6 })
  })
})

describe('inner nodes of an integrated instrumentation amplifier', () => {
  it('carry common mode and half the amplified difference each', () => {
    const chosen = planChosen(
      buildDesign({
        sensor: { ...buildDifferentialSensor(-0.02, 0.03, { low: 2.4, high: 2.6 }), sourceResistance: 0 },
        parts: {
          resistors: exact,
          instrumentation: {
            gainError: 0,
            vosIn: 0,
            vosOut: 0,
            vosInDrift: 0,
            vosOutDrift: 0,
            ib: 0,
            ios: 0,
          },
        },
        choose: { arrangement: 'integrated-instrumentation' },
      }),
    )
    const gain = 1 + 50000 / valueOf(chosen, 'Rg')
    const plus = chosen.headroom.find((h) => h.pin === 'U1 internal node, + side')
    // Rejection and supplies add microvolts at most.
    expectClose(plus?.reached.high ?? NaN, 2.6 + (0.03 / 2) * gain, { absolute: 1e-3 })
    expectClose(plus?.reached.low ?? NaN, 2.4 - (0.02 / 2) * gain, { absolute: 1e-3 })
    expect(plus?.allowed).toEqual({ low: 0.2, high: 4.1 })
  })
})

describe('a level of the diagram', () => {
  const chosen = planChosen(buildDesign({ choose: { arrangement: 'non-inverting-up' } }))
  const [sensor, stage, adc] = chosen.levels

  it('stands for sensor, stage and converter, with the gain between them', () => {
    expect(chosen.levels.map((l) => l.node)).toEqual(['sensor', 'S1', 'adc'])
    expect(sensor?.gain).toBeNull()
    expectClose(stage?.gain ?? NaN, chosen.realised.gain, { relative: 1e-6 })
    expectClose(adc?.gain ?? NaN, 1, { relative: 1e-6 })
  })

  it('has the ends of the signal at its node', () => {
    expect([sensor?.nominal.low, sensor?.nominal.high]).toEqual([-0.35, 0.35])
    expect(adc?.nominal).toEqual(chosen.realised.converter)
  })

  it('keeps the room of its tightest pin, as a fraction of the region', () => {
    const output = chosen.headroom.find((h) => h.pin === 'U1 output')
    expect(stage?.region).toEqual(output?.allowed)
    const size = (output?.allowed.high ?? NaN) - (output?.allowed.low ?? NaN)
    expectClose(stage?.room.low ?? NaN, (output?.margin.low ?? NaN) / size, { relative: 1e-9 })
    expectClose(stage?.room.high ?? NaN, (output?.margin.high ?? NaN) / size, { relative: 1e-9 })
    expect(stage?.roomAt).toEqual({ low: 'U1 output', high: 'U1 output' })
  })

  it('has bounds that hold its nominal ends', () => {
    for (const level of chosen.levels) {
      expect(level.worst.low).toBeLessThanOrEqual(Math.min(level.nominal.low, level.nominal.high))
      expect(level.worst.high).toBeGreaterThanOrEqual(Math.max(level.nominal.low, level.nominal.high))
    }
  })

  it('of the sensor ends where the first pin after it clips', () => {
    const clips = chosen.headroom
      .filter((h) => h.stage === 'S1')
      .flatMap((h) => [h.clipsAt.low, h.clipsAt.high])
    const volts = clips.flatMap((q) => (q === null ? [] : [(q / 2.5) * 0.35]))
    expectClose(sensor?.region.high ?? NaN, Math.min(...volts.filter((v) => v > 0)), { relative: 1e-6 })
    expectClose(sensor?.region.low ?? NaN, Math.max(...volts.filter((v) => v < 0)), { relative: 1e-6 })
  })
})

/** Boards by the thousand take their time: chains of many resistors are looked at with exact ones. */
const manyResistors = /amplifier|^difference$/

describe.each(arrangementDesigns.filter(([id]) => !id.includes('+')))(
  'the clip points of %s',
  (id, document) => {
    const design = parseDesign(manyResistors.test(id) ? withExactResistors(document) : document)
    const { spec } = buildTrial(design, id)
    const found = assess(design, spec, 'with-clips')
    const known = new Map<number, ReturnType<typeof lookAt>>()
    const lookAt = (q: number) => {
      const { end, extended } = extend(design, q)
      return { end, pins: assess(extended, spec, 'every-board').pins }
    }
    const at = (q: number) => {
      const there = known.get(q) ?? lookAt(q)
      known.set(q, there)
      return there
    }

    it('are where the margin is used up, planned with the measurand extended to them', () => {
      let checked = 0
      for (const [index, pin] of found.pins.entries())
        for (const limit of ['low', 'high'] as const)
          for (const which of ['clipsAt', 'worstClipsAt'] as const) {
            const q = pin[which][limit]
            if (q === null) continue
            checked++
            const { end, pins } = at(q)
            const margin = pins[index]?.[which === 'clipsAt' ? 'nominalMargin' : 'margin'][end]
            const region = pin.allowed.high - pin.allowed.low
            expectClose(margin?.[limit] ?? NaN, 0, { absolute: 1e-6 * region })
          }
      expect(checked).toBeGreaterThan(0)
    })
  },
)

/** The design with its span drawn out to a measurand, along the sensor's line, and the end that moved. */
function extend(design: Design, q: number): { end: 'low' | 'high'; extended: Design } {
  const { sensor } = design
  if (sensor.kind !== 'voltage') throw new Error('the designs here have a voltage output')
  const { low, high } = sensor.quantity
  const end = Math.abs(q - low) < Math.abs(q - high) ? 'low' : 'high'
  const volts = sensor.output.low + ((q - low) / (high - low)) * (sensor.output.high - sensor.output.low)
  const extended = {
    ...design,
    sensor: {
      ...sensor,
      quantity: { ...sensor.quantity, [end]: q },
      output: { ...sensor.output, [end]: volts },
    },
  }
  return { end, extended }
}

describe('the converter pin', () => {
  it('scales its range with its reference: a ratiometric chain does not move against it', () => {
    const ratiometric = planChosen(
      buildDesign({
        sensor: {
          kind: 'bridge',
          quantity: { name: 'Water level', unit: 'm', low: 0, high: 5 },
          excitation: { voltage: 5, same: 'positive' },
          sensitivity: 0.02,
          bridgeResistance: 350,
        },
        converter: buildConverter({
          input: { low: 0, high: 5 },
          reference: { voltage: 5, same: 'positive' },
          guard: { low: 0.1, high: 0.1 },
        }),
        rails: { positive: 5, tolerance: 0.05 },
        parts: {
          resistors: exact,
          amplifier: { ...faultless, inputLow: -0.1, inputHigh: -0.1 },
        },
        choose: { arrangement: 'two-amplifier' },
      }),
    )
    const { worst, converter } = ratiometric.realised
    expectClose(worst.high.high, converter.high, { absolute: 1e-6 })
    expectClose(worst.high.low, converter.high, { absolute: 1e-6 })
  })

  it('strays with its reference where the signal does not follow it: y = v·Vref,nominal/Vref', () => {
    const chosen = planChosen(
      buildDesign({
        sensor: buildSensor(0.2, 2, { sourceResistance: 0 }),
        converter: buildConverter({ reference: { voltage: 2.5, tolerance: 0.01, drift: 1e-4 } }),
        temperature: { low: -5, high: 45 },
        choose: { arrangement: 'direct', ...noFilter },
      }),
    )
    const spread = 0.01 + 1e-4 * 30
    expectClose(chosen.realised.worst.high.high, 2 / (1 - spread), { relative: 1e-9 })
    expectClose(chosen.realised.worst.high.low, 2 / (1 + spread), { relative: 1e-9 })
  })
})
