import { z } from 'zod'
import type { ErrorInput } from '#shared/budget/error-input.ts'
import type { Distribution, Fault } from '#shared/design/plan.ts'
import { fraction, nonNegative, numberField, positive } from '#shared/units/fields.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import {
  accuracyErrors,
  addLeg,
  alongLine,
  commonKeys,
  legResistance,
  toInputs,
  toVariables,
  type SensorError,
} from './common.ts'
import { defineSensor, type SensorContext, type SensorSource } from './define.ts'

const excitationVoltage = () => numberField('Excitation voltage', 'V', { above: 0, max: 100 })

const excitationKeys = z.strictObject({
  voltage: excitationVoltage().optional(),
  tolerance: fraction('Excitation tolerance').default(0),
  drift: nonNegative('Excitation drift', '1/K', 0.01).default(0),
  resistance: nonNegative('Resistance of the excitation', 'Ω').default(0),
  same: z.enum(['converter', 'shift', 'positive']).optional(),
  ratioTolerance: fraction('Excitation ratio tolerance').default(0),
})

const schema = z.strictObject({
  kind: z.literal('bridge'),
  ...commonKeys,
  excitation: z.union([excitationVoltage(), excitationKeys]),
  sensitivity: positive('Sensitivity', 'V/V', 1),
  zeroAt: numberField('Measurand at zero output', '').default(0),
  ratedAt: numberField('Measurand at rated output', '').optional(),
  zeroBalance: nonNegative('Zero balance', 'V/V', 1).default(0),
  sensitivityTolerance: fraction('Sensitivity tolerance').default(0),
  bridgeResistance: positive('Bridge resistance', 'Ω').default(350),
  beyond: z
    .strictObject({
      low: numberField('Measurand beyond, low', ''),
      high: numberField('Measurand beyond, high', ''),
    })
    .optional(),
})
type Bridge = z.output<typeof schema>

/** Output over excitation at which an arm of the bridge would have no resistance left is 1; stay clear of it, V/V. */
const LARGEST_RATIO = 0.9

interface Excitation {
  voltage: number
  /** Limit ± over temperature, and its two parts. */
  tolerance: number
  initial: number
  drift: number
  resistance: number
  /** Name of the uncertain quantity; shared with a reference where it is one. */
  variable: string
  ratioTolerance: number
}

function toExcitation(sensor: Bridge, context: SensorContext): Excitation {
  const given =
    typeof sensor.excitation === 'number'
      ? excitationKeys.parse({ voltage: sensor.excitation })
      : sensor.excitation
  const shared = given.same ? context.shared[given.same] : null
  return {
    voltage: shared?.voltage ?? given.voltage ?? 0,
    tolerance: given.tolerance + given.drift * context.temperatureSpan,
    initial: given.tolerance,
    drift: given.drift,
    resistance: given.resistance,
    variable: shared?.variable ?? 'excitation',
    ratioTolerance: given.ratioTolerance,
  }
}

/** Ratio output/excitation at a measurand value: sensitivity·(q − zeroAt)/(ratedAt − zeroAt), V/V. */
function ratioAt(sensor: Bridge, q: number): number {
  const rated = sensor.ratedAt ?? sensor.quantity.high
  return (sensor.sensitivity * (q - sensor.zeroAt)) / (rated - sensor.zeroAt)
}

/** Errors that only a bridge has, V at its output. */
const bridgeErrors = (sensor: Bridge, scale: number, value: number): SensorError[] => [
  {
    id: 'sensor.zeroBalance',
    label: 'Zero balance of the bridge',
    path: 'sensor.zeroBalance',
    limit: sensor.zeroBalance,
    unit: 'V/V',
    behaviour: 'constant',
    scale,
    bound: 'sensor.zero',
  },
  {
    id: 'sensor.sensitivityTolerance',
    label: 'Sensitivity of the bridge',
    path: 'sensor.sensitivityTolerance',
    limit: sensor.sensitivityTolerance,
    unit: '',
    behaviour: 'constant',
    scale: value,
    bound: 'sensor.span',
  },
]

/** An excitation of its own has tolerance and drift; a shared one only what its ratio to the shared source adds. */
function excitationInputs(excitation: Excitation, distribution: Distribution): ErrorInput[] {
  const input = (
    key: 'tolerance' | 'drift' | 'ratioTolerance',
    label: string,
    limit: number,
    behaviour: ErrorInput['behaviour'],
  ): ErrorInput => ({
    id: `excitation.${key}`,
    label,
    source: 'excitation',
    path: `sensor.excitation.${key}`,
    limit,
    unit: '',
    distribution,
    behaviour,
    group: null,
    effects: [{ ref: 'VEXC', port: 'value', scale: 1, relative: true }],
    onOutput: null,
  })
  const list =
    excitation.variable === 'excitation'
      ? [
          input('tolerance', 'Excitation', excitation.initial, 'constant'),
          input('drift', 'Excitation over temperature', excitation.drift, 'sensor-temperature'),
        ]
      : [input('ratioTolerance', 'Excitation against its reference', excitation.ratioTolerance, 'constant')]
  return list.filter(({ limit }) => limit > 0)
}

/** Share of the excitation that reaches the bridge through its series resistance. */
const delivered = (sensor: Bridge, e: Excitation) =>
  sensor.bridgeResistance / (sensor.bridgeResistance + e.resistance)

/**
 * Full resistive bridge described by its sensitivity (common practice). Four active arms R(1 ± x) with x the ratio of
 * output to excitation: output = excitation·x exactly, source resistance R/2 a leg, common mode half the excitation.
 * VZERO, 0 V nominal, carries the zero error of the sensor.
 */
export const bridge = defineSensor({
  kind: 'bridge',
  title: 'Resistive bridge',
  summary: 'A full bridge known by its sensitivity in mV/V: load cells, pressure and level transducers.',
  schema,
  form: ['excitation', 'sensitivity', 'zeroAt', 'ratedAt', 'bridgeResistance', 'bandwidth', 'zeroBalance'],
  example: {
    kind: 'bridge',
    quantity: { name: 'Stilling-well level', unit: 'm', low: 0, high: 5 },
    excitation: 5,
    sensitivity: 0.002,
    bridgeResistance: 350,
    bandwidth: 5,
  },

  check(sensor) {
    const faults: Fault[] = []
    if ((sensor.ratedAt ?? sensor.quantity.high) === sensor.zeroAt)
      faults.push({
        path: 'ratedAt',
        reason: 'the bridge has no span: zero and rated output lie at the same measurand',
        accepted: `a value other than ${sensor.zeroAt}`,
      })
    else
      for (const [path, q] of [
        ['quantity.low', sensor.quantity.low],
        ['quantity.high', sensor.quantity.high],
        ['beyond.low', sensor.beyond?.low],
        ['beyond.high', sensor.beyond?.high],
      ] as const)
        if (q !== undefined && Math.abs(ratioAt(sensor, q)) >= LARGEST_RATIO)
          faults.push({
            path,
            reason: `the bridge would give ${formatQuantity(ratioAt(sensor, q), 'V/V', { digits: 3 })} there; an arm has no resistance left`,
            accepted: `a measurand, rated output and sensitivity that stay below ${LARGEST_RATIO} V/V`,
          })
    const given = sensor.excitation
    if (typeof given === 'object' && given.voltage === undefined && !given.same)
      faults.push({
        path: 'excitation.voltage',
        reason: 'the excitation has no voltage',
        accepted: 'a number above 0, in V, or same: converter, shift or positive',
      })
    if (sensor.beyond) {
      const rising = sensor.quantity.high > sensor.quantity.low ? 1 : -1
      if (
        rising * (sensor.quantity.low - sensor.beyond.low) < 0 ||
        rising * (sensor.beyond.high - sensor.quantity.high) < 0
      )
        faults.push({
          path: 'beyond',
          reason: 'the readings beyond lie inside the span',
          accepted: 'values outside the span of the measurand',
        })
    }
    return faults
  },

  signal(sensor, context) {
    const excitation = toExcitation(sensor, context)
    const scale = excitation.voltage * delivered(sensor, excitation)
    const at = (q: number) => scale * ratioAt(sensor, q)
    const half = scale / 2
    return {
      ends: { low: at(sensor.quantity.low), high: at(sensor.quantity.high) },
      beyond: sensor.beyond ? { low: at(sensor.beyond.low), high: at(sensor.beyond.high) } : null,
      per: 'V',
      differential: true,
      commonMode: { low: half * (1 - excitation.tolerance), high: half * (1 + excitation.tolerance) },
      sourceResistance: sensor.bridgeResistance / 2 + legResistance(sensor).value,
      floating: false,
    }
  },

  source(sensor, context, builder, quantity): SensorSource {
    const excitation = toExcitation(sensor, context)
    const x = ratioAt(sensor, quantity)
    const r = sensor.bridgeResistance
    const stage = 'source'
    builder.voltageSource({
      ref: 'VEXC',
      p: excitation.resistance > 0 ? 'exc' : 'vexc',
      n: '0',
      value: excitation.voltage,
      stage,
    })
    if (excitation.resistance > 0)
      builder.resistor({ ref: 'REXC', a: 'exc', b: 'vexc', value: excitation.resistance, stage, fixed: true })
    const arm = (ref: string, a: string, b: string, value: number) =>
      builder.resistor({ ref, a, b, value, stage, fixed: true, group: 'bridge' })
    arm('RSENSE1', 'vexc', 'sense_p', r * (1 - x))
    arm('RSENSE2', 'sense_p', '0', r * (1 + x))
    arm('RSENSE3', 'vexc', 'sense_n', r * (1 + x))
    arm('RSENSE4', 'sense_n', '0', r * (1 - x))
    builder.voltageSource({ ref: 'VZERO', p: 'zero_p', n: 'sense_p', value: 0, ac: 1, stage })
    const series = (ref: string, from: string, to: string) => addLeg(builder, sensor, ref, from, to)
    const scale = excitation.voltage * delivered(sensor, excitation)
    const ends = {
      low: scale * ratioAt(sensor, sensor.quantity.low),
      high: scale * ratioAt(sensor, sensor.quantity.high),
    }
    const value = alongLine(sensor.quantity, ends, quantity)
    // The sensitivity tolerance pivots at zero output, so travel is counted from there.
    const errors = [
      ...accuracyErrors(sensor.accuracy, { value, low: 0, span: ends.high - ends.low }),
      ...bridgeErrors(sensor, scale, value),
    ]
    const variables = toVariables(errors, 'VZERO', context)
    variables.push({
      id: 'signal',
      nominal: 0,
      low: 0,
      high: 0,
      injections: [{ ref: 'VZERO', port: 'value', scale: 1 }],
    })
    const spread = excitation.variable === 'excitation' ? excitation.tolerance : excitation.ratioTolerance
    variables.push({
      id: 'excitation',
      nominal: excitation.voltage,
      low: excitation.voltage * (1 - spread),
      high: excitation.voltage * (1 + spread),
      injections: [{ ref: 'VEXC', port: 'value', scale: 1 }],
    })
    return {
      p: series('RSOURCEP', 'zero_p', 'in_p'),
      n: series('RSOURCEN', 'sense_n', 'in_n'),
      variables,
      inputs: [
        ...toInputs(errors, 'VZERO', context.distribution),
        ...excitationInputs(excitation, context.distribution),
      ],
      follows: excitation.variable === 'excitation' ? [] : [{ variable: excitation.variable, ref: 'VEXC' }],
      signal: { variable: 'signal', ref: 'VZERO' },
    }
  },

  cautions() {
    return []
  },
})
