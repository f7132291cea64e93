import { kindOf } from './elements/index.ts'
import { GROUND } from './types.ts'
import type {
  Amplifier,
  Capacitor,
  ControlledVoltageSource,
  CurrentSource,
  Network,
  NetworkElement,
  Resistor,
  VoltageSource,
} from './types.ts'

type Given<E, Optional extends keyof E = never> = Omit<E, 'kind' | Optional> & Partial<Pick<E, Optional>>

const REF = /^[A-Za-z][A-Za-z0-9]*$/
/** Two underscores in a row are kept for the inner nodes of SPICE models. */
const NODE = /^[A-Za-z0-9]+(_[A-Za-z0-9]+)*$/

/**
 * Collects the elements of a network. Refuses, with a RangeError in circuit terms, what no analysis could answer:
 * a designator used twice (case-blind, since SPICE folds case), values that are not finite, resistors of 0 Ω.
 */
export class NetworkBuilder {
  private readonly elements: NetworkElement[] = []
  private readonly refs = new Set<string>()
  /** Lower case → spelling first used. */
  private readonly spellings = new Map<string, string>()

  resistor(given: Given<Resistor, 'tolerance' | 'drift' | 'fixed' | 'group'>): this {
    return this.add({ kind: 'resistor', tolerance: 0, drift: 0, fixed: true, group: null, ...given })
  }

  capacitor(given: Given<Capacitor, 'tolerance' | 'drift' | 'fixed'>): this {
    return this.add({ kind: 'capacitor', tolerance: 0, drift: 0, fixed: true, ...given })
  }

  voltageSource(given: Given<VoltageSource>): this {
    return this.add({ kind: 'voltage-source', ...given })
  }

  currentSource(given: Given<CurrentSource>): this {
    return this.add({ kind: 'current-source', ...given })
  }

  controlledVoltageSource(given: Given<ControlledVoltageSource>): this {
    return this.add({ kind: 'controlled-voltage-source', ...given })
  }

  amplifier(given: Given<Amplifier>): this {
    return this.add({ kind: 'amplifier', ...given })
  }

  /** True where some element already touches the node. */
  hasNode(node: string): boolean {
    return node === GROUND || this.spellings.get(node.toLowerCase()) === node
  }

  build(given: Omit<Network, 'elements'>): Network {
    if (given.title.trim() === '' || /[\r\n]/.test(given.title)) {
      throw new RangeError('A network needs a title of one line')
    }
    if (!Number.isFinite(given.temperature))
      throw new RangeError('A network needs a finite temperature in °C')
    for (const node of [given.output.p, given.output.n]) {
      if (!this.hasNode(node)) throw new RangeError(`Output node ${node} is not connected to anything`)
    }
    return { ...given, elements: [...this.elements] }
  }

  private add(element: NetworkElement): this {
    const kind = kindOf(element)
    const { ref } = element
    if (!REF.test(ref))
      throw new RangeError(`"${ref}" is no reference designator: letters and digits, letter first`)
    if (kind.letter && ref[0]!.toUpperCase() !== kind.letter) {
      throw new RangeError(`${ref} is a ${element.kind}: its reference designator starts with ${kind.letter}`)
    }
    if (this.refs.has(ref.toLowerCase())) throw new RangeError(`Reference designator ${ref} is used twice`)
    const fault = notFinite(element) ?? kind.check(element)
    if (fault) throw new RangeError(fault)
    const pins = kind.nodes(element)
    for (const node of pins) this.noteNode(ref, node)
    this.refs.add(ref.toLowerCase())
    this.elements.push(element)
    return this
  }

  private noteNode(ref: string, node: string): void {
    if (!NODE.test(node))
      throw new RangeError(`${ref}: "${node}" is no node name: letters, digits, single underscores`)
    const known = this.spellings.get(node.toLowerCase())
    if (known !== undefined && known !== node) {
      throw new RangeError(
        `${ref}: nodes ${known} and ${node} differ in case only, which SPICE does not tell apart`,
      )
    }
    this.spellings.set(node.toLowerCase(), node)
  }
}

/** The first figure of an element, or of its part, that is not a finite number. */
function notFinite(element: object, owner = (element as { ref?: string }).ref ?? ''): string | null {
  for (const [key, value] of Object.entries(element)) {
    if (typeof value === 'number' && !Number.isFinite(value)) {
      return `${owner} has ${key} ${value}; it needs a finite number`
    }
    if (typeof value === 'object' && value !== null && !known.has(value)) {
      const fault = notFinite(value, owner)
      if (fault) return fault
      known.add(value)
    }
  }
  return null
}

/** Parts found to be in order: every amplifier of every chain of a plan has the same one. */
const known = new WeakSet<object>()
