import type { DesignDocument } from '#shared/design/schema.ts'
import type { DraftDocument } from './draft/paths.ts'

/** Channels of the demonstration's gauging station, all invented, to start a plan from. */
export interface Example {
  title: string
  document: DesignDocument
}

const amplifier = { name: 'sedge-2, rail-to-rail, 10 MHz class', inputLow: -0.1, inputHigh: -0.1 }
const converter = {
  reference: { voltage: 2.5, tolerance: 0.001, drift: 1e-5 },
  sampleRate: 1000,
  samplingCapacitance: 1.5e-11,
  acquisitionTime: 2e-6,
  offsetError: 5e-4,
  gainError: 5e-4,
  inl: 1,
  noise: 6e-5,
  absolute: { low: -0.3, high: 3.6, clampCurrent: 0.005 },
  supply: 3.3,
}

export const firstExample: DesignDocument = {
  format: 'spandrel-design/1',
  name: 'Flow velocity',
  sensor: {
    kind: 'voltage',
    quantity: { name: 'Flow velocity', unit: 'm/s', low: -2.5, high: 2.5 },
    output: { low: -0.35, high: 0.35 },
    sourceResistance: 100,
    bandwidth: 20,
  },
  converter: { ...converter, input: { low: 0, high: 2.5 }, bits: 14 },
  rails: { positive: 5, tolerance: 0.02 },
  shiftReference: { same: 'converter' },
  parts: { amplifier },
  target: { limit: 0.0025, per: 'span' },
}

export const examples: readonly Example[] = [
  { title: 'Flow velocity, −0.35 V to 0.35 V', document: firstExample },
  {
    title: 'Stilling-well level, bridge of 2 mV/V',
    document: {
      format: 'spandrel-design/1',
      name: 'Stilling-well level',
      sensor: {
        kind: 'bridge',
        quantity: { name: 'Water level', unit: 'm', low: 0, high: 5 },
        excitation: { voltage: 5, tolerance: 0.001 },
        sensitivity: 0.002,
        bridgeResistance: 350,
        bandwidth: 5,
      },
      converter: {
        ...converter,
        input: { low: 0, high: 4.096 },
        bits: 16,
        reference: { voltage: 4.096, tolerance: 0.0005, drift: 5e-6 },
        absolute: { low: -0.3, high: 5.3, clampCurrent: 0.005 },
        supply: 5,
      },
      rails: { positive: 5, tolerance: 0.02 },
      shiftReference: { same: 'converter' },
      parts: { amplifier },
    },
  },
  {
    title: 'Relative humidity, 0 V to 1 V',
    document: {
      format: 'spandrel-design/1',
      name: 'Relative humidity',
      sensor: {
        kind: 'voltage',
        quantity: { name: 'Relative humidity', unit: '%', low: 0, high: 100 },
        output: { low: 0, high: 1 },
        sourceResistance: 500,
        bandwidth: 1,
      },
      converter: { ...converter, input: { low: 0, high: 2.5 }, bits: 12 },
      rails: { positive: 5, tolerance: 0.02 },
      parts: { amplifier },
    },
  },
  {
    title: 'Level from the older logger, ±10 V',
    document: {
      format: 'spandrel-design/1',
      name: 'Level from the older logger',
      sensor: {
        kind: 'voltage',
        quantity: { name: 'Water level', unit: 'm', low: -2, high: 8 },
        output: { low: -10, high: 10 },
        sourceResistance: 50,
        bandwidth: 2,
      },
      converter: { ...converter, input: { low: 0, high: 2.5 }, bits: 16 },
      rails: { positive: 5, tolerance: 0.02 },
      shiftReference: { same: 'converter' },
      parts: { amplifier },
    },
  },
]

/** All questions open: a frame to fill in. */
export const emptyDocument: DraftDocument = {
  format: 'spandrel-design/1',
  name: 'New channel',
  sensor: { kind: 'voltage' },
  converter: {},
  rails: {},
}
