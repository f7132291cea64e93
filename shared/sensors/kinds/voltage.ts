import { z } from 'zod'
import type { Fault } from '#shared/design/plan.ts'
import {
  accuracyErrors,
  addLeg,
  alongLine,
  commonKeys,
  legResistance,
  toInputs,
  toVariables,
  voltsRange,
} from './common.ts'
import { defineSensor, type SensorSource } from './define.ts'

const schema = z.strictObject({
  kind: z.literal('voltage'),
  ...commonKeys,
  output: voltsRange('Sensor output'),
  beyond: voltsRange('Output beyond the span').optional(),
  wiring: z.enum(['single-ended', 'differential']).default('single-ended'),
  commonMode: voltsRange('Common mode').optional(),
  fault: voltsRange('Voltage that miswiring can bring').optional(),
})

/**
 * A sensor or transmitter with a voltage output, against ground or differential on a common mode.
 * Single-ended: VSENSE from `sense` to ground, the source resistance after it. Differential: one source VSENSE moves
 * both legs symmetrically about VCM (two controlled sources of ±½), so that signal and common mode are independent.
 */
export const voltage = defineSensor({
  kind: 'voltage',
  title: 'Voltage output',
  summary: 'A sensor or transmitter that gives volts, against ground or differential.',
  schema,
  form: ['output', 'wiring', 'commonMode', 'sourceResistance', 'bandwidth', 'beyond', 'fault'],
  example: {
    kind: 'voltage',
    quantity: { name: 'Flow velocity', unit: 'm/s', low: -2.5, high: 2.5 },
    output: { low: -1, high: 1 },
    sourceResistance: 100,
    bandwidth: 10,
  },

  check(sensor) {
    const faults: Fault[] = []
    if (sensor.output.low === sensor.output.high)
      faults.push({
        path: 'output.high',
        reason: 'the sensor output has no span: low and high are equal',
        accepted: 'two different voltages',
      })
    if (sensor.wiring === 'differential' && !sensor.commonMode)
      faults.push({
        path: 'commonMode',
        reason: 'a differential signal needs its common mode',
        accepted: 'low and high, in V; equal where it is fixed',
      })
    if (sensor.wiring === 'single-ended' && sensor.commonMode)
      faults.push({
        path: 'commonMode',
        reason: 'a single-ended signal has no common mode',
        accepted: 'leave it out, or set wiring to differential',
      })
    if (sensor.commonMode && sensor.commonMode.low > sensor.commonMode.high)
      faults.push({
        path: 'commonMode.high',
        reason: 'the common mode range is reversed',
        accepted: `a voltage of ${sensor.commonMode.low} or more, in V`,
      })
    if (sensor.beyond) {
      const rising = sensor.output.high > sensor.output.low ? 1 : -1
      if (rising * (sensor.output.low - sensor.beyond.low) < 0)
        faults.push({
          path: 'beyond.low',
          reason: 'the reading beyond the low end lies inside the span',
          accepted: `a voltage past ${sensor.output.low}, away from ${sensor.output.high}, in V`,
        })
      if (rising * (sensor.beyond.high - sensor.output.high) < 0)
        faults.push({
          path: 'beyond.high',
          reason: 'the reading beyond the high end lies inside the span',
          accepted: `a voltage past ${sensor.output.high}, away from ${sensor.output.low}, in V`,
        })
    }
    if (sensor.fault && sensor.fault.low >= sensor.fault.high)
      faults.push({
        path: 'fault.high',
        reason: 'the fault range is reversed',
        accepted: `a voltage above ${sensor.fault.low}, in V`,
      })
    return faults
  },

  signal(sensor) {
    return {
      ends: sensor.output,
      beyond: sensor.beyond ?? null,
      per: 'V',
      differential: sensor.wiring === 'differential',
      commonMode: sensor.commonMode ?? null,
      sourceResistance: legResistance(sensor).value,
      floating: sensor.floating,
    }
  },

  source(sensor, context, builder, quantity): SensorSource {
    const value = alongLine(sensor.quantity, sensor.output, quantity)
    const series = (ref: string, from: string, to: string) => addLeg(builder, sensor, ref, from, to)
    const { low, high } = sensor.output
    const errors = accuracyErrors(sensor.accuracy, { value, low, span: high - low })
    const inputs = toInputs(errors, 'VSENSE', context.distribution)
    const variables = toVariables(errors, 'VSENSE', context)
    variables.push({
      id: 'signal',
      nominal: value,
      low: value,
      high: value,
      injections: [{ ref: 'VSENSE', port: 'value', scale: 1 }],
    })
    const signal = { variable: 'signal', ref: 'VSENSE' }
    if (sensor.wiring === 'single-ended') {
      builder.voltageSource({ ref: 'VSENSE', p: 'sense', n: '0', value, ac: 1, stage: 'source' })
      return { p: series('RSOURCE', 'sense', 'in'), n: null, variables, inputs, follows: [], signal }
    }
    const range = sensor.commonMode ?? { low: 0, high: 0 }
    const middle = (range.low + range.high) / 2
    builder.voltageSource({ ref: 'VCM', p: 'cm', n: '0', value: middle, stage: 'source' })
    builder.voltageSource({ ref: 'VSENSE', p: 'd', n: '0', value, ac: 1, stage: 'source' })
    const leg2 = (ref: string, p: string, gain: number) =>
      builder.controlledVoltageSource({ ref, p, n: 'cm', cp: 'd', cn: '0', gain, stage: 'source' })
    leg2('EP', 'sense_p', 0.5)
    leg2('EN', 'sense_n', -0.5)
    variables.push({
      id: 'commonMode',
      nominal: middle,
      low: range.low,
      high: range.high,
      injections: [{ ref: 'VCM', port: 'value', scale: 1 }],
    })
    return {
      p: series('RSOURCEP', 'sense_p', 'in_p'),
      n: series('RSOURCEN', 'sense_n', 'in_n'),
      variables,
      inputs,
      follows: [],
      signal,
    }
  },

  cautions(sensor) {
    const reach = Math.max(
      Math.abs(sensor.fault?.low ?? 0),
      Math.abs(sensor.fault?.high ?? 0),
      Math.abs(sensor.commonMode?.low ?? 0),
      Math.abs(sensor.commonMode?.high ?? 0),
      Math.abs(sensor.output.low),
      Math.abs(sensor.output.high),
      Math.abs(sensor.beyond?.low ?? 0),
      Math.abs(sensor.beyond?.high ?? 0),
    )
    return reach > 50
      ? [
          {
            code: 'hazardous-voltage',
            text: 'Voltages above 50 V can reach this input. Isolation and protection against electric shock follow the local codes and a licensed practitioner.',
            numbers: { volts: reach },
          },
        ]
      : []
  },
})
