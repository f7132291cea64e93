import { GROUND } from '#shared/network/types.ts'
import type { Network } from '#shared/network/types.ts'
import type { Model } from '#shared/network/elements/element-kind.ts'
import { factorLu, solveLu } from '#shared/numerics/lu.ts'
import type { Injection, UnknownIndex, ValueSet } from './system.ts'
import { assembleSystem, explainSingular, findBranch, findNode } from './system.ts'

export type { Injection, ValueSet } from './system.ts'

export interface DcOptions {
  model: Model
  /** Values to put in place of the network's own. */
  set?: ValueSet
  /** Error sources and changes of value to add. */
  extra?: readonly Injection[]
}

/** Node voltages and branch currents of one operating point. */
export class DcSolution {
  private readonly index: UnknownIndex
  private readonly unknowns: Float64Array
  /** V(output.p) − V(output.n), V. */
  readonly output: number

  constructor(network: Network, index: UnknownIndex, unknowns: Float64Array) {
    this.index = index
    this.unknowns = unknowns
    this.output = this.between(network.output.p, network.output.n)
  }

  /** Voltage of a node against ground, V. */
  voltage(node: string): number {
    return node === GROUND ? 0 : this.unknowns[findNode(this.index, node)]!
  }

  /** V(p) − V(n), V. */
  between(p: string, n: string): number {
    return this.voltage(p) - this.voltage(n)
  }

  /**
   * Current of a voltage source or controlled source, A: from p through the source to n, as in SPICE (a supply that
   * delivers shows a negative current). Of an amplifier: delivered into its output node.
   */
  current(ref: string): number {
    return this.unknowns[findBranch(this.index, ref)]!
  }

  /** Every node but ground → V. */
  get voltages(): Record<string, number> {
    return Object.fromEntries(this.index.nodes.map((node, at) => [node, this.unknowns[at]!]))
  }
}

/**
 * DC operating point. Throws a CircuitError that names the node or the sources where the circuit has no single
 * answer, and a RangeError for a value that no element can have.
 */
export function solveDc(network: Network, { model, set, extra }: DcOptions): DcSolution {
  const system = assembleSystem(network, { model, set, extra })
  const lu = factorLu(system.constant, system.index.size)
  if (lu.sign === 0) throw explainSingular(network, model, lu)
  return new DcSolution(network, system.index, solveLu(lu, system.dc))
}
