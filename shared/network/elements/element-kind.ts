import type { Complex } from '#shared/numerics/complex.ts'

/** Ideal: each amplifier a nullor. Real: finite gain, bandwidth, resistances and bias current of its part. */
export type Model = 'ideal' | 'real'

/** Where the equations of the network are collected: M x = z with M = constant + s·reactive. Row or column -1 is ground. */
export interface Stamper {
  readonly model: Model
  node(name: string): number
  /** Index of the current through an element that has one as an unknown. */
  branch(ref: string): number
  add(row: number, column: number, constant: number, reactive?: number): void
  addSource(row: number, dc: number, ac?: number): void
}

/** A place at which a deviation enters: an element's value, or an error source of an amplifier. `loopGain`: change of
 * 1/a0. */
export type PortName = 'value' | 'vos' | 'ib+' | 'ib-' | 'cmrr' | 'loopGain'

export const portNames = [
  'value',
  'vos',
  'ib+',
  'ib-',
  'cmrr',
  'loopGain',
] as const satisfies readonly PortName[]

/** What a port may need to know: the given common mode of reference, or voltages to derive it from. */
export interface PortContext {
  reference?: number | undefined
  voltage?(node: string): number
}

/** Stamps the derivative of the equations with respect to the port's amount. */
export type PortStamp<E> = (element: E, stamper: Stamper, context: PortContext) => void

/** One independent source of noise inside an element. */
export interface NoiseSource {
  /** `thermal`, `en`, `in+`, `in-`: unique in its element. */
  name: string
  /** Density without flicker, V²/Hz or A²/Hz. */
  density: number
  /** Frequency below which 1/f exceeds that, Hz; 0 for none. The whole is density·(1 + corner/f). */
  corner: number
  /** Stamps the source with an amplitude of 1 V or 1 A. */
  inject(stamper: Stamper): void
}

/** Symbols that the drawing knows. */
export type SymbolName =
  'resistor' | 'capacitor' | 'voltage-source' | 'current-source' | 'controlled-source' | 'amplifier'

/** The loop of an amplifier, opened at its controlled source. */
export interface LoopOpening<E> {
  /** Stamps the element with its controlled source replaced by an independent source of 1 V. */
  stamp(element: E, stamper: Stamper): void
  /** Controlled source per volt between the inputs at s = j·omega. With one pole as in every analysis; with two the
   * second is the one that the part's phase margin implies. */
  gain(element: E, omega: number, poles: 1 | 2): Complex
  inputs(element: E): { p: string; m: string }
}

/** Everything that the analyses ask of one kind of element. `null` and empty lists say "none" aloud. */
export interface ElementKind<E> {
  /** First letter of the reference designator; null where any letter will do. */
  letter: string | null
  /** Nodes that carry its equations (supply pins of an amplifier do not). */
  nodes(element: E): string[]
  /** True where the current through it is an unknown of its own. */
  hasBranch: boolean
  /** Pairs of nodes between which it conducts at DC. */
  dcPaths(element: E, model: Model): [string, string][]
  stamp(element: E, stamper: Stamper): void
  ports: Partial<Record<PortName, PortStamp<E>>>
  /** Ω, F, V, A or gain; null where it has no single value. */
  value(element: E): number | null
  /** The two nodes and the conductance, S, by which it enters the equations as one term of rank one; null for others. */
  conductance(element: E): { a: string; b: string; value: number } | null
  /** The same element with another value; throws a RangeError in circuit terms where it cannot be. */
  withValue(element: E, value: number): E
  /** Message about a figure that is not acceptable; null if all are. */
  check(element: E): string | null
  loop: LoopOpening<E> | null
  /** Independent sources of noise at an absolute temperature, K. */
  noise(element: E, temperature: number): NoiseSource[]
  /** Lines of SPICE text, of the same nominal model. */
  toSpice(element: E): string[]
  symbol: SymbolName
}
