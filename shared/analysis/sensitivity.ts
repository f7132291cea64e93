import { kindOf, stampPort } from '#shared/network/elements/index.ts'
import type { Model, PortName, Stamper } from '#shared/network/elements/element-kind.ts'
import { portNames } from '#shared/network/elements/element-kind.ts'
import type { Network } from '#shared/network/types.ts'
import type { Complex } from '#shared/numerics/complex.ts'
import { complex } from '#shared/numerics/complex.ts'
import type { ComplexVector } from '#shared/numerics/complex-lu.ts'
import { solveComplexLu, solveTransposedComplexLu } from '#shared/numerics/complex-lu.ts'
import { factorLu, solveLu, solveTransposedLu } from '#shared/numerics/lu.ts'
import { factorAt } from './ac.ts'
import type { UnknownIndex, ValueSet } from './system.ts'
import { assembleSystem, explainSingular, findBranch, findNode, outputVector } from './system.ts'

/*
 * Adjoint network: with M x = z and Mᵀ y = c, c picking the output, the derivative of the output to any amount p is
 * yᵀ·(dz/dp − dM/dp·x). One extra solve serves every element. Source: Director and Rohrer, "The generalized adjoint
 * network and network sensitivities", IEEE Trans. Circuit Theory 16 (1969).
 */

export interface SensitivityOptions {
  model: Model
  set?: ValueSet
  /** Where the output is taken; absent: the network's own. */
  output?: { p: string; n: string }
  /** Common mode at which an amplifier's offset is given, V; absent: its part's own figure, or the
   * middle of its supply nodes (0 V where the network does not drive them). */
  references?: Readonly<Record<string, number>>
}

/** Derivative of the output to the amount at one port: V/Ω, V/V, V/A; for `cmrr` V per unit of 1/CMRR. */
export interface Sensitivity<Value = number> {
  ref: string
  port: PortName
  derivative: Value
}

/** One operating point with the derivatives of its output. */
export interface SensitivityPoint {
  /** V */
  output: number
  /** Voltage of a node against ground, V. */
  voltage(node: string): number
  sensitivities: Sensitivity[]
}

/** DC derivatives of the output to every element's value and every amplifier's error sources. */
export const computeSensitivities = (network: Network, options: SensitivityOptions): Sensitivity[] =>
  analyseSensitivities(network, options).sensitivities

/** The same with the operating point that they hold at. */
export function analyseSensitivities(network: Network, options: SensitivityOptions): SensitivityPoint {
  const { model, set } = options
  const system = assembleSystem(network, { model, set })
  const { index } = system
  const lu = factorLu(system.constant, index.size)
  if (lu.sign === 0) throw explainSingular(network, model, lu)
  const x = solveLu(lu, system.dc)
  const output = outputVector(index, options.output ?? network.output)
  const y = solveTransposedLu(lu, output)
  const voltage = (node: string) => {
    const at = index.nodeAt.get(node) ?? -1
    return at < 0 ? 0 : x[at]!
  }
  let derivative = 0
  const stamper: Stamper = {
    ...places(index, model),
    add(row, column, constant) {
      if (row >= 0 && column >= 0) derivative -= y[row]! * constant * x[column]!
    },
    addSource(row, dc) {
      if (row >= 0) derivative += y[row]! * dc
    },
  }
  const sensitivities = collect(network, options, stamper, voltage, () => {
    const found = derivative
    derivative = 0
    return found
  })
  return { output: output.reduce((sum, weight, at) => sum + weight * x[at]!, 0), voltage, sensitivities }
}

/** Derivatives of the output phasor at `frequency` (Hz) for the `ac` amplitudes of the sources. Only values have one:
 * error sources of amplifiers are direct voltages and currents. */
export function computeAcSensitivities(
  network: Network,
  frequency: number,
  options: SensitivityOptions,
): Sensitivity<Complex>[] {
  const { model, set } = options
  const system = assembleSystem(network, { model, set })
  const { index } = system
  const omega = 2 * Math.PI * frequency
  const lu = factorAt(system, frequency)
  const none = new Float64Array(index.size)
  const x = solveComplexLu(lu, { re: system.ac, im: none })
  const y = solveTransposedComplexLu(lu, {
    re: outputVector(index, options.output ?? network.output),
    im: none,
  })
  let derivative = complex(0)
  const stamper: Stamper = {
    ...places(index, model),
    add(row, column, constant, reactive = 0) {
      if (row < 0 || column < 0) return
      const product = multiplyEntries(y, row, x, column)
      const slope = omega * reactive
      derivative = complex(
        derivative.re - (product.re * constant - product.im * slope),
        derivative.im - (product.re * slope + product.im * constant),
      )
    },
    addSource(row, _dc, ac = 0) {
      if (row >= 0) derivative = complex(derivative.re + y.re[row]! * ac, derivative.im + y.im[row]! * ac)
    },
  }
  const found = collect(
    network,
    options,
    stamper,
    () => 0,
    () => {
      const value = derivative
      derivative = complex(0)
      return value
    },
  )
  return found.filter(({ port }) => port === 'value')
}

/** The derivative to one port; a RangeError where there is none. */
export function findSensitivity<Value>(
  sensitivities: readonly Sensitivity<Value>[],
  ref: string,
  port: PortName = 'value',
): Value {
  const found = sensitivities.find((entry) => entry.ref === ref && entry.port === port)
  if (!found) throw new RangeError(`There is no sensitivity to ${ref} ${port}`)
  return found.derivative
}

function collect<Value>(
  network: Network,
  { references }: SensitivityOptions,
  stamper: Stamper,
  voltage: (node: string) => number,
  take: () => Value,
): Sensitivity<Value>[] {
  const found: Sensitivity<Value>[] = []
  for (const element of network.elements) {
    const { ports } = kindOf(element)
    for (const port of portNames) {
      if (!ports[port]) continue
      stampPort(element, port, stamper, { reference: references?.[element.ref], voltage })
      found.push({ ref: element.ref, port, derivative: take() })
    }
  }
  return found
}

function places(index: UnknownIndex, model: Model): Pick<Stamper, 'model' | 'node' | 'branch'> {
  return { model, node: (name) => findNode(index, name), branch: (ref) => findBranch(index, ref) }
}

function multiplyEntries(a: ComplexVector, i: number, b: ComplexVector, j: number): Complex {
  return complex(a.re[i]! * b.re[j]! - a.im[i]! * b.im[j]!, a.re[i]! * b.im[j]! + a.im[i]! * b.re[j]!)
}
