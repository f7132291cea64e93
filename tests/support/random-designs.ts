import { buildConverter, buildDesign, buildDifferentialSensor } from './designs.ts'
import { schemaLeaves, type Leaf } from './schema-leaves.ts'

/*
 * Documents of every shape that the schema allows: a sound design, with some of its keys set to other values that the
 * schema accepts. Keys that only come together are filled up, so that few of the documents are refused.
 */

export type Json = { [key: string]: unknown }

const resistors = { series: 'E12' } as const

/** Sound designs, one for each way in which a sensor may be wired, few values to choose from. */
export const soundDesigns: Record<'single-ended' | 'differential' | 'bridge', Json> = {
  'single-ended': plain(buildDesign({ parts: { resistors } })),
  differential: plain(
    buildDesign({ sensor: buildDifferentialSensor(0.002, 0.03), parts: { resistors: { series: 'E6' } } }),
  ),
  bridge: plain(
    buildDesign({
      sensor: {
        kind: 'bridge',
        quantity: { name: 'Water level', unit: 'm', low: 0, high: 5 },
        excitation: 5,
        sensitivity: 0.002,
        bandwidth: 5,
      },
      converter: buildConverter({ input: { low: 0, high: 4.096 }, reference: { voltage: 4.096 } }),
      parts: { resistors: { series: 'E6' } },
    }),
  ),
}

/**
 * Designs with every optional branch in place, so that one key can be changed without another. Rail, references and
 * excitation have one voltage, so that each may be declared the same as another.
 */
export const fullDesigns: Record<string, Json> = {
  'single-ended': full({
    ...sensorOf('single-ended'),
    fault: { low: -30, high: 30 },
    beyond: { low: -0.4, high: 0.4 },
  }),
  differential: full({
    ...sensorOf('differential'),
    fault: { low: -30, high: 30 },
    beyond: { low: 0.001, high: 0.031 },
  }),
  bridge: full({
    ...sensorOf('bridge'),
    excitation: { voltage: 5 },
    ratedAt: 5,
    beyond: { low: -0.5, high: 5.5 },
  }),
}

function sensorOf(name: keyof typeof soundDesigns): Json {
  return soundDesigns[name].sensor as Json
}

function full(sensor: Json): Json {
  return {
    ...soundDesigns['single-ended'],
    sensor: { ...sensor, bandLow: 0.1, temperature: { low: -10, high: 40 } },
    converter: {
      input: { low: 0, high: 5 },
      guard: { low: 0.02, high: 0.02 },
      bits: 14,
      reference: { voltage: 5 },
      sampleRate: 1000,
      acquisitionTime: 1e-6,
      commonMode: { low: 0, high: 2.5 },
      absolute: { low: -0.3, high: 5.3 },
      supply: 5,
      modulatorRate: 1e5,
      outputRate: 1000,
      multiplexed: { channels: 8, resistance: 100 },
    },
    rails: { positive: 5 },
    shiftReference: { voltage: 5 },
    parts: {
      resistors: { series: 'E12', tracking: 1e-6, ratioTolerance: 1e-4, stock: [1000] },
      capacitors: { stock: [1e-9] },
      amplifier: { vosCommonMode: 2.5, typical: { word: 1 } },
      instrumentation: { cmrr: [[1, 80]], psrr: [[1, 80]], bandwidth: [[1, 1e6]] },
    },
    target: { limit: 0.01 },
    rules: { aliasAttenuation: 60 },
    calibration: { points: [0] },
    choose: {
      arrangement: 'follower',
      pick: 1,
      values: { R1: 1000 },
      stages: [{ ref: 'S1', arrangement: 'follower', gain: 2, reference: 1 }],
      filter: { kind: 'rc', corner: 100 },
      drive: { resistance: 100, capacitance: 1e-9 },
    },
    notes: { word: 'first' },
  }
}

function plain(document: unknown): Json {
  return JSON.parse(JSON.stringify(document)) as Json
}

/** Leaves that a sound design can take: those of its own sensor kind. */
export function leavesOf(document: Json): Leaf[] {
  const { kind, wiring, excitation } = document.sensor as Json
  return schemaLeaves().filter(({ kind: own, path }) => {
    if (own !== null && own !== kind) return false
    const at = path.join('.')
    // A common mode needs two wires; a branch leaves no room for the plain number in its place.
    if (at.startsWith('sensor.commonMode')) return wiring === 'differential'
    return !(at === 'sensor.excitation' && typeof excitation === 'object')
  })
}

/** A copy with one leaf set, and with what that leaf cannot be without. */
export function withLeaf(document: Json, leaf: Leaf, value: unknown): Json {
  const copy = structuredClone(document)
  const top = leaf.path.join('.')
  const found = companions.find(([prefix]) => top === prefix || top.startsWith(`${prefix}.`))
  if (found) setAt(copy, found[0].split('.'), found[1](copy))
  setAt(copy, leaf.path, value)
  return copy
}

/** Value at a path; undefined where there is none. */
export function valueAt(document: unknown, path: readonly (string | number)[]): unknown {
  return path.reduce<unknown>(
    (at, key) => (typeof at === 'object' && at !== null ? (at as Json)[key] : undefined),
    document,
  )
}

/** A copy with one value set. */
export function withValue(document: Json, path: readonly (string | number)[], value: unknown): Json {
  const copy = structuredClone(document)
  setAt(copy, path, value)
  return copy
}

function setAt(document: Json, path: readonly (string | number)[], value: unknown): void {
  let at = document as Json
  path.forEach((key, i) => {
    if (i === path.length - 1) return void (at[key] = value)
    if (typeof at[key] !== 'object' || at[key] === null) at[key] = typeof path[i + 1] === 'number' ? [] : {}
    at = at[key] as Json
  })
}

type Range = { low: number; high: number }

const rangeOf = (document: Json, path: string): Range => {
  const { low, high } = valueAt(document, path.split('.')) as Range
  return { low, high }
}

const around = ({ low, high }: Range): Range => ({
  low: low - 0.05 * (high - low),
  high: high + 0.05 * (high - low),
})

const kept = (document: Json, path: string, fresh: Json): Json => ({
  ...fresh,
  ...(valueAt(document, path.split('.')) as Json | undefined),
})

/** [branch that comes whole, what it holds where it is new] */
const companions: [string, (document: Json) => unknown][] = [
  ['sensor.temperature', () => ({ low: -10, high: 40 })],
  ['sensor.fault', () => ({ low: -30, high: 30 })],
  [
    'sensor.beyond',
    (d) => around(rangeOf(d, (d.sensor as Json).kind === 'bridge' ? 'sensor.quantity' : 'sensor.output')),
  ],
  [
    'sensor.excitation',
    (d) =>
      typeof (d.sensor as Json).excitation === 'object' ? (d.sensor as Json).excitation : { voltage: 5 },
  ],
  ['converter.guard', () => ({ low: 0.02, high: 0.02 })],
  ['converter.commonMode', () => ({ low: 0, high: 2.5 })],
  ['converter.absolute', () => ({ low: -0.3, high: 3.6 })],
  ['converter.multiplexed', (d) => kept(d, 'converter.multiplexed', { channels: 4 })],
  ['shiftReference', (d) => kept(d, 'shiftReference', { voltage: 2 })],
  ['target', (d) => kept(d, 'target', { limit: 0.01 })],
  ['choose.filter', (d) => kept(d, 'choose.filter', { kind: 'rc' })],
  ['choose.stages', () => [{ ref: 'S1' }]],
  ['parts.instrumentation.cmrr', () => [[1, 80]]],
  ['parts.instrumentation.psrr', () => [[1, 80]]],
  ['parts.instrumentation.bandwidth', () => [[1, 1e6]]],
]

/** Values that a leaf accepts, from `pick` in [0, 1) twice: both bounds and figures over many decades. */
export function valueFor(leaf: Leaf, pick: () => number): unknown {
  const { rule } = leaf
  if (rule.type === 'choice') return rule.values[Math.floor(pick() * rule.values.length)]
  if (rule.type === 'text')
    return 'Grüße-µΩ-測量'.slice(0, Math.max(rule.least, 1 + Math.floor(pick() * Math.min(rule.most, 12))))
  if (rule.type === 'free') return { by: ['anyone', null, 1.5, { deep: true }] }
  const { least, most, above, below, integer } = rule
  const inside = (x: number) => (above ? x > least : x >= least) && (below ? x < most : x <= most)
  for (let tries = 0; tries < 40; tries++) {
    const chance = pick()
    const size = 10 ** (-12 + 18 * pick())
    const raw =
      chance < 0.08
        ? least
        : chance < 0.16
          ? most
          : chance < 0.75
            ? size
            : chance < 0.9
              ? -size
              : Math.round(pick() * 10)
    const value = integer ? Math.round(raw) : Number(raw.toPrecision(6))
    if (inside(value)) return value
  }
  return least + (most - least) / 2
}
