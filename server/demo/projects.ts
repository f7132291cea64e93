import type { DesignDocument } from '#shared/design/schema.ts'
import { quellmoor, sedgeworth } from './accounts.ts'

interface DemoChannel {
  id: string
  group: string
  document: DesignDocument
}

interface DemoProject {
  id: string
  workspaceId: string
  name: string
  board: string
  description: string
  authorId: string
  channels: DemoChannel[]
}

const format = 'spandrel-design/1' as const

/** The station's board: 12 bits over 0 to 2.5 V with its own reference, one 5 V rail; half a percent is allotted. */
const board: Pick<DesignDocument, 'converter' | 'rails' | 'temperature' | 'target' | 'calibration'> = {
  converter: {
    input: { low: 0, high: 2.5 },
    bits: 12,
    reference: { voltage: 2.5, tolerance: 0.001, drift: 2e-5 },
    sampleRate: 1000,
    acquisitionTime: 2e-6,
    samplingCapacitance: 1.5e-11,
    switchResistance: 1000,
    offsetError: 1e-3,
    gainError: 5e-4,
    inl: 1,
    noise: 1e-4,
    offsetDrift: 3e-6,
    gainDrift: 5e-6,
    absolute: { low: -0.3, high: 3.6 },
  },
  rails: { positive: 5, tolerance: 0.02 },
  temperature: { low: -20, high: 55, calibration: 20 },
  target: { limit: 0.005, per: 'span' },
  calibration: { standardUncertainty: 3e-4, interval: 2 },
}

const shiftReference: DesignDocument['shiftReference'] = { same: 'converter' }

const stationChannels: DemoChannel[] = [
  {
    id: 'stilling-well-level',
    group: 'Stilling well',
    document: {
      format,
      ...board,
      name: 'Stilling-well level',
      sensor: {
        kind: 'bridge',
        quantity: { name: 'Water level', unit: 'm', low: -0.1, high: 5.2 },
        sensitivity: 0.002,
        ratedAt: 5.2,
        bridgeResistance: 350,
        excitation: { voltage: 5, tolerance: 0.002, drift: 2e-5 },
        bandwidth: 5,
      },
      shiftReference,
    },
  },
  {
    id: 'flow-velocity',
    group: 'Measuring section',
    document: {
      format,
      ...board,
      name: 'Flow velocity',
      sensor: {
        kind: 'voltage',
        quantity: { name: 'Flow velocity', unit: 'm/s', low: -2.5, high: 2.5 },
        output: { low: -1, high: 1 },
        sourceResistance: 100,
        bandwidth: 10,
      },
      shiftReference,
    },
  },
  {
    id: 'conductivity',
    group: 'Measuring section',
    document: {
      format,
      ...board,
      name: 'Conductivity',
      sensor: {
        kind: 'voltage',
        quantity: { name: 'Conductivity', unit: 'mS/cm', low: 0, high: 2 },
        output: { low: 0, high: 1 },
        sourceResistance: 50,
        bandwidth: 2,
      },
      shiftReference,
    },
  },
  {
    id: 'cross-current',
    group: 'Measuring section',
    document: {
      format,
      name: 'Cross current',
      sensor: {
        kind: 'voltage',
        quantity: { name: 'Cross current', unit: 'm/s', low: -0.7, high: 0.7 },
        output: { low: -0.35, high: 0.35 },
        sourceResistance: 100,
        bandwidth: 20,
      },
      converter: {
        input: { low: 0, high: 2.5 },
        bits: 14,
        reference: { voltage: 2.5, tolerance: 0.001, drift: 2e-5 },
        sampleRate: 1000,
        absolute: { low: -0.3, high: 3.6 },
      },
      rails: { positive: 5, tolerance: 0.02 },
      temperature: { low: -20, high: 55, calibration: 20 },
      shiftReference,
    },
  },
  {
    id: 'air-humidity',
    group: 'Weather mast',
    document: {
      format,
      ...board,
      name: 'Air humidity',
      sensor: {
        kind: 'voltage',
        quantity: { name: 'Relative humidity', unit: '%', low: 0, high: 100 },
        output: { low: 0, high: 1 },
        sourceResistance: 1000,
        bandwidth: 1,
      },
      shiftReference,
    },
  },
  {
    id: 'air-pressure',
    group: 'Weather mast',
    document: {
      format,
      ...board,
      name: 'Air pressure',
      sensor: {
        kind: 'bridge',
        quantity: { name: 'Air pressure', unit: 'hPa', low: 800, high: 1100 },
        sensitivity: 0.01,
        ratedAt: 1100,
        bridgeResistance: 3500,
        excitation: { same: 'converter' },
        bandwidth: 1,
      },
      shiftReference,
    },
  },
  {
    id: 'older-logger',
    group: 'Cabinet',
    document: {
      format,
      ...board,
      name: 'Output of the older logger',
      sensor: {
        kind: 'voltage',
        quantity: { name: 'Discharge', unit: 'm³/s', low: -40, high: 40 },
        output: { low: -10, high: 10 },
        sourceResistance: 10,
        bandwidth: 1,
      },
      shiftReference,
    },
  },
  {
    id: 'battery-voltage',
    group: 'Cabinet',
    document: {
      format,
      ...board,
      name: 'Battery voltage',
      sensor: {
        kind: 'voltage',
        quantity: { name: 'Battery voltage', unit: 'V', low: 9, high: 15 },
        output: { low: 9, high: 15 },
        sourceResistance: 0.1,
        bandwidth: 1,
      },
      shiftReference,
    },
  },
]

/** What the demonstration holds; every person, place and organisation in it is invented. */
export const demoProjects: DemoProject[] = [
  {
    id: 'gauging-station-4',
    workspaceId: quellmoor.id,
    name: 'Gauging station 4',
    board: 'Analog board, 12 bits over 0 to 2.5 V',
    description: 'Rebuilding the station at the lower weir. Invented for the demonstration.',
    authorId: 'demo-engineer',
    channels: stationChannels,
  },
  {
    id: 'boiler-house',
    workspaceId: sedgeworth.id,
    name: 'Boiler house, draught and feed',
    board: 'Input board, 16 bits over 0 to 4.096 V',
    description: 'Notes for a heating plant. Invented for the demonstration.',
    authorId: 'demo-consultant',
    channels: [
      {
        id: 'flue-draught',
        group: 'Flue',
        document: {
          format,
          name: 'Flue draught',
          sensor: {
            kind: 'voltage',
            quantity: { name: 'Pressure', unit: 'Pa', low: -250, high: 250 },
            output: { low: 0.5, high: 4.5 },
            sourceResistance: 100,
            bandwidth: 20,
          },
          converter: {
            input: { low: 0, high: 4.096 },
            bits: 16,
            reference: { voltage: 4.096, tolerance: 0.001, drift: 1e-5 },
            sampleRate: 1000,
          },
          rails: { positive: 5, tolerance: 0.02 },
          shiftReference,
        },
      },
    ],
  },
]
