import { z } from 'zod'
import { sensorSchema } from '#shared/sensors/index.ts'
import { fraction, lineField, nonNegative, numberField, positive } from '#shared/units/fields.ts'

/**
 * The design file `spandrel-design/1`: what is wanted. This schema is its only definition; `docs/reference` is
 * generated from it. Unknown keys are refused everywhere but under `notes`. What is absent is chosen by the plan.
 */

const volts = (label: string) => numberField(label, 'V', { min: -1e4, max: 1e4 })

const wiring = z.enum(['single-ended', 'differential'])

const sameReference = z.enum(['converter', 'shift', 'positive'])

const referenceKeys = {
  voltage: numberField('Reference voltage', 'V', { above: 0, max: 1000 }),
  tolerance: fraction('Reference tolerance').default(0),
  drift: nonNegative('Reference drift', '1/K', 0.01).default(0),
  outputResistance: nonNegative('Reference output resistance', 'Ω').default(0),
  source: nonNegative('Current the reference can source', 'A').default(0.01),
  sink: nonNegative('Current the reference can sink', 'A').default(0),
  noise: nonNegative('Reference noise', 'V').default(0),
  buffered: z.boolean().default(true),
  ageing: nonNegative('Reference ageing', '1/year', 0.1).default(0),
}

export const referenceSchema = z.strictObject({ ...referenceKeys, same: sameReference.optional() })
export type Reference = z.output<typeof referenceSchema>

/** `same: "converter"` may stand alone: the shift reference then is the converter's. */
const shiftReferenceSchema = z.strictObject({
  ...referenceKeys,
  voltage: referenceKeys.voltage.optional(),
  same: sameReference.optional(),
})

export const converterSchema = z.strictObject({
  wiring: wiring.default('single-ended'),
  input: z.strictObject({ low: volts('Converter input, low'), high: volts('Converter input, high') }),
  guard: z
    .strictObject({
      low: numberField('Guard band at the low end', '', { min: 0, below: 1, display: 'percent' }),
      high: numberField('Guard band at the high end', '', { min: 0, below: 1, display: 'percent' }),
    })
    .optional(),
  bits: numberField('Converter bits', '', { min: 4, max: 32, integer: true }),
  coding: z.enum(['straight', 'offset', 'twos']).default('straight'),
  reference: referenceSchema.optional(),
  sampleRate: positive('Sample rate', 'Hz').optional(),
  acquisitionTime: positive('Acquisition time', 's').optional(),
  samplingCapacitance: nonNegative('Sampling capacitance', 'F').default(0),
  switchResistance: nonNegative('Switch resistance', 'Ω').default(0),
  offsetError: nonNegative('Offset error', 'V').default(0),
  gainError: fraction('Gain error').default(0),
  inl: nonNegative('Integral nonlinearity', 'LSB').default(0),
  noise: nonNegative('Converter noise', 'V').default(0),
  offsetDrift: nonNegative('Offset drift', 'V/K').default(0),
  gainDrift: nonNegative('Gain drift', '1/K').default(0),
  inputResistance: positive('Input resistance', 'Ω').default(1e12),
  inputCurrent: nonNegative('Input leakage current', 'A').default(0),
  commonMode: z
    .strictObject({ low: volts('Input common mode, low'), high: volts('Input common mode, high') })
    .optional(),
  absolute: z
    .strictObject({
      low: volts('Absolute minimum at the pin'),
      high: volts('Absolute maximum at the pin'),
      clampCurrent: nonNegative('Clamp current limit', 'A').default(0.005),
    })
    .optional(),
  supply: positive('Converter supply', 'V').optional(),
  architecture: z.enum(['sar', 'oversampling']).default('sar'),
  modulatorRate: positive('Modulator rate', 'Hz').optional(),
  digitalFilter: z.enum(['none', 'sinc1', 'sinc2', 'sinc3', 'sinc4']).default('none'),
  outputRate: positive('Output data rate', 'Hz').optional(),
  multiplexed: z
    .strictObject({
      channels: numberField('Multiplexed channels', '', { min: 2, max: 64, integer: true }),
      resistance: nonNegative('Multiplexer resistance', 'Ω').default(0),
    })
    .optional(),
})
export type Converter = z.output<typeof converterSchema>

export const railsSchema = z.strictObject({
  positive: volts('Positive rail'),
  negative: volts('Negative rail').default(0),
  tolerance: fraction('Rail tolerance').default(0),
  ripple: nonNegative('Rail ripple', 'V').default(0),
  rippleFrequency: nonNegative('Ripple frequency', 'Hz').default(0),
})
export type Rails = z.output<typeof railsSchema>

export const resistorSeries = z.enum(['E6', 'E12', 'E24', 'E48', 'E96', 'E192', 'E24+E96'])
export type ResistorSeries = z.output<typeof resistorSeries>

const resistorsSchema = z.strictObject({
  series: resistorSeries.default('E96'),
  tolerance: fraction('Resistor tolerance').default(0.001),
  drift: nonNegative('Resistor temperature coefficient', '1/K', 0.01).default(2.5e-5),
  tracking: nonNegative('Resistor tracking', '1/K', 0.01).optional(),
  ratioTolerance: fraction('Resistor ratio tolerance').optional(),
  minimum: positive('Smallest resistor', 'Ω').default(1000),
  maximum: positive('Largest resistor', 'Ω').default(1e6),
  preferred: positive('Preferred resistance', 'Ω').default(10000),
  power: positive('Resistor power rating', 'W').default(0.1),
  voltage: positive('Resistor voltage rating', 'V').default(75),
  thermalResistance: nonNegative('Resistor thermal resistance', 'K/W').default(200),
  ageing: nonNegative('Resistor ageing', '1/year', 0.1).default(0),
  stock: z.array(positive('Stock value', 'Ω')).max(2000).default([]),
})

const capacitorsSchema = z.strictObject({
  series: z.enum(['E6', 'E12']).default('E6'),
  tolerance: fraction('Capacitor tolerance').default(0.05),
  minimum: positive('Smallest capacitor', 'F').default(1e-11),
  maximum: positive('Largest capacitor', 'F').default(1e-6),
  dielectric: z.enum(['C0G', 'film', 'X7R']).default('C0G'),
  drift: nonNegative('Capacitor temperature coefficient', '1/K', 0.1).default(3e-5),
  stock: z.array(positive('Stock value', 'F')).max(2000).default([]),
})

const table = (label: string, unit: string) =>
  z
    .array(z.tuple([positive('Gain', 'V/V'), positive(label, unit)]))
    .min(1)
    .max(20)

export const amplifierSchema = z.strictObject({
  name: lineField('Name of the part', 1, 80).default('rail-to-rail amplifier, 10 MHz class'),
  gbw: positive('Gain-bandwidth product', 'Hz').default(1e7),
  a0: numberField('Open-loop gain', 'V/V', { min: 10, max: 1e12 }).default(1e6),
  phaseMargin: numberField('Phase margin', '°', { above: 0, max: 90 }).default(60),
  minimumGain: numberField('Smallest stable gain', 'V/V', { min: 1 }).default(1),
  rin: positive('Differential input resistance', 'Ω').default(1e9),
  rcm: positive('Common-mode input resistance', 'Ω').default(1e12),
  cin: z
    .strictObject({
      common: nonNegative('Common-mode input capacitance', 'F').default(5e-12),
      differential: nonNegative('Differential input capacitance', 'F').default(3e-12),
    })
    .prefault({}),
  rout: positive('Open-loop output resistance', 'Ω').default(100),
  vos: nonNegative('Offset voltage', 'V').default(2e-4),
  vosDrift: nonNegative('Offset drift', 'V/K').default(2e-6),
  vosCommonMode: volts('Common mode at which the offset is given').optional(),
  ib: numberField('Bias current', 'A', { min: -1, max: 1 }).default(1e-11),
  ios: nonNegative('Offset current', 'A', 1).default(5e-12),
  ibDoubling: nonNegative('Kelvins for the bias current to double', 'K').default(10),
  cmrr: numberField('Common-mode rejection', 'dB', { min: 20, max: 200 }).default(90),
  psrr: numberField('Supply rejection', 'dB', { min: 20, max: 200 }).default(95),
  en: nonNegative('Voltage noise', 'V/√Hz').default(8e-9),
  enCorner: nonNegative('Voltage noise corner', 'Hz').default(50),
  in: nonNegative('Current noise', 'A/√Hz').default(5e-15),
  inCorner: nonNegative('Current noise corner', 'Hz').default(0),
  slewRate: positive('Slew rate', 'V/s').default(5e6),
  inputLow: volts('Input range kept from the negative rail').default(0),
  inputHigh: volts('Input range kept from the positive rail').default(0),
  outputLow: volts('Output swing kept from the negative rail').default(0.02),
  outputHigh: volts('Output swing kept from the positive rail').default(0.02),
  outputResistanceLow: nonNegative('Swing lost per ampere sunk', 'Ω').default(0),
  outputResistanceHigh: nonNegative('Swing lost per ampere sourced', 'Ω').default(0),
  outputCurrent: positive('Output current', 'A').default(0.02),
  supplyCurrent: nonNegative('Supply current', 'A').default(0.001),
  minimumSupply: positive('Smallest supply', 'V').default(1.8),
  maximumSupply: positive('Largest supply', 'V').default(36),
  absolute: z
    .strictObject({
      low: nonNegative('Beyond the negative rail, at most', 'V').default(0.3),
      high: nonNegative('Beyond the positive rail, at most', 'V').default(0.3),
      current: nonNegative('Input clamp current', 'A').default(0.01),
    })
    .prefault({}),
  phaseReversal: z.boolean().default(false),
  channels: numberField('Amplifiers in a package', '', { min: 1, max: 8, integer: true }).default(2),
  typical: z.record(z.string(), z.number()).optional(),
})

export const instrumentationSchema = z.strictObject({
  name: lineField('Name of the part', 1, 80).default('integrated instrumentation amplifier, 1 MHz class'),
  k: positive('Gain constant', 'Ω').default(50000),
  gainMinimum: numberField('Smallest gain', 'V/V', { min: 1 }).default(1),
  gainMaximum: numberField('Largest gain', 'V/V', { min: 1 }).default(1000),
  gainError: fraction('Gain error').default(1e-3),
  gainDrift: nonNegative('Gain drift', '1/K').default(2.5e-5),
  nonlinearity: fraction('Nonlinearity').default(1e-5),
  vosIn: nonNegative('Input offset', 'V').default(5e-5),
  vosOut: nonNegative('Output offset', 'V').default(2e-4),
  vosInDrift: nonNegative('Input offset drift', 'V/K').default(3e-7),
  vosOutDrift: nonNegative('Output offset drift', 'V/K').default(3e-6),
  ib: numberField('Bias current', 'A', { min: -1, max: 1 }).default(1e-9),
  ios: nonNegative('Offset current', 'A', 1).default(5e-10),
  cmrr: table('Common-mode rejection', 'dB').default([
    [1, 80],
    [100, 110],
  ]),
  psrr: table('Supply rejection', 'dB').default([
    [1, 80],
    [100, 100],
  ]),
  enIn: nonNegative('Input noise', 'V/√Hz').default(8e-9),
  enOut: nonNegative('Output noise', 'V/√Hz').default(7e-8),
  enCorner: nonNegative('Noise corner', 'Hz').default(10),
  in: nonNegative('Current noise', 'A/√Hz').default(1e-13),
  bandwidth: table('Bandwidth', 'Hz').default([
    [1, 1e6],
    [100, 1e5],
  ]),
  slewRate: positive('Slew rate', 'V/s').default(1e6),
  rin: positive('Input resistance', 'Ω').default(1e10),
  cin: nonNegative('Input capacitance', 'F').default(2e-12),
  refResistance: positive('Resistance of the reference pin', 'Ω').default(40000),
  inputLow: volts('Input range kept from the negative rail').default(1.5),
  inputHigh: volts('Input range kept from the positive rail').default(1.2),
  internalLow: volts('Internal nodes kept from the negative rail').default(0.2),
  internalHigh: volts('Internal nodes kept from the positive rail').default(0.9),
  outputLow: volts('Output swing kept from the negative rail').default(0.1),
  outputHigh: volts('Output swing kept from the positive rail').default(0.1),
  supplyCurrent: nonNegative('Supply current', 'A').default(0.001),
  minimumSupply: positive('Smallest supply', 'V').default(2.7),
  maximumSupply: positive('Largest supply', 'V').default(36),
})
export type InstrumentationPart = z.output<typeof instrumentationSchema>

const partsSchema = z.strictObject({
  resistors: resistorsSchema.prefault({}),
  capacitors: capacitorsSchema.prefault({}),
  amplifier: amplifierSchema.prefault({}),
  instrumentation: instrumentationSchema.prefault({}),
})

const chooseSchema = z.strictObject({
  arrangement: z.string().max(60).optional(),
  pick: numberField('Pick', '', { min: 0, max: 100, integer: true }).optional(),
  /** Reference designator → Ω or F. What stands here is obeyed. */
  values: z
    .record(z.string().regex(/^[A-Za-z][A-Za-z0-9]{0,5}$/), positive('Fixed value', 'Ω or F'))
    .optional(),
  stages: z
    .array(
      z.strictObject({
        ref: z.enum(['S1', 'S2']),
        arrangement: z.string().max(60).optional(),
        gain: numberField('Stage gain', 'V/V').optional(),
        reference: volts('Level at the reference leg').optional(),
      }),
    )
    .max(2)
    .optional(),
  filter: z
    .strictObject({
      kind: z.enum(['rc', 'none', 'sallen-key', 'multiple-feedback']),
      response: z.enum(['butterworth', 'bessel', 'chebyshev']).optional(),
      order: numberField('Filter order', '', { min: 1, max: 6, integer: true }).optional(),
      corner: positive('Filter corner', 'Hz').optional(),
    })
    .optional(),
  drive: z
    .strictObject({
      resistance: nonNegative('Drive resistance', 'Ω').optional(),
      capacitance: nonNegative('Drive capacitance', 'F').optional(),
    })
    .optional(),
})

export const designSchema = z.strictObject({
  format: z.literal('spandrel-design/1'),
  name: lineField('Name of the design', 1, 120),
  sensor: sensorSchema,
  converter: converterSchema,
  rails: railsSchema,
  shiftReference: shiftReferenceSchema.optional(),
  parts: partsSchema.prefault({}),
  temperature: z
    .strictObject({
      low: numberField('Lowest temperature', '°C', { min: -273, max: 500 }).default(-10),
      high: numberField('Highest temperature', '°C', { min: -273, max: 500 }).default(60),
      calibration: numberField('Calibration temperature', '°C', { min: -273, max: 500 }).default(23),
    })
    .prefault({}),
  target: z
    .strictObject({
      limit: positive('Target uncertainty', ''),
      per: z.enum(['span', 'quantity']).default('span'),
      state: z.enum(['asBuilt', 'zeroed', 'calibrated']).default('calibrated'),
      coverage: numberField('Coverage', '', { above: 0, below: 1 }).default(0.95),
    })
    .optional(),
  rules: z
    .strictObject({
      room: numberField('Room to keep', '', { min: 0, below: 0.5, display: 'percent' }).default(0.03),
      modelError: positive('Allowed model error', 'LSB').default(0.5),
      settling: positive('Settling criterion', 'LSB').default(0.5),
      aliasAttenuation: nonNegative('Alias attenuation', 'dB').optional(),
    })
    .prefault({}),
  calibration: z
    .strictObject({
      points: z.array(z.number()).max(2).default([]),
      standardUncertainty: fraction('Uncertainty of the standard').default(0),
      interval: positive('Calibration interval', 'years').default(1),
    })
    .prefault({}),
  analysis: z
    .strictObject({
      boards: numberField('Boards', '', { min: 100, max: 1e6, integer: true }).default(10000),
      seed: numberField('Seed', '', { min: 0, max: 2 ** 31 - 1, integer: true }).default(1),
      distribution: z.enum(['rectangular', 'normal']).default('rectangular'),
    })
    .prefault({}),
  choose: chooseSchema.prefault({}),
  notes: z.record(z.string(), z.unknown()).optional(),
})

/** What is written in a file or edited on screen: everything with a default may be absent. */
export type DesignDocument = z.input<typeof designSchema>
/** The same with every default put in; what the engine works on. */
export type Design = z.output<typeof designSchema>
