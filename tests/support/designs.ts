import type { DesignDocument } from '#shared/design/schema.ts'

/** A document with every required key present; what is given replaces whole top-level keys. */
export function buildDesign(given: Partial<DesignDocument> = {}): DesignDocument {
  return {
    format: 'spandrel-design/1',
    name: 'Flow velocity',
    sensor: buildSensor(-0.35, 0.35),
    converter: buildConverter(),
    rails: { positive: 5, tolerance: 0.02 },
    ...given,
  }
}

type Sensor = DesignDocument['sensor']
type Converter = DesignDocument['converter']

/** A single-ended transmitter with 100 Ω in its line. */
export const buildSensor = (
  low: number,
  high: number,
  more: Partial<Extract<Sensor, { kind: 'voltage' }>> = {},
): Extract<Sensor, { kind: 'voltage' }> => ({
  kind: 'voltage',
  quantity: { name: 'Flow velocity', unit: 'm/s', low: -2.5, high: 2.5 },
  output: { low, high },
  sourceResistance: 100,
  bandwidth: 20,
  ...more,
})

/** The same with two legs about a common mode. */
export const buildDifferentialSensor = (
  low: number,
  high: number,
  commonMode: { low: number; high: number } = { low: 2.4, high: 2.6 },
) => buildSensor(low, high, { wiring: 'differential', commonMode })

export const buildConverter = (more: Partial<Converter> = {}): Converter => ({
  input: { low: 0, high: 2.5 },
  guard: { low: 0.02, high: 0.02 },
  bits: 14,
  reference: { voltage: 2.5, tolerance: 0.001, drift: 1e-5 },
  sampleRate: 1000,
  ...more,
})

/** Reference whose output resistance has to stand in the formula. */
const loadedReference = { voltage: 2.5, tolerance: 0.001, outputResistance: 5, source: 0.1, sink: 0.1 }

const loaded = buildConverter({
  reference: loadedReference,
  inputResistance: 2e7,
  guard: { low: 0.04, high: 0.04 },
})

const single = (low: number, high: number, more: Partial<DesignDocument> = {}): DesignDocument =>
  buildDesign({ sensor: buildSensor(low, high), converter: loaded, ...more })

const differential = (low: number, high: number, more: Partial<DesignDocument> = {}): DesignDocument =>
  buildDesign({
    sensor: buildDifferentialSensor(low, high),
    converter: loaded,
    rails: { positive: 5, negative: -5, tolerance: 0.02 },
    ...more,
  })

/** A reference leg straight at the reference: stiff, and in the middle of a wider converter range. */
const atReference = (low: number, high: number): DesignDocument =>
  differential(low, high, {
    converter: buildConverter({
      input: { low: 0, high: 5 },
      reference: { voltage: 5 },
      inputResistance: 2e7,
    }),
    shiftReference: { voltage: 2.5, tolerance: 0.001, source: 0.01, sink: 0.01 },
    rails: { positive: 6, negative: -5, tolerance: 0.02 },
  })

const onePositiveRail = { rails: { positive: 5, tolerance: 0.02 } }

/**
 * For every arrangement a design for which it exists, and chains of two stages (`first+second`). Source, reference and
 * converter load it, so that a formula which forgets one of them shows.
 */
const table: Record<string, DesignDocument> = {
  direct: single(0.2, 2.2),
  follower: single(0.2, 2.2),
  attenuator: single(0.5, 9),
  'level-shift': single(-10, 10),
  'non-inverting': single(0.1, 0.4),
  'non-inverting-up': single(-0.35, 0.35),
  'non-inverting-down': single(0.5, 1),
  'weighted-difference': single(8, 16),
  inverting: single(-1, -0.1),
  'inverting-up': single(-1, 1),
  'inverting-down': single(-3, -2, { rails: { positive: 5, negative: -5, tolerance: 0.02 } }),
  'integrated-instrumentation': differential(-0.02, 0.03),
  'integrated-instrumentation-grounded': differential(0.002, 0.022),
  'integrated-instrumentation-at-reference': atReference(-0.02, 0.02),
  difference: differential(-0.5, 0.7),
  'difference-grounded': differential(0.02, 0.3),
  'difference-at-reference': atReference(-0.2, 0.2),
  'two-amplifier': differential(-0.02, 0.03),
  'two-amplifier-grounded': differential(0.002, 0.022, {
    sensor: buildDifferentialSensor(0.002, 0.022, { low: 1.4, high: 1.6 }),
  }),
  'two-amplifier-at-reference': atReference(-0.02, 0.02),
  'three-amplifier': differential(-0.02, 0.03),
  'three-amplifier-grounded': differential(0.002, 0.022),
  'three-amplifier-at-reference': atReference(-0.02, 0.02),
  'non-inverting+non-inverting': single(0.002, 0.02),
  'non-inverting+non-inverting-up': single(-0.01, 0.02, {
    rails: { positive: 5, negative: -5, tolerance: 0.02 },
  }),
  'non-inverting+non-inverting-down': single(0.05, 0.09),
  'non-inverting+weighted-difference': single(0.1, 0.12),
  'non-inverting+inverting-up': single(0.01, 0.03),
  'integrated-instrumentation+weighted-difference': differential(0.001, 0.006, onePositiveRail),
  'integrated-instrumentation-grounded+non-inverting-up': differential(-0.003, 0.006),
  'integrated-instrumentation-grounded+non-inverting-down': differential(0.005, 0.012),
  'difference+weighted-difference': differential(-0.005, 0.01, onePositiveRail),
  'difference-grounded+non-inverting-up': differential(-0.01, 0.02),
}

/** In a chain both stages draw on one reference; a stiff one keeps their formulas apart. */
const stiff = (document: DesignDocument): DesignDocument => ({
  ...document,
  converter: { ...document.converter, reference: { ...loadedReference, outputResistance: 0 } },
})

/** [id of the arrangement or chain, a design that asks for it] */
export const arrangementDesigns: [string, DesignDocument][] = Object.entries(table).map(([id, document]) => [
  id,
  { ...(id.includes('+') ? stiff(document) : document), choose: { arrangement: id } },
])

/** The same document with exact resistors: no box to walk, so that a plan is quick where bounds do not matter. */
export const withExactResistors = (document: DesignDocument): DesignDocument => ({
  ...document,
  parts: { ...document.parts, resistors: { ...document.parts?.resistors, tolerance: 0, drift: 0 } },
})
