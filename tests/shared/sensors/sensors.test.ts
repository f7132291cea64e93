import { describe, expect, it } from 'vitest'
import { solveDc } from '#shared/analysis/dc.ts'
import { buildChain } from '#shared/design/chain.ts'
import { NetworkBuilder } from '#shared/network/builder.ts'
import { sensorKinds, sensorSchema, kindOf, type Sensor } from '#shared/sensors/index.ts'
import type { SensorContext, SensorKind } from '#shared/sensors/kinds/define.ts'
import { fieldMeta } from '#shared/units/fields.ts'
import { buildDesign, buildSensor } from '#tests/support/designs.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { buildTrial, parseDesign } from '#tests/support/trials.ts'

const context: SensorContext = {
  shared: {
    converter: { voltage: 2.5, variable: 'converterReference' },
    shift: { voltage: 2.5, variable: 'converterReference' },
    positive: { voltage: 5, variable: 'positiveRail' },
  },
  temperatureSpan: 35,
  years: 1,
  distribution: 'rectangular',
}

interface Unwrappable {
  def: { innerType?: Unwrappable; type: string; shape?: Record<string, Unwrappable>; options?: Unwrappable[] }
}

const unwrap = (node: Unwrappable | undefined): Unwrappable | undefined =>
  node?.def.innerType ? unwrap(node.def.innerType) : node

/** The same is asked of every member of the list. */
describe.each(sensorKinds.map((kind) => ({ name: kind.kind, kind: kind as unknown as SensorKind })))(
  'the sensor kind $name',
  ({ kind }) => {
    const sensor = sensorSchema.parse(kind.example) as Sensor

    it('has an example that its schema and its own checks accept', () => {
      expect(kind.schema.safeParse(kind.example).success).toBe(true)
      expect(kind.check(sensor)).toEqual([])
      expect(kindOf(sensor).kind).toBe(kind.kind)
    })

    it('has a title and one line about when to use it', () => {
      expect(kind.title).toMatch(/^[A-Z]/)
      expect(kind.summary).toMatch(/\.$/)
    })

    it('has a form whose keys exist, numbers with label and unit', () => {
      const { shape = {} } = (kind.schema as unknown as Unwrappable).def
      for (const key of kind.form) {
        expect(Object.keys(shape)).toContain(key)
        const node = unwrap(shape[key])
        if (node?.def.type === 'number') expect(fieldMeta.get(node as never)?.label).toMatch(/\w/)
      }
    })

    it('gives a source network whose open output is its signal, at both ends and in the middle', () => {
      const { ends } = kind.signal(sensor, context)
      const { low, high } = sensor.quantity
      for (const share of [0, 0.5, 1]) {
        const builder = new NetworkBuilder()
        const source = kind.source(sensor, context, builder, low + share * (high - low))
        const network = builder.build({
          title: 'source',
          output: { p: source.p, n: source.n ?? '0' },
          temperature: 25,
        })
        const { output } = solveDc(network, { model: 'ideal' })
        expectClose(output, ends.low + share * (ends.high - ends.low), { absolute: 1e-12, relative: 1e-9 })
      }
    })

    it('moves its output volt for volt with its signal variable', () => {
      const builder = new NetworkBuilder()
      const source = kind.source(sensor, context, builder, sensor.quantity.low)
      const network = builder.build({
        title: 'source',
        output: { p: source.p, n: source.n ?? '0' },
        temperature: 25,
      })
      const at = (amount: number) =>
        solveDc(network, { model: 'ideal', extra: [{ ref: source.signal.ref, port: 'value', amount }] })
          .output
      expectClose(at(0.01) - at(0), 0.01, { relative: 1e-9 })
      expect(source.variables.map((v) => v.id)).toContain(source.signal.variable)
    })

    it('has variables with an order of low, nominal, high', () => {
      const source = kind.source(sensor, context, new NetworkBuilder(), sensor.quantity.high)
      for (const v of source.variables) {
        expect(v.low).toBeLessThanOrEqual(v.nominal)
        expect(v.high).toBeGreaterThanOrEqual(v.nominal)
      }
    })
  },
)

describe('a bridge', () => {
  const bridge = (more: object = {}) =>
    sensorSchema.parse({
      kind: 'bridge',
      quantity: { name: 'Water level', unit: 'm', low: -0.1, high: 5.2 },
      excitation: 5,
      sensitivity: 0.002,
      ratedAt: 5,
      bridgeResistance: 350,
      ...more,
    }) as Sensor
  const signal = (sensor: Sensor) => kindOf(sensor).signal(sensor, context)

  it('gives excitation · sensitivity · (q − zeroAt)/(ratedAt − zeroAt)', () => {
    const { ends } = signal(bridge())
    expectClose(ends.low, (5 * 0.002 * -0.1) / 5, { relative: 1e-12 })
    expectClose(ends.high, (5 * 0.002 * 5.2) / 5, { relative: 1e-12 })
    const shifted = signal(bridge({ zeroAt: 1, ratedAt: 6 })).ends
    expectClose(shifted.high, (5 * 0.002 * 4.2) / 5, { relative: 1e-12 })
  })

  it('shows half its resistance a leg, and half the excitation as common mode', () => {
    const found = signal(bridge())
    expect(found.sourceResistance).toBe(175)
    expectClose(found.commonMode?.low ?? NaN, 2.5, { relative: 1e-12 })
    expect(found.differential).toBe(true)
  })

  it('loses to a resistance in its excitation as in a divider', () => {
    const { ends } = signal(bridge({ excitation: { voltage: 5, resistance: 50 } }))
    expectClose(ends.high, ((5 * 350) / 400) * 0.002 * (5.2 / 5), { relative: 1e-12 })
  })

  it('takes the voltage of the source that it shares', () => {
    expectClose(signal(bridge({ excitation: { same: 'converter' } })).ends.high, 2.5 * 0.002 * 1.04, {
      relative: 1e-12,
    })
    expectClose(signal(bridge({ excitation: { same: 'positive' } })).ends.high, 5 * 0.002 * 1.04, {
      relative: 1e-12,
    })
  })
})

describe('a differential voltage output', () => {
  it('moves both legs about the middle of its common mode', () => {
    const sensor = sensorSchema.parse(
      buildSensor(-1, 1, { wiring: 'differential', commonMode: { low: 2, high: 3 } }),
    ) as Sensor
    const builder = new NetworkBuilder()
    kindOf(sensor).source(sensor, context, builder, 2.5)
    const network = builder.build({
      title: 'source',
      output: { p: 'sense_p', n: 'sense_n' },
      temperature: 25,
    })
    const solution = solveDc(network, { model: 'ideal' })
    expect([solution.voltage('sense_p'), solution.voltage('sense_n')]).toEqual([3, 2])
  })
})

describe('errors of a sensor', () => {
  const variables = (q: number, accuracy: object, kind: 'voltage' | 'bridge' = 'voltage') => {
    const sensor =
      kind === 'voltage'
        ? buildSensor(1, 3, { quantity: { name: 'Flow', unit: 'l/s', low: 0, high: 10 }, accuracy })
        : {
            kind,
            quantity: { name: 'Level', unit: 'm', low: 0, high: 10 },
            excitation: 5,
            sensitivity: 0.004,
            accuracy,
          }
    const parsed = sensorSchema.parse(sensor) as Sensor
    const source = kindOf(parsed).source(parsed, context, new NetworkBuilder(), q)
    return (id: string) => source.variables.find((v) => v.id === id)?.high ?? 0
  }

  it('are limits of the output span: zero and its drift everywhere', () => {
    for (const q of [0, 10])
      expectClose(variables(q, { zero: 0.001, zeroDrift: 1e-4 })('sensor.zero'), (0.001 + 35e-4) * 2, {
        relative: 1e-9,
      })
  })

  it('of the span grow with the travel from the low end', () => {
    const at = (q: number) => variables(q, { span: 0.01, spanDrift: 1e-4 })('sensor.span')
    expectClose(at(10), (0.01 + 35e-4) * 2, { relative: 1e-9 })
    expectClose(at(5), (0.01 + 35e-4) * 1, { relative: 1e-9 })
    expect(at(0)).toBe(0)
  })

  it('of a bridge are told of its own span', () => {
    expectClose(variables(10, { linearity: 0.001 }, 'bridge')('sensor.linearity'), 0.001 * 0.02, {
      relative: 1e-9,
    })
  })

  it('reach the converter with the gain of the chain', () => {
    const document = buildDesign({
      sensor: buildSensor(-0.35, 0.35, { accuracy: { zero: 0.01 } }),
      choose: { arrangement: 'non-inverting-up' },
    })
    const design = parseDesign(document)
    const trial = buildTrial(design, 'non-inverting-up')
    const chain = buildChain(design, trial.spec, 0)
    const zero = chain.variables.find((v) => v.id === 'sensor.zero')
    expectClose(zero?.high ?? NaN, 0.01 * 0.7, { relative: 1e-9 })
    expect(zero?.injections).toEqual([{ ref: 'VSENSE', port: 'value', scale: 1 }])
  })
})

describe('cautions', () => {
  it('warn of hazardous volts where miswiring or common mode bring them', () => {
    const cautions = (more: object) => {
      const sensor = sensorSchema.parse({ ...buildSensor(0, 1), ...more }) as Sensor
      return kindOf(sensor)
        .cautions(sensor)
        .map((c) => c.code)
    }
    expect(cautions({ fault: { low: -230, high: 230 } })).toEqual(['hazardous-voltage'])
    expect(cautions({ wiring: 'differential', commonMode: { low: 0, high: 60 } })).toEqual([
      'hazardous-voltage',
    ])
    expect(cautions({ fault: { low: -30, high: 30 } })).toEqual([])
  })
})
