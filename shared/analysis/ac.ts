import { CircuitError } from '#shared/network/circuit-error.ts'
import { kindOf } from '#shared/network/elements/index.ts'
import type { Model } from '#shared/network/elements/element-kind.ts'
import { GROUND } from '#shared/network/types.ts'
import type { Network } from '#shared/network/types.ts'
import type { Complex } from '#shared/numerics/complex.ts'
import { complex, multiplyComplex, subtractComplex } from '#shared/numerics/complex.ts'
import type { ComplexLu, ComplexVector } from '#shared/numerics/complex-lu.ts'
import { factorComplexLu, solveComplexLu } from '#shared/numerics/complex-lu.ts'
import type { System, UnknownIndex, ValueSet } from './system.ts'
import { assembleSystem, findBranch, findElement, findNode, outputVector } from './system.ts'
import { prepareTransfers, type RightSide } from './transfer.ts'

/** Phasors at one frequency, for the `ac` amplitudes of the sources. */
export class AcSolution {
  private readonly index: UnknownIndex
  private readonly unknowns: ComplexVector
  /** V(output.p) − V(output.n), V. */
  readonly output: Complex

  constructor(network: Network, index: UnknownIndex, unknowns: ComplexVector) {
    this.index = index
    this.unknowns = unknowns
    this.output = this.between(network.output.p, network.output.n)
  }

  /** V */
  voltage(node: string): Complex {
    return node === GROUND ? complex(0) : this.at(findNode(this.index, node))
  }

  /** V */
  between(p: string, n: string): Complex {
    return subtractComplex(this.voltage(p), this.voltage(n))
  }

  /** A, with the directions of `DcSolution.current`. */
  current(ref: string): Complex {
    return this.at(findBranch(this.index, ref))
  }

  private at(index: number): Complex {
    return complex(this.unknowns.re[index]!, this.unknowns.im[index]!)
  }
}

export interface AcOptions {
  model: Model
  set?: ValueSet | undefined
}

/** Response to the `ac` amplitudes of the sources at `frequency` (Hz, 0 or more). */
export function solveAc(network: Network, frequency: number, { model, set }: AcOptions): AcSolution {
  return solveAt(network, assembleSystem(network, { model, set }), frequency)
}

/** Output phasor over frequency (Hz), real amplifiers unless said otherwise; the equations are written once. */
export function prepareResponse(
  network: Network,
  { model, set }: AcOptions = { model: 'real' },
): (frequency: number) => Complex {
  const system = assembleSystem(network, { model, set })
  const transfer = prepareTransfers(system, outputVector(system.index, network.output), [
    entriesOf(system.ac),
  ])
  return (frequency) => firstOf(transfer(frequency))
}

const firstOf = ({ re, im }: ComplexVector): Complex => complex(re[0]!, im[0]!)

const entriesOf = (right: Float64Array): RightSide =>
  [...right.keys()].flatMap((row) => (right[row] === 0 ? [] : [{ row, value: right[row]! }]))

/** Output phasor at each frequency (Hz). */
export function computeResponse(
  network: Network,
  frequencies: readonly number[],
  options: AcOptions = { model: 'real' },
): Complex[] {
  return frequencies.map(prepareResponse(network, options))
}

export interface LoopOptions {
  set?: ValueSet
  /** 2: the opened amplifier has the second pole that its phase margin implies; the others keep one. */
  poles?: 1 | 2
}

/**
 * Loop gain of an amplifier over frequency (Hz; 0 for DC): the return ratio of its controlled source with the real
 * network around it, T = −A(f)·(v_p − v_m) for 1 V at that source. A positive real part at DC is negative feedback.
 * Source: Bode, Network Analysis and Feedback Amplifier Design, chapter 4. The equations are written once.
 */
export function openLoop(
  network: Network,
  ref: string,
  { set, poles = 1 }: LoopOptions = {},
): (frequency: number) => Complex {
  const system = assembleSystem(network, { model: 'real', opened: ref, set })
  const element = findElement(system.index, ref)
  const { loop } = kindOf(element)
  if (!loop) throw new RangeError(`${ref} is no amplifier: it has no loop gain`)
  const { p, m } = loop.inputs(element)
  const between = outputVector(system.index, { p: m, n: p })
  const transfer = prepareTransfers(system, between, [entriesOf(system.ac)])
  return (frequency) =>
    multiplyComplex(loop.gain(element, 2 * Math.PI * frequency, poles), firstOf(transfer(frequency)))
}

/** The loop gain at one frequency, Hz. */
export function computeLoopGain(
  network: Network,
  ref: string,
  frequency: number,
  options: LoopOptions = {},
): Complex {
  return openLoop(network, ref, options)(frequency)
}

/** False where the feedback around an amplifier is positive at DC: its two inputs are swapped. */
export function feedbackIsNegative(network: Network, ref: string): boolean {
  return computeLoopGain(network, ref, 0).re > 0
}

/** Factors constant + j·2πf·reactive; a CircuitError where it is singular. */
export function factorAt(system: System, frequency: number): ComplexLu {
  if (!(frequency >= 0) || !Number.isFinite(frequency)) {
    throw new RangeError(`A frequency of ${frequency} Hz; it has to be finite, 0 or more`)
  }
  const { index, constant, reactive } = system
  const omega = 2 * Math.PI * frequency
  const lu = factorComplexLu({ re: constant, im: reactive.map((value) => omega * value) }, index.size)
  if (lu.singularColumn >= 0) {
    const name = [...index.nodes, ...index.branches][lu.singularColumn] ?? ''
    throw new CircuitError('not-determined', name, `${name} is not determined at ${frequency} Hz`)
  }
  return lu
}

function solveAt(network: Network, system: System, frequency: number): AcSolution {
  const { index, ac } = system
  const solution = solveComplexLu(factorAt(system, frequency), { re: ac, im: new Float64Array(index.size) })
  return new AcSolution(network, index, solution)
}
