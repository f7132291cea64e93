import {
  GROUND,
  type Amplifier,
  type Capacitor,
  type ControlledVoltageSource,
  type Network,
  type NetworkElement,
  type Resistor,
  type VoltageSource,
} from '#shared/network/types.ts'

/**
 * What is drawn of a network, and how it hangs together. Ideal sources become terminals, elements inside an
 * integrated part become one part, loads inside the converter belong to its block.
 */

/** A part with two pins. */
export interface Device {
  element: Resistor | Capacitor
  a: string
  b: string
}

export interface AmplifierCell {
  kind: 'amplifier'
  ref: string
  stage: string
  name: string
  p: string
  m: string
  out: string
}

/** An integrated instrumentation amplifier: its gain resistor's pins and its reference pin are nodes outside it. */
export interface InstrumentationCell {
  kind: 'instrumentation'
  ref: string
  stage: string
  name: string
  p: string
  m: string
  out: string
  gainP: string
  gainM: string
  level: string
}

export type Cell = AmplifierCell | InstrumentationCell

export interface Driver {
  ref: string
  stage: string
  value: number
}

export interface Graph {
  devices: Device[]
  cells: Cell[]
  /** Nodes held by an ideal source against ground that do not carry the signal: references, excitation. */
  fixed: ReadonlyMap<string, Driver>
  /** Nodes where the signal enters, with the sign that it has there. */
  signals: ReadonlyMap<string, Driver & { sign: 1 | -1 | 0 }>
  output: string
  /** Elements that have no symbol of their own, by designator. */
  hidden: ReadonlySet<string>
}

const isDevice = (e: NetworkElement): e is Resistor | Capacitor =>
  e.kind === 'resistor' || e.kind === 'capacitor'
const isInternal = (e: NetworkElement): boolean => e.kind === 'resistor' && e.group === 'internal'
const inConverter = (e: NetworkElement): boolean => isDevice(e) && e.fixed && e.stage === 'converter'

/** Reads the network for drawing. */
export function readGraph(network: Network): Graph {
  const { elements } = network
  const merge = mergedNodes(elements)
  const supplies = new Set(elements.flatMap((e) => (e.kind === 'amplifier' ? [e.vpos, e.vneg] : [])))
  const internal = elements.filter((e) => isInternal(e) || inConverter(e))
  const outside = elements.filter(isDevice).filter((e) => !isInternal(e) && !inConverter(e))
  const drivers = drivenNodes(elements, merge)
  const held = new Map([...drivers].filter(([node]) => !supplies.has(node)))

  // A reference's own output resistance is part of the reference, not a part on the board.
  const inReference = outside.filter(
    (e) =>
      e.fixed &&
      e.stage !== 'source' &&
      [e.a, e.b].some((n) => held.has(merge(n)) && e.stage === held.get(merge(n))?.stage),
  )
  for (const e of inReference) {
    const driver = held.get(merge(e.a)) ?? held.get(merge(e.b))
    const far = held.has(merge(e.a)) ? merge(e.b) : merge(e.a)
    if (driver && far !== GROUND) held.set(far, driver)
  }

  const devices = outside
    .filter((e) => !inReference.includes(e))
    .map((element): Device => ({ element, a: merge(element.a), b: merge(element.b) }))
  const cells = readCells(elements, merge)
  const touched = new Set([
    ...devices.flatMap((d) => [d.a, d.b]),
    ...cells.flatMap((c) => [c.p, c.m]),
    merge(network.output.p),
  ])
  const signals = new Map<string, Driver & { sign: 1 | -1 | 0 }>()
  for (const [node, driver] of held) {
    if (driver.stage !== 'source' || !touched.has(node)) continue
    if (!isExcitation(node, devices)) signals.set(node, { ...driver, sign: 0 })
  }
  for (const e of elements) {
    if (e.kind !== 'controlled-voltage-source' || e.stage !== 'source' || !touched.has(merge(e.p))) continue
    signals.set(merge(e.p), { ref: e.ref, stage: e.stage, value: e.gain, sign: e.gain < 0 ? -1 : 1 })
  }
  const fixed = new Map([...held].filter(([node]) => !signals.has(node)))
  const drawn = new Set([
    ...devices.map((d) => d.element.ref),
    ...elements.filter((e) => e.kind === 'amplifier').map((e) => e.ref),
  ])
  const hidden = new Set(elements.map((e) => e.ref).filter((ref) => !drawn.has(ref)))
  for (const e of [...internal, ...inReference]) hidden.add(e.ref)
  return { devices, cells, fixed, signals, output: merge(network.output.p), hidden }
}

/** Series sources of the sensor (its zero error) and links of 0 V are drawn as a plain connection. */
function mergedNodes(elements: readonly NetworkElement[]): (node: string) => string {
  const parent = new Map<string, string>()
  const find = (node: string): string => {
    const up = parent.get(node)
    return up === undefined ? node : find(up)
  }
  for (const e of elements) {
    if (e.kind !== 'voltage-source' || e.p === GROUND || e.n === GROUND) continue
    if (e.stage !== 'source' && e.value !== 0) continue
    const [p, n] = [find(e.p), find(e.n)]
    if (p !== n) parent.set(p, n)
  }
  return find
}

function drivenNodes(
  elements: readonly NetworkElement[],
  merge: (node: string) => string,
): Map<string, Driver> {
  const grounded = (e: NetworkElement): e is VoltageSource =>
    e.kind === 'voltage-source' && (e.n === GROUND) !== (e.p === GROUND)
  return new Map(
    elements.filter(grounded).map((e) => {
      const up = e.n === GROUND
      return [merge(up ? e.p : e.n), { ref: e.ref, stage: e.stage, value: up ? e.value : -e.value }]
    }),
  )
}

/** An excitation feeds two arms of a bridge, or the resistance in series with them. */
function isExcitation(node: string, devices: readonly Device[]): boolean {
  const bridge = findBridge(devices)
  if (!bridge) return false
  const feeds = devices.filter((d) => d.a === node || d.b === node)
  return node === bridge.top || feeds.some((d) => d.a === bridge.top || d.b === bridge.top)
}

export interface Bridge {
  /** Node that is excited. */
  top: string
  legs: [string, string]
  /** Arms from the excitation to each leg and from each leg to ground. */
  upper: [Device, Device]
  lower: [Device, Device]
}

/** Four fixed resistors of the source in a ring between an excitation and ground. */
export function findBridge(devices: readonly Device[]): Bridge | null {
  const arms = devices.filter((d) => d.element.kind === 'resistor' && d.element.stage === 'source')
  const between = (x: string, y: string) =>
    arms.find((d) => (d.a === x && d.b === y) || (d.a === y && d.b === x))
  const other = (d: Device, node: string) => (d.a === node ? d.b : d.a)
  const lower = arms.filter((d) => d.a === GROUND || d.b === GROUND)
  for (const [i, first] of lower.entries()) {
    for (const second of lower.slice(i + 1)) {
      const legs: [string, string] = [other(first, GROUND), other(second, GROUND)]
      const tops = arms
        .filter((d) => d !== first && (d.a === legs[0] || d.b === legs[0]))
        .map((d) => other(d, legs[0]))
      for (const top of tops) {
        const [one, two] = [between(top, legs[0]), between(top, legs[1])]
        if (top !== GROUND && one && two && legs[0] !== legs[1])
          return { top, legs, upper: [one, two], lower: [first, second] }
      }
    }
  }
  return null
}

function readCells(elements: readonly NetworkElement[], merge: (node: string) => string): Cell[] {
  const amplifiers = elements.filter((e): e is Amplifier => e.kind === 'amplifier')
  const cells: Cell[] = []
  const seen = new Set<string>()
  for (const e of amplifiers) {
    if (e.macro === undefined) {
      cells.push({
        kind: 'amplifier',
        ref: e.ref,
        stage: e.stage,
        name: e.part.name,
        p: merge(e.p),
        m: merge(e.m),
        out: merge(e.out),
      })
      continue
    }
    if (seen.has(e.macro)) continue
    seen.add(e.macro)
    const halves = amplifiers.filter((h) => h.macro === e.macro)
    const outs = new Set(halves.map((h) => h.out))
    const output = elements.find(
      (s): s is ControlledVoltageSource =>
        s.kind === 'controlled-voltage-source' && outs.has(s.cp) && outs.has(s.cn),
    )
    const plus = halves.find((h) => h.out === output?.cp)
    const minus = halves.find((h) => h.out === output?.cn)
    if (!output || !plus || !minus) throw new RangeError(`the integrated part ${e.macro} has no output`)
    cells.push({
      kind: 'instrumentation',
      ref: e.macro,
      stage: e.stage,
      name: e.part.name,
      p: merge(plus.p),
      m: merge(minus.p),
      out: merge(output.p),
      gainP: merge(plus.m),
      gainM: merge(minus.m),
      level: merge(output.n),
    })
  }
  return cells
}

export const farEnd = (device: Device, node: string): string => (device.a === node ? device.b : device.a)

export const at = (devices: Iterable<Device>, node: string): Device[] =>
  [...devices].filter((d) => d.a === node || d.b === node)
