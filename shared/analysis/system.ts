import { CircuitError } from '#shared/network/circuit-error.ts'
import { kindOf, stampPort } from '#shared/network/elements/index.ts'
import type { Model, PortName, Stamper } from '#shared/network/elements/element-kind.ts'
import { GROUND } from '#shared/network/types.ts'
import type { Network, NetworkElement } from '#shared/network/types.ts'
import type { Lu } from '#shared/numerics/lu.ts'
import { nullVector } from '#shared/numerics/lu.ts'

/*
 * Modified nodal analysis: unknowns are the node voltages and the currents of elements that have one as an unknown.
 * (constant + s·reactive)·x = dc sources, or ac sources. Source of the method: Ho, Ruehli and Brennan, "The modified
 * nodal approach to network analysis", IEEE Trans. Circuits and Systems 22 (1975).
 */

/** An error source, or a change of value, put into the network. */
export interface Injection {
  ref: string
  /** `value`: added to the element's value. `vos`: V at the + pin. `ib+`, `ib-`: A into the pin, besides the part's
   * own. `cmrr`: x = ±1/CMRR, with `reference` = common mode at which the offset is given, V. */
  port: PortName
  amount: number
  reference?: number
}

/** Values to put in place of the network's own: reference designator → Ω, F, V, A or gain. */
export type ValueSet = Readonly<Record<string, number>>

export interface UnknownIndex {
  size: number
  /** In order of the unknowns. */
  nodes: readonly string[]
  branches: readonly string[]
  nodeAt: ReadonlyMap<string, number>
  branchAt: ReadonlyMap<string, number>
  elements: ReadonlyMap<string, NetworkElement>
}

export interface System {
  index: UnknownIndex
  constant: Float64Array
  reactive: Float64Array
  dc: Float64Array
  ac: Float64Array
}

const indexes = new WeakMap<Network, UnknownIndex>()

/** Numbers the unknowns of a network; kept per network, since every analysis asks. */
export function indexUnknowns(network: Network): UnknownIndex {
  const known = indexes.get(network)
  if (known) return known
  const nodeAt = new Map<string, number>([[GROUND, -1]])
  const nodes: string[] = []
  for (const element of network.elements) {
    for (const node of kindOf(element).nodes(element)) {
      if (nodeAt.has(node)) continue
      nodeAt.set(node, nodes.length)
      nodes.push(node)
    }
  }
  const branchAt = new Map<string, number>()
  for (const element of network.elements) {
    if (kindOf(element).hasBranch) branchAt.set(element.ref, nodes.length + branchAt.size)
  }
  const elements = new Map(network.elements.map((element) => [element.ref, element]))
  const size = nodes.length + branchAt.size
  const index = { size, nodes, branches: [...branchAt.keys()], nodeAt, branchAt, elements }
  indexes.set(network, index)
  return index
}

/** Index of a node's voltage, -1 for ground; a CircuitError for a node that the network does not have. */
export function findNode(index: UnknownIndex, node: string): number {
  const at = index.nodeAt.get(node)
  if (at === undefined) throw new CircuitError('unknown-node', node, `The circuit has no node ${node}`)
  return at
}

export function findElement(index: UnknownIndex, ref: string): NetworkElement {
  const element = index.elements.get(ref)
  if (!element) throw new CircuitError('unknown-element', ref, `The circuit has no element ${ref}`)
  return element
}

/** Index of an element's current. */
export function findBranch(index: UnknownIndex, ref: string): number {
  const at = index.branchAt.get(ref)
  if (at === undefined) {
    throw new CircuitError('unknown-element', ref, `The current of ${ref} is not an unknown of the circuit`)
  }
  return at
}

/** Picks the output from the unknowns. */
export function outputVector(index: UnknownIndex, output: { p: string; n: string }): Float64Array {
  const vector = new Float64Array(index.size)
  const [p, n] = [findNode(index, output.p), findNode(index, output.n)]
  if (p >= 0) vector[p]! += 1
  if (n >= 0) vector[n]! -= 1
  return vector
}

export interface AssembleOptions {
  model: Model
  set?: ValueSet | undefined
  extra?: readonly Injection[] | undefined
  /** Amplifier whose loop is opened at its controlled source; all other independent sources are then 0. */
  opened?: string | undefined
  /** Elements that are left out. */
  without?: ReadonlySet<string> | undefined
}

/** Writes the equations of the network. */
export function assembleSystem(network: Network, options: AssembleOptions): System {
  const index = indexUnknowns(network)
  const system: System = {
    index,
    constant: new Float64Array(index.size ** 2),
    reactive: new Float64Array(index.size ** 2),
    dc: new Float64Array(index.size),
    ac: new Float64Array(index.size),
  }
  const replaced = replacedElements(index, options)
  const stamper = createStamper(system, options.model, 1, options.opened === undefined)
  for (const element of network.elements) {
    if (element.ref === options.opened || options.without?.has(element.ref)) continue
    const present = replaced?.get(element.ref) ?? element
    kindOf(present).stamp(present, stamper)
  }
  for (const { ref, port, amount, reference } of options.extra ?? []) {
    if (!Number.isFinite(amount) || !Number.isFinite(reference ?? 0)) {
      throw new RangeError(`${ref}: ${port} of ${amount}; it needs a finite amount`)
    }
    if (port === 'value') continue
    stampPort(findElement(index, ref), port, createStamper(system, options.model, amount), { reference })
  }
  if (options.opened !== undefined) {
    const element = findElement(index, options.opened)
    const { loop } = kindOf(element)
    if (!loop) throw new RangeError(`${element.ref} is no amplifier: it has no loop gain`)
    loop.stamp(element, createStamper(system, options.model, 1, true, element.ref))
  }
  return system
}

/** Elements whose value is replaced or changed; null for none. */
function replacedElements(
  index: UnknownIndex,
  { set, extra }: AssembleOptions,
): Map<string, NetworkElement> | null {
  const replaced = new Map<string, NetworkElement>()
  for (const [ref, value] of Object.entries(set ?? {})) {
    const element = findElement(index, ref)
    replaced.set(ref, kindOf(element).withValue(element, value))
  }
  for (const { ref, port, amount } of extra ?? []) {
    if (port !== 'value') continue
    const element = replaced.get(ref) ?? findElement(index, ref)
    replaced.set(ref, kindOf(element).withValue(element, valueOf(element) + amount))
  }
  return replaced.size > 0 ? replaced : null
}

function valueOf(element: NetworkElement): number {
  const value = kindOf(element).value(element)
  if (value === null) throw new RangeError(`${element.ref} has no single value that could be changed`)
  return value
}

/** A stamper that adds `scale` times what it is given; without `sources` it leaves independent sources out, except in
 * the row of `only`. */
export function createStamper(
  system: System,
  model: Model,
  scale = 1,
  sources = true,
  only: string | null = null,
): Stamper {
  const { index, constant, reactive, dc, ac } = system
  const { size } = index
  const onlyRow = only === null ? -1 : findBranch(index, only)
  return {
    model,
    node: (name) => findNode(index, name),
    branch: (ref) => findBranch(index, ref),
    add(row, column, value, slope = 0) {
      if (row < 0 || column < 0) return
      const at = row * size + column
      constant[at]! += scale * value
      if (slope !== 0) reactive[at]! += scale * slope
    },
    addSource(row, value, amplitude = 0) {
      if (row < 0 || !sources || (onlyRow >= 0 && row !== onlyRow)) return
      dc[row]! += scale * value
      ac[row]! += scale * amplitude
    },
  }
}

/** Throws a CircuitError for the first node that no conducting element ties to ground. */
export function requireDcPaths(network: Network, model: Model): void {
  const index = indexUnknowns(network)
  const parent = new Map<string, string>()
  const rootOf = (node: string): string => {
    let at = node
    for (let next = parent.get(at); next !== undefined; next = parent.get(at)) at = next
    return at
  }
  for (const element of network.elements) {
    for (const [a, b] of kindOf(element).dcPaths(element, model)) {
      const [first, second] = [rootOf(a), rootOf(b)]
      if (first !== second) parent.set(first, second)
    }
  }
  const ground = rootOf(GROUND)
  for (const node of index.nodes) {
    if (rootOf(node) !== ground) {
      throw new CircuitError('no-dc-path', node, `node ${node} has no dc path to ground`)
    }
  }
}

/** The CircuitError of a network whose equations have no single solution, in circuit terms. */
export function explainSingular(network: Network, model: Model, lu: Lu): CircuitError {
  try {
    requireDcPaths(network, model)
  } catch (error) {
    if (error instanceof CircuitError) return error
    throw error
  }
  const index = indexUnknowns(network)
  const free = nullVector(lu)
  let node = ''
  let most = 1e-6
  index.nodes.forEach((name, at) => {
    if (Math.abs(free[at]!) <= most) return
    most = Math.abs(free[at]!)
    node = name
  })
  if (node !== '') {
    const text = `node ${node} is not determined: an amplifier without feedback, or a loop that cancels itself`
    return new CircuitError('not-determined', node, text)
  }
  const loop = index.branches.filter((_, at) => Math.abs(free[index.nodes.length + at]!) > 1e-6)
  const text = `${loop.join(', ')}: voltages forced in a loop, so that the current is not determined`
  return new CircuitError('source-loop', loop[0] ?? '', text)
}
