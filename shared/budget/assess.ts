import { computeLoopGain } from '#shared/analysis/ac.ts'
import { solveDc } from '#shared/analysis/dc.ts'
import {
  computeExtremes,
  type ExtremesCase,
  type ExtremesOutput,
  type ExtremesResult,
} from '#shared/analysis/extremes.ts'
import type { Pin } from '#shared/amplifiers/stage-builder.ts'
import { buildChain, sensorEnds, type Chain, type ChainSpec } from '#shared/design/chain.ts'
import type { Ends } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import { temperatureSpan } from '#shared/design/references.ts'
import type { Amplifier, NetworkElement, Resistor } from '#shared/network/types.ts'

/**
 * Runs the exact bounds of a chain (numerics: vertices of the resistors, sources in closed form) at both ends of the
 * measurand, and at the readings beyond it, and keeps what headroom, levels and end points read from them.
 */

/** A pin with its limits, each watched as a margin that must stay at or above zero. */
export interface WatchedPin {
  name: string
  node: string
  stage: string
  role: Pin['role'] | 'converter'
  /** Nominal limits, V. */
  allowed: Ends
  /** True at an end where the range reaches the rail itself. */
  atRail: Ends<boolean>
  /** Voltages reached at each place; only with clips. */
  reached: Partial<Record<Place, Ends>>
  /** Least distance to the limit at each place, V. */
  margin: Record<Place, Ends>
  nominalMargin: Record<Place, Ends>
  /** Value of the measurand at which the limit is met; null: never. */
  clipsAt: Ends<number | null>
  worstClipsAt: Ends<number | null>
}

/** A part driven past a rating: power (W), voltage (V), output current (A), or a gain below the smallest stable one. */
export interface Stress {
  ref: string
  kind: 'power' | 'voltage' | 'current' | 'gain'
  value: number
  limit: number
}

export type Place = 'low' | 'high' | 'beyondLow' | 'beyondHigh'

export interface Assessment {
  chains: Record<'low' | 'high', Chain>
  places: Place[]
  pins: WatchedPin[]
  /** Node voltages of the level diagram, nominal and bounds. */
  levels: {
    node: string
    title: string
    nominal: Record<'low' | 'high', number>
    bounds: Record<'low' | 'high', Ends>
  }[]
  /** y: what the firmware sees, V. */
  y: { nominal: Ends; worst: Record<'low' | 'high', Ends> }
  /** Current drawn from (+) the shift reference and each excitation, bounds over all places, A. */
  loads: { ref: string; low: number; high: number; nominal: number }[]
  /** Parts loaded beyond their ratings; only with clips. */
  stresses: Stress[]
  bound: { vertices: number; resistors: number; proven: boolean; keepsSign: boolean }
}

type Weights = Record<string, number>

const onNode = (node: string, weight = 1): Weights => (node === '0' ? {} : { [node]: weight })

/**
 * `nominal` watches the margins of the nominal resistors alone, to sort out quickly what cannot work; `every-board`
 * those of all boards; `with-clips` adds levels, reached voltages and the measurand at which each limit is met.
 */
export type AssessDepth = 'nominal' | 'every-board' | 'with-clips'

/** Assesses a chain at both ends of the span and at the readings beyond it. Throws CircuitError. */
export function assess(design: Design, spec: ChainSpec, depth: AssessDepth = 'every-board'): Assessment {
  const { quantity } = design.sensor
  const at: Partial<Record<Place, number>> = {
    low: quantity.low,
    high: quantity.high,
    ...beyondQuantities(design),
  }
  const places = Object.keys(at) as Place[]
  const chains = new Map<Place, Chain>()
  for (const place of places) chains.set(place, buildChain(design, spec, at[place] ?? 0))
  const low = chains.get('low')
  const high = chains.get('high')
  if (!low || !high) throw new RangeError('a chain is assessed at both ends of its span')

  const whole = depth === 'with-clips'
  const outputs = [...watchMargins(design, low), ...(whole ? watchVoltages(low) : [])]
  const results = boundsAt(chains, outputs, depth)
  const read = (place: Place, id: string, suffix = '') => {
    const result = results.get(place)?.outputs[id]?.[place + suffix]
    if (!result) throw new RangeError(`no bound was computed for ${id} at ${place}`)
    return result
  }
  const one = results.get('low')
  return {
    chains: { low, high },
    places,
    pins: watchedPins(design, low, places, whole, read, (place, signal) =>
      toQuantity(design, chains.get(place) ?? low, at[place] ?? 0, signal),
    ),
    levels: (whole ? low.levels : []).map((level) => ({
      node: level.node,
      title: level.title,
      nominal: {
        low: read('low', `level:${level.node}`).nominal,
        high: read('high', `level:${level.node}`).nominal,
      },
      bounds: {
        low: boundsOf(read('low', `level:${level.node}`)),
        high: boundsOf(read('high', `level:${level.node}`)),
      },
    })),
    y: firmwareView(low, read),
    loads: loadsOf(low, places, read),
    stresses: whole ? stressesOf(design, low, places, read) : [],
    bound: {
      vertices: one?.vertices ?? 0,
      resistors: one?.resistors ?? 0,
      proven: [...results.values()].every((r) => r.proven),
      keepsSign: [...results.values()].every((r) => r.keepsSign),
    },
  }
}

const boundsOf = (r: { low: number; high: number }): Ends => ({ low: r.low, high: r.high })

type Read = (
  place: Place,
  id: string,
  suffix?: string,
) => {
  nominal: number
  low: number
  high: number
  clip?: Ends<number | null>
  nominalClip?: Ends<number | null>
}

function beyondQuantities(design: Design): Partial<Record<Place, number>> {
  const { sensor } = design
  if (!sensor.beyond) return {}
  if (sensor.kind === 'bridge') return { beyondLow: sensor.beyond.low, beyondHigh: sensor.beyond.high }
  const { quantity, output } = sensor
  const back = (s: number) =>
    quantity.low + ((s - output.low) * (quantity.high - quantity.low)) / (output.high - output.low)
  return { beyondLow: back(sensor.beyond.low), beyondHigh: back(sensor.beyond.high) }
}

function signalOf(chain: Chain): number {
  return chain.variables.find((v) => v.id === chain.signal.variable)?.nominal ?? 0
}

/** Two networks that one enumeration can serve: alike but for the value of the signal source. */
function differsInSignalOnly(a: Chain, b: Chain): boolean {
  if (a === b) return true
  if (a.variables.length !== b.variables.length) return false
  const sameVariables = a.variables.every((v, i) => {
    const w = b.variables[i]
    return v.id === a.signal.variable || (w !== undefined && v.low === w.low && v.high === w.high)
  })
  return (
    sameVariables && a.network.elements.every((e, i) => sameElement(e, b.network.elements[i], a.signal.ref))
  )
}

function sameElement(a: NetworkElement, b: NetworkElement | undefined, signal: string): boolean {
  if (!b || a.ref !== b.ref) return false
  if (a.ref === signal) return true
  return 'value' in a && 'value' in b ? a.value === b.value : a.kind === b.kind
}

/** Bounds of every output at every place; one enumeration serves all places where only the signal source differs. */
function boundsAt(
  chains: Map<Place, Chain>,
  outputs: ExtremesOutput[],
  depth: AssessDepth,
): Map<Place, ExtremesResult> {
  const entries = [...chains.entries()]
  const [first] = entries
  if (!first) throw new RangeError('a chain is assessed at one place at least')
  const cases = ([place, chain]: [Place, Chain]) => casesFor(chain, place, signalOf(chain))
  if (depth === 'nominal') return new Map(entries.map((e) => [e[0], nominalBoard(e[1], outputs, cases(e))]))
  if (!entries.every(([, chain]) => differsInSignalOnly(first[1], chain)))
    return new Map(entries.map((e) => [e[0], everyBoard(e[1], outputs, cases(e), depth)]))
  const result = everyBoard(first[1], outputs, entries.flatMap(cases), depth)
  return new Map(entries.map(([place]) => [place, result]))
}

function everyBoard(
  chain: Chain,
  outputs: ExtremesOutput[],
  cases: ExtremesCase[],
  depth: AssessDepth,
): ExtremesResult {
  return computeExtremes(chain.network, {
    model: 'real',
    resistors: chain.resistors,
    variables: chain.variables,
    // x/(1 − x/2) makes the first-order form an outer bound of the exact row.
    cmrr: chain.errors.map((e) => ({ ref: e.ref, x: e.cmrr / (1 - e.cmrr / 2), reference: e.reference })),
    outputs,
    cases,
    ...(depth === 'with-clips' ? { clip: { variable: chain.signal.variable } } : {}),
  })
}

/** The same shape of answer for the nominal board alone, by one solution of the network. */
function nominalBoard(chain: Chain, outputs: ExtremesOutput[], cases: ExtremesCase[]): ExtremesResult {
  const solution = solveDc(chain.network, { model: 'real' })
  const nominalOf = new Map(chain.variables.map((v) => [v.id, v.nominal]))
  const sum = (weights: Record<string, number> | undefined, value: (key: string) => number) =>
    Object.entries(weights ?? {}).reduce((total, [key, weight]) => total + weight * value(key), 0)
  const found = outputs.map((o) => {
    const value =
      (o.constant ?? 0) +
      sum(o.nodes, (node) => solution.voltage(node)) +
      sum(o.currents, (ref) => solution.current(ref)) +
      sum(o.variables, (id) => nominalOf.get(id) ?? 0)
    const entry = { nominal: value, low: value, high: value }
    return [o.id, Object.fromEntries(cases.map((c) => [c.id, entry]))] as const
  })
  return { outputs: Object.fromEntries(found), vertices: 1, resistors: 0, proven: false, keepsSign: true }
}

/** The place itself, and the same with the converter's reference held at either limit. */
function casesFor(chain: Chain, place: Place, signal: number): ExtremesCase[] {
  const pinned = { [chain.signal.variable]: signal }
  const cases: ExtremesCase[] = [{ id: place, pinned }]
  const reference = converterVariable(chain)
  if (reference && (place === 'low' || place === 'high') && reference.low !== reference.high) {
    cases.push({ id: `${place}/low`, pinned: { ...pinned, [reference.id]: reference.low } })
    cases.push({ id: `${place}/high`, pinned: { ...pinned, [reference.id]: reference.high } })
  }
  return cases
}

function converterVariable(chain: Chain) {
  const id = chain.references.converter?.variable
  return id === undefined ? undefined : chain.variables.find((v) => v.id === id)
}

function watchMargins(design: Design, chain: Chain): ExtremesOutput[] {
  const outputs: ExtremesOutput[] = []
  chain.pins.forEach((pin, i) => {
    const judged = pin.judged ?? pin.node
    outputs.push({ id: `low:${i}`, nodes: { ...onNode(judged), vneg: -1 }, constant: -pin.low })
    outputs.push({ id: `high:${i}`, nodes: { ...onNode(judged, -1), vpos: 1 }, constant: -pin.high })
    // Under load the swing shrinks by the current sunk or sourced; each is a margin of its own.
    if (pin.swing && pin.swing.low > 0)
      outputs.push({
        id: `sink:${i}`,
        nodes: { ...onNode(judged), vneg: -1 },
        currents: { [pin.swing.ref]: pin.swing.low },
        constant: -pin.low,
      })
    if (pin.swing && pin.swing.high > 0)
      outputs.push({
        id: `feed:${i}`,
        nodes: { ...onNode(judged, -1), vpos: 1 },
        currents: { [pin.swing.ref]: -pin.swing.high },
        constant: -pin.high,
      })
  })
  const { low, high } = design.converter.input
  const reference = chain.references.converter
  const scaled = (limit: number, sign: 1 | -1) =>
    reference
      ? { variables: { [reference.variable]: (-sign * limit) / reference.voltage }, constant: 0 }
      : { constant: -sign * limit }
  outputs.push({ id: 'adc:low', nodes: { adc: 1 }, ...scaled(low, 1) })
  outputs.push({ id: 'adc:high', nodes: { adc: -1 }, ...scaled(high, -1) })
  outputs.push({ id: 'adc', nodes: { adc: 1 } })
  for (const ref of loadRefs(chain)) outputs.push({ id: `load:${ref}`, nodes: {}, currents: { [ref]: -1 } })
  return outputs
}

function watchVoltages(chain: Chain): ExtremesOutput[] {
  return [
    ...chain.pins.map((pin, i) => ({ id: `pin:${i}`, nodes: onNode(pin.node) })),
    ...ratedResistors(chain).map((r) => ({
      id: `across:${r.ref}`,
      nodes: { ...onNode(r.a), ...onNode(r.b, -1) },
    })),
    ...plainAmplifiers(chain).map((u) => ({ id: `drive:${u.ref}`, nodes: {}, currents: { [u.ref]: 1 } })),
    ...chain.levels.map((level) => ({
      id: `level:${level.node}`,
      nodes: { ...onNode(level.p), ...(level.n ? onNode(level.n, -1) : {}) },
    })),
  ]
}

const ratedResistors = (chain: Chain): Resistor[] =>
  chain.network.elements.flatMap((e) => (e.kind === 'resistor' && !e.fixed ? [e] : []))

const plainAmplifiers = (chain: Chain): Amplifier[] =>
  chain.network.elements.flatMap((e) => (e.kind === 'amplifier' && !e.macro ? [e] : []))

/** Ratings of resistors are used to half (common practice); amplifiers to their own limits. */
const DERATING = 0.5

function stressesOf(design: Design, chain: Chain, places: Place[], read: Read): Stress[] {
  const { power, voltage } = design.parts.resistors
  const most = (id: string) =>
    Math.max(...places.flatMap((p) => [Math.abs(read(p, id).low), Math.abs(read(p, id).high)]))
  const list: Stress[] = []
  for (const r of ratedResistors(chain)) {
    const volts = most(`across:${r.ref}`)
    const smallest = r.value * (1 - Math.min(r.tolerance + r.drift * temperatureSpan(design), 0.99))
    const watts = volts ** 2 / smallest
    if (volts > voltage * DERATING)
      list.push({ ref: r.ref, kind: 'voltage', value: volts, limit: voltage * DERATING })
    if (watts > power * DERATING)
      list.push({ ref: r.ref, kind: 'power', value: watts, limit: power * DERATING })
  }
  for (const u of plainAmplifiers(chain)) {
    const amps = most(`drive:${u.ref}`)
    if (amps > u.part.outputCurrent)
      list.push({ ref: u.ref, kind: 'current', value: amps, limit: u.part.outputCurrent })
    const noiseGain = u.part.a0 / computeLoopGain(chain.network, u.ref, 0).re
    if (u.part.minimumGain > 1 && noiseGain < u.part.minimumGain)
      list.push({ ref: u.ref, kind: 'gain', value: noiseGain, limit: u.part.minimumGain })
  }
  return list
}

const loadRefs = (chain: Chain): string[] =>
  chain.network.elements.flatMap((e) => (e.ref === 'VREF' || e.ref === 'VEXC' ? [e.ref] : []))

function watchedPins(
  design: Design,
  chain: Chain,
  places: Place[],
  whole: boolean,
  read: Read,
  toMeasurand: (place: Place, signal: number) => number,
): WatchedPin[] {
  const supply = { low: design.rails.negative, high: design.rails.positive }
  const collect = (
    ids: { value: string; low: string[]; high: string[] },
    rest: Pick<WatchedPin, 'name' | 'node' | 'stage' | 'role' | 'allowed' | 'atRail'>,
  ): WatchedPin => {
    const worst = (list: string[], place: Place) => Math.min(...list.map((id) => read(place, id).low))
    const nominal = (list: string[], place: Place) => Math.min(...list.map((id) => read(place, id).nominal))
    const each = <T>(f: (place: Place) => T) =>
      Object.fromEntries(places.map((p) => [p, f(p)])) as Record<Place, T>
    const clip = (list: string[], which: 'clip' | 'nominalClip') =>
      nearestClip(list, which, read, toMeasurand, design)
    return {
      ...rest,
      reached: whole ? each((p) => boundsOf(read(p, ids.value))) : {},
      margin: each((p) => ({ low: worst(ids.low, p), high: worst(ids.high, p) })),
      nominalMargin: each((p) => ({ low: nominal(ids.low, p), high: nominal(ids.high, p) })),
      clipsAt: { low: clip(ids.low, 'nominalClip'), high: clip(ids.high, 'nominalClip') },
      worstClipsAt: { low: clip(ids.low, 'clip'), high: clip(ids.high, 'clip') },
    }
  }
  const pins = chain.pins.map((pin, i) =>
    collect(
      {
        value: `pin:${i}`,
        low: pin.swing && pin.swing.low > 0 ? [`low:${i}`, `sink:${i}`] : [`low:${i}`],
        high: pin.swing && pin.swing.high > 0 ? [`high:${i}`, `feed:${i}`] : [`high:${i}`],
      },
      {
        name: pin.name,
        node: pin.node,
        stage: pin.stage,
        role: pin.role,
        allowed: { low: supply.low + pin.low, high: supply.high - pin.high },
        atRail: { low: pin.low <= 0, high: pin.high <= 0 },
      },
    ),
  )
  pins.push(
    collect(
      { value: 'adc', low: ['adc:low'], high: ['adc:high'] },
      {
        name: 'Converter input',
        node: 'adc',
        stage: 'converter',
        role: 'converter',
        allowed: design.converter.input,
        atRail: { low: false, high: false },
      },
    ),
  )
  return pins
}

/**
 * The measurand at which the first of some margins is used up, searched from the end of the span that lies nearer;
 * null where it never is.
 */
function nearestClip(
  ids: string[],
  which: 'clip' | 'nominalClip',
  read: Read,
  toMeasurand: (place: Place, signal: number) => number,
  design: Design,
): number | null {
  const { low, high } = design.sensor.quantity
  const middle = (low + high) / 2
  let best: number | null = null
  for (const id of ids)
    for (const place of ['low', 'high'] as const) {
      const found = read(place, id)[which]
      for (const signal of [found?.low, found?.high]) {
        if (signal === null || signal === undefined) continue
        const q = toMeasurand(place, signal)
        // Each end answers for its own half of the axis, where its error limits are the right ones.
        const ownHalf = place === 'low' ? (q - middle) * (high - low) <= 0 : (q - middle) * (high - low) >= 0
        if (!ownHalf) continue
        if (best === null || Math.abs(q - middle) < Math.abs(best - middle)) best = q
      }
    }
  return best
}

/** Measurand at which the signal source would have to stand at `signal`, with the sensor's straight line. */
function toQuantity(design: Design, chain: Chain, at: number, signal: number): number {
  const { quantity } = design.sensor
  const span = sensorSpan(design)
  return at + ((signal - signalOf(chain)) * (quantity.high - quantity.low)) / span
}

/** Sensor output span over the measurand's span, V. */
function sensorSpan(design: Design): number {
  const ends = sensorEnds(design)
  return ends.high - ends.low
}

/** y = v·Vref,nominal/Vref: monotone in the reference, so its extremes lie at the reference's limits. */
function firmwareView(chain: Chain, read: Read): Assessment['y'] {
  const reference = converterVariable(chain)
  const end = (place: 'low' | 'high'): Ends => {
    if (!reference || reference.low === reference.high) return boundsOf(read(place, 'adc'))
    const low = read(place, 'adc', '/low')
    const high = read(place, 'adc', '/high')
    const up = reference.nominal / reference.low
    const down = reference.nominal / reference.high
    return {
      low: Math.min(low.low * up, high.low * down),
      high: Math.max(low.high * up, high.high * down),
    }
  }
  return {
    nominal: { low: read('low', 'adc').nominal, high: read('high', 'adc').nominal },
    worst: { low: end('low'), high: end('high') },
  }
}

function loadsOf(chain: Chain, places: Place[], read: Read): Assessment['loads'] {
  return loadRefs(chain).map((ref) => {
    const found = places.map((p) => read(p, `load:${ref}`))
    return {
      ref,
      low: Math.min(...found.map((r) => r.low)),
      high: Math.max(...found.map((r) => r.high)),
      nominal: found.reduce((most, r) => (Math.abs(r.nominal) > Math.abs(most) ? r.nominal : most), 0),
    }
  })
}
