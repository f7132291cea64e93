import { readFileSync } from 'node:fs'
import type { Arrangement, Need, Sizing } from '#shared/amplifiers/define.ts'
import { arrangements } from '#shared/amplifiers/index.ts'
import { StageBuilder } from '#shared/amplifiers/stage-builder.ts'
import { designSchema } from '#shared/design/schema.ts'
import { addFilter } from '#shared/filters/build-filter.ts'
import { sizeFilter } from '#shared/filters/size-filter.ts'
import { NetworkBuilder } from '#shared/network/builder.ts'
import type { Network } from '#shared/network/types.ts'
import { sensorContext } from '#shared/design/chain.ts'
import { kindOf } from '#shared/sensors/index.ts'

/** Whole chains around each arrangement, with values that are easy to tell apart. */

const example = (name: string) =>
  designSchema.parse(
    JSON.parse(readFileSync(new URL(`../../../docs/examples/${name}.json`, import.meta.url), 'utf8')),
  )

const designs = {
  voltage: example('flow-velocity'),
  differential: example('differential-transmitter'),
  bridge: example('stilling-well-level'),
}

export interface SampleOptions {
  source: keyof typeof designs
  sourceResistance?: number
  filter?: boolean
  /** Filter sections with amplifiers, behind the stages. */
  sections?: { kind: 'sallen-key' | 'multiple-feedback'; order: number }
  referenceResistance?: number
  /** Designators left open. */
  open?: string[]
  second?: Arrangement
}

const valuesFor = (arrangement: Arrangement, open: readonly string[]): Record<string, number> => {
  const refs = [
    ...new Set([
      ...Object.keys(arrangement.roles),
      'R1',
      'R2',
      'R3',
      'R4',
      'Rf',
      'Rg',
      'Rs',
      'R5',
      'R6',
      'R7',
      'R8',
    ]),
  ]
  const values = [10000, 24900, 4990, 49900, 2210, 61900, 12400, 33200, 1000, 18200, 7500]
  return Object.fromEntries(
    refs.flatMap((ref, i) => (open.includes(ref) ? [] : [[ref, values[i % values.length] ?? 1000]])),
  )
}

export function sampleNetwork(arrangement: Arrangement, options: SampleOptions): Network {
  const base = designs[options.source]
  const design = { ...base, sensor: { ...base.sensor, sourceResistance: options.sourceResistance ?? 0 } }
  const builder = new NetworkBuilder()
  builder.voltageSource({ ref: 'VPOS', p: 'vpos', n: '0', value: 5, stage: 'supply' })
  builder.voltageSource({ ref: 'VNEG', p: 'vneg', n: '0', value: 0, stage: 'supply' })
  const inner = options.referenceResistance ? 'vref_inner' : 'vref'
  builder.voltageSource({ ref: 'VREF', p: inner, n: '0', value: 2.5, stage: 'supply' })
  if (options.referenceResistance)
    builder.resistor({
      ref: 'RREF',
      a: inner,
      b: 'vref',
      value: options.referenceResistance,
      stage: 'supply',
      fixed: true,
    })
  const source = kindOf(design.sensor).source(
    design.sensor,
    sensorContext(design),
    builder,
    design.sensor.quantity.low,
  )
  const need: Need = {
    signal: { low: 0, high: 1 },
    differential: source.n !== null,
    commonMode: null,
    sourceResistance: options.sourceResistance ?? 0,
    floating: false,
    target: { low: 0, high: 2.5 },
    reference: { voltage: 2.5, resistance: options.referenceResistance ?? 0, buffered: true },
    rails: { positive: 5, negative: 0 },
    parts: design.parts,
    level: null,
  }
  const sizing: Sizing = { target: need.target, form: null, dropsOffset: false }
  const counter = { amplifiers: 0 }
  let at = { p: source.p, n: source.n }
  const stages = [arrangement, ...(options.second ? [options.second] : [])]
  stages.forEach((kind, i) => {
    const last = i === stages.length - 1
    const ref = `S${i + 1}`
    const out = kind.amplifiers === 0 ? at.p : last && options.filter === false ? 'adc' : ref
    const stage = new StageBuilder(builder, counter, design, ref, i === 0 ? '' : 'B', { ...at, out })
    kind.build(stage, valuesFor(kind, options.open ?? []), sizing, need)
    at = { p: out, n: null }
  })
  if (options.sections) {
    const choose = { ...design.choose, filter: { ...options.sections, corner: 1000 } }
    const spec = sizeFilter({ ...design, choose }, { voltage: 2.5, resistance: 0 })
    addFilter(builder, counter, design, spec, at.p)
  } else if (options.filter !== false) {
    builder.resistor({ ref: 'R9', a: at.p, b: 'adc', value: 1000, stage: 'filter' })
    builder.capacitor({ ref: 'C9', a: 'adc', b: '0', value: 1e-8, stage: 'filter' })
  } else if (at.p !== 'adc') {
    builder.voltageSource({ ref: 'VLINK', p: at.p, n: 'adc', value: 0, stage: 'filter' })
  }
  builder.resistor({ ref: 'RADC', a: 'adc', b: '0', value: 1e9, stage: 'converter', fixed: true })
  return builder.build({ title: arrangement.title, output: { p: 'adc', n: '0' }, temperature: 23 })
}

export interface Sample {
  name: string
  network: Network
}

const differentials = arrangements.filter((a) => a.signal === 'differential')
const singles = arrangements.filter((a) => a.signal === 'single-ended')
const byId = (id: string): Arrangement => {
  const found = arrangements.find((a) => a.id === id)
  if (!found) throw new Error(`no arrangement ${id}`)
  return found
}

/** Every arrangement with a source of its kind, with and without source resistance, and pairs of stages. */
export function sampleNetworks(): Sample[] {
  const add = (name: string, arrangement: Arrangement, options: SampleOptions): Sample => ({
    name,
    network: sampleNetwork(arrangement, options),
  })
  const seconds = singles.filter((a) => a.amplifiers > 0)
  return [
    ...singles.flatMap((a) => [
      add(a.id, a, { source: 'voltage', sourceResistance: 100 }),
      add(`${a.id}, bare`, a, { source: 'voltage', filter: false }),
    ]),
    ...differentials.flatMap((a) => [
      add(`${a.id}, bridge`, a, { source: 'bridge' }),
      add(`${a.id}, bridge and leads`, a, { source: 'bridge', sourceResistance: 49.9 }),
      add(`${a.id}, transmitter`, a, {
        source: 'differential',
        sourceResistance: 100,
        referenceResistance: 2,
      }),
    ]),
    ...[byId('non-inverting-up'), byId('non-inverting'), byId('level-shift')].map((a) =>
      add(`${a.id}, a resistor left open`, a, {
        source: 'voltage',
        open: a.id === 'level-shift' ? ['R3'] : ['Rg'],
      }),
    ),
    add('two-amplifier without gain resistor', byId('two-amplifier'), { source: 'bridge', open: ['Rg'] }),
    add('integrated-instrumentation at gain 1', byId('integrated-instrumentation'), {
      source: 'bridge',
      open: ['Rg'],
    }),
    ...seconds.flatMap((second) => [
      add(`inverting-up, then ${second.id}`, byId('inverting-up'), { source: 'voltage', second }),
      add(`non-inverting-down, then ${second.id}`, byId('non-inverting-down'), { source: 'voltage', second }),
      add(`integrated-instrumentation, then ${second.id}`, byId('integrated-instrumentation'), {
        source: 'bridge',
        second,
      }),
      add(`three-amplifier, then ${second.id}`, byId('three-amplifier'), { source: 'bridge', second }),
    ]),
    ...(['sallen-key', 'multiple-feedback'] as const).flatMap((kind) =>
      [2, 3, 4, 6].flatMap((order) => [
        add(`direct, ${kind} of order ${order}`, byId('direct'), {
          source: 'voltage',
          sections: { kind, order },
        }),
        add(`non-inverting-up, ${kind} of order ${order}`, byId('non-inverting-up'), {
          source: 'voltage',
          sections: { kind, order },
        }),
        add(`inverting-up, ${kind} of order ${order}`, byId('inverting-up'), {
          source: 'voltage',
          sections: { kind, order },
        }),
        add(`three-amplifier, ${kind} of order ${order}`, byId('three-amplifier'), {
          source: 'bridge',
          sections: { kind, order },
        }),
      ]),
    ),
    ...differentials.map((a) =>
      add(`${a.id}, then inverting-up`, a, { source: 'bridge', second: byId('inverting-up') }),
    ),
  ]
}
