import { z } from 'zod'
import type { NetworkBuilder } from '#shared/network/builder.ts'
import type { SourceVariable } from '#shared/analysis/extremes.ts'
import type { ErrorInput } from '#shared/budget/error-input.ts'
import type { Distribution } from '#shared/design/plan.ts'
import { fraction, lineField, nonNegative, numberField, positive } from '#shared/units/fields.ts'

/** The measurand: what is read, in its own unit. */
export const quantitySchema = z.strictObject({
  name: lineField('Measurand', 1, 60),
  unit: lineField('Unit of the measurand', 0, 16),
  low: numberField('Measurand, low end', ''),
  high: numberField('Measurand, high end', ''),
})

/** Keys that every sensor kind shares. */
export const commonKeys = {
  quantity: quantitySchema,
  floating: z.boolean().default(false),
  sourceResistance: nonNegative('Source resistance', 'Ω').default(0),
  sourceMismatch: fraction('Source resistance mismatch').default(0),
  capacitance: nonNegative('Source capacitance', 'F').default(0),
  bandwidth: positive('Signal bandwidth', 'Hz').optional(),
  bandLow: positive('Lowest frequency of interest', 'Hz').optional(),
  leadResistance: nonNegative('Lead resistance', 'Ω').default(0),
  leadMismatch: fraction('Lead mismatch').default(0),
  accuracy: z
    .strictObject({
      zero: nonNegative('Zero error', '', 1).default(0),
      span: nonNegative('Span error', '', 1).default(0),
      linearity: nonNegative('Linearity error', '', 1).default(0),
      repeatability: nonNegative('Repeatability', '', 1).default(0),
      zeroDrift: nonNegative('Zero drift', '1/K', 1).default(0),
      spanDrift: nonNegative('Span drift', '1/K', 1).default(0),
      ageing: nonNegative('Ageing', '1/year', 1).default(0),
    })
    .prefault({}),
  temperature: z
    .strictObject({
      low: numberField('Lowest sensor temperature', '°C', { min: -273, max: 3000 }),
      high: numberField('Highest sensor temperature', '°C', { min: -273, max: 3000 }),
    })
    .optional(),
}

export const volts = (label: string) => numberField(label, 'V', { min: -1e4, max: 1e4 })

export const voltsRange = (label: string) =>
  z.strictObject({ low: volts(`${label}, low`), high: volts(`${label}, high`) })

/** Straight line through the ends: electrical output at a measurand value. */
export function alongLine(
  quantity: { low: number; high: number },
  ends: { low: number; high: number },
  q: number,
): number {
  // The far end is met exactly, so that a value typed there is the value printed there.
  if (q === quantity.high) return ends.high
  return ends.low + ((ends.high - ends.low) * (q - quantity.low)) / (quantity.high - quantity.low)
}

interface Accuracy {
  zero: number
  span: number
  linearity: number
  repeatability: number
  zeroDrift: number
  spanDrift: number
  ageing: number
}

/** One error of a sensor, before it is known where it enters: limit, and V per unit of it. */
export interface SensorError {
  id: string
  label: string
  path: string
  limit: number
  unit: string
  behaviour: ErrorInput['behaviour']
  scale: number
  /** Source variable of the bounds that holds it together with its relatives. */
  bound: string
}

/**
 * Errors that every sensor may have, V around a nominal `value`: zero with its drift and ageing, span with its drift
 * (pivot at `low`), linearity and repeatability. Limits are fractions of the output span; common practice.
 */
export function accuracyErrors(
  accuracy: Accuracy,
  at: { value: number; low: number; span: number },
): SensorError[] {
  const size = Math.abs(at.span)
  const travel = at.value - at.low
  const error = (
    key: keyof Accuracy,
    label: string,
    behaviour: SensorError['behaviour'],
    scale: number,
    bound: string,
  ): SensorError => ({
    id: `sensor.${key}`,
    label: `Sensor ${label}`,
    path: `sensor.accuracy.${key}`,
    limit: accuracy[key],
    unit: '',
    behaviour,
    scale,
    bound,
  })
  return [
    error('zero', 'zero', 'constant', size, 'sensor.zero'),
    error('zeroDrift', 'zero over temperature', 'sensor-temperature', size, 'sensor.zero'),
    error('ageing', 'ageing', 'ageing', size, 'sensor.zero'),
    error('span', 'span', 'constant', travel, 'sensor.span'),
    error('spanDrift', 'span over temperature', 'sensor-temperature', travel, 'sensor.span'),
    error('linearity', 'linearity', 'resolution', size, 'sensor.linearity'),
    error('repeatability', 'repeatability', 'resolution', size, 'sensor.repeatability'),
  ]
}

/** The errors as inputs at a source, for budget and Monte Carlo. */
export const toInputs = (
  errors: readonly SensorError[],
  ref: string,
  distribution: Distribution,
): ErrorInput[] =>
  errors
    .filter(({ limit }) => limit > 0)
    .map(({ id, label, path, limit, unit, behaviour, scale }) => ({
      id,
      label,
      source: 'sensor',
      path,
      limit,
      unit,
      distribution,
      behaviour,
      group: null,
      effects: [{ ref, port: 'value', scale, relative: false }],
      onOutput: null,
    }))

/** The same as variables of the bounds: limits over temperature and time, those of one `bound` together. */
export function toVariables(
  errors: readonly SensorError[],
  ref: string,
  { temperatureSpan, years }: { temperatureSpan: number; years: number },
): SourceVariable[] {
  const most = (behaviour: SensorError['behaviour']) =>
    behaviour === 'sensor-temperature' ? temperatureSpan : behaviour === 'ageing' ? years : 1
  const limits = new Map<string, number>()
  for (const { bound, limit, scale, behaviour } of errors)
    limits.set(bound, (limits.get(bound) ?? 0) + limit * Math.abs(scale) * most(behaviour))
  return [...limits]
    .filter(([, limit]) => limit > 0)
    .map(([id, limit]) => ({
      id,
      nominal: 0,
      low: -limit,
      high: limit,
      injections: [{ ref, port: 'value', scale: 1 }],
    }))
}

/** Resistance per leg and its ± fraction, from the source's and the lead's own figures. */
export function legResistance(sensor: {
  sourceResistance: number
  sourceMismatch: number
  leadResistance: number
  leadMismatch: number
}): { value: number; relative: number } {
  const value = sensor.sourceResistance + sensor.leadResistance
  const mismatch =
    sensor.sourceResistance * sensor.sourceMismatch + sensor.leadResistance * sensor.leadMismatch
  return { value, relative: value > 0 ? mismatch / value / 2 : 0 }
}

/** Adds the resistance of one leg between two nodes, where it has any; returns the node at which the leg ends. */
export function addLeg(
  builder: NetworkBuilder,
  sensor: Parameters<typeof legResistance>[0],
  ref: string,
  from: string,
  to: string,
): string {
  const { value, relative } = legResistance(sensor)
  if (value === 0) return from
  builder.resistor({ ref, a: from, b: to, value, tolerance: relative, stage: 'source', fixed: true })
  return to
}
