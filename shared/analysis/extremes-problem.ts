import { kindOf, stampPort } from '#shared/network/elements/index.ts'
import type { PortName, Stamper } from '#shared/network/elements/element-kind.ts'
import { GROUND } from '#shared/network/types.ts'
import type { Network } from '#shared/network/types.ts'
import type { ExtremesOutput, ExtremesRequest, SourceVariable } from './extremes.ts'
import type { UnknownIndex } from './system.ts'
import { assembleSystem, findBranch, findElement, findNode } from './system.ts'

/** A few entries of a vector. */
export interface Sparse {
  at: number[]
  weight: number[]
}

export interface BoxedResistor {
  ref: string
  /** Unknowns of its two nodes, -1 for ground. */
  a: number
  b: number
  nominal: number
  low: number
  high: number
}

/** A variable that has to be looked at on its own; `middle` and `half` describe its range. */
export interface CompiledVariable {
  id: string
  nominal: number
  middle: number
  half: number
  /** Largest |value − middle| in any case, its own range included. */
  reach: number
  /** Ports with their scales. */
  ports: Sparse
  /** Its weight in each output. */
  inOutput: Float64Array
  /** Per case the pinned value, NaN where it is free. */
  pinned: Float64Array
}

export interface CompiledCmrr {
  x: number
  reference: number
  /** Its offset among the ports. */
  port: number
  /** (v_p + v_m)/2, as weights of the unknowns. */
  mean: Sparse
}

/** The request as arrays of indices, so that the loop over the vertices does no look-ups. */
export interface Problem {
  network: Network
  index: UnknownIndex
  request: ExtremesRequest
  size: number
  cases: number
  /** Equations without the boxed resistors, row-major. */
  matrix: Float64Array
  resistors: BoxedResistor[]
  /** Right-hand side with every variable at nominal, and with every variable at the middle of its range. */
  nominalSource: Float64Array
  middleSource: Float64Array
  /** Right-hand-side vector of one unit at each port. */
  ports: Sparse[]
  /** Half-ranges of variables of one port that are free in every case and in no output, summed per port. */
  portHalf: Float64Array
  variables: CompiledVariable[]
  cmrr: CompiledCmrr[]
  /** Each output as weights of the unknowns. */
  outputs: Sparse[]
  /** Constant part with every variable at nominal, and at its middle. */
  nominalConstant: Float64Array
  middleConstant: Float64Array
  clip: CompiledVariable | null
  /** Value of the clip variable from which its range is counted, per case. */
  clipOrigin: Float64Array
  /** Per case the first one that holds all other variables alike: the clip range is the same and found there. */
  clipCase: Int32Array
}

export function compileExtremes(network: Network, request: ExtremesRequest): Problem {
  checkRequest(request)
  const boxed = request.resistors.filter(({ relative }) => relative > 0)
  const system = assembleSystem(network, {
    model: request.model,
    without: new Set(boxed.map(({ ref }) => ref)),
  })
  const { index } = system
  const ports = new PortList(index, request.model)
  const variables = request.variables.map((variable) => compileVariable(variable, request, ports))
  const middleSource = system.dc.slice()
  for (const variable of variables) {
    addPorts(middleSource, ports.list, variable.ports, variable.middle - variable.nominal)
  }
  const outputs = request.outputs.map((output) => compileOutput(output, index))
  const cmrr = request.cmrr
    .filter(({ x }) => x !== 0)
    .map(({ ref, x, reference }) => ({
      x: Math.abs(x),
      reference,
      port: ports.find(ref, 'vos'),
      mean: compileMean(ref, index),
    }))
  const constants = (value: (variable: CompiledVariable) => number) =>
    Float64Array.from(request.outputs, (output, o) =>
      variables.reduce(
        (sum, variable) => sum + variable.inOutput[o]! * value(variable),
        output.constant ?? 0,
      ),
    )
  const clip = request.clip ? (variables.find(({ id }) => id === request.clip?.variable) ?? null) : null
  const portHalf = new Float64Array(ports.list.length)
  const special = variables.filter((variable) => {
    if (variable === clip || variable.inOutput.some((weight) => weight !== 0)) return true
    if (variable.pinned.some((value) => !Number.isNaN(value))) return true
    if (variable.ports.at.length > 1) return variable.half > 0
    variable.ports.at.forEach((port, i) => {
      portHalf[port]! += Math.abs(variable.ports.weight[i]!) * variable.half
    })
    return false
  })
  return {
    network,
    index,
    request,
    size: index.size,
    cases: request.cases.length,
    matrix: system.constant,
    resistors: boxed.map(({ ref, relative }) => compileResistor(ref, relative, index)),
    nominalSource: system.dc,
    middleSource,
    ports: ports.list,
    portHalf,
    variables: special,
    cmrr,
    outputs,
    nominalConstant: constants(({ nominal }) => nominal),
    middleConstant: constants(({ middle }) => middle),
    clip,
    clipOrigin: Float64Array.from(request.cases, (_, c) => {
      const pinned = clip?.pinned[c] ?? NaN
      return Number.isNaN(pinned) ? (clip?.middle ?? 0) : pinned
    }),
    clipCase: Int32Array.from(request.cases, (held) =>
      request.cases.findIndex((other) => heldAlike(held.pinned, other.pinned, clip?.id)),
    ),
  }
}

/** True where two cases pin the same variables at the same values, `besides` left aside. */
function heldAlike(
  a: Record<string, number>,
  b: Record<string, number>,
  besides: string | undefined,
): boolean {
  const ids = new Set([...Object.keys(a), ...Object.keys(b)])
  return [...ids].every((id) => id === besides || a[id] === b[id])
}

/** Adds `amount` at every port of a variable to a right-hand side. */
export function addPorts(
  right: Float64Array,
  ports: readonly Sparse[],
  through: Sparse,
  amount: number,
): void {
  if (amount === 0) return
  through.at.forEach((port, i) => {
    const { at, weight } = ports[port]!
    at.forEach((row, j) => {
      right[row]! += amount * through.weight[i]! * weight[j]!
    })
  })
}

/** Size of the clip variable's usual range: distances along it are weighed against this. */
export function clipSpan({ clip }: Problem): number {
  return clip ? clip.reach || Math.abs(clip.middle) || 1 : 1
}

/** The places at which variables enter, each once. */
class PortList {
  readonly list: Sparse[] = []
  private readonly known = new Map<string, number>()
  private readonly index: UnknownIndex
  private readonly model: ExtremesRequest['model']

  constructor(index: UnknownIndex, model: ExtremesRequest['model']) {
    this.index = index
    this.model = model
  }

  find(ref: string, port: PortName): number {
    const key = `${ref} ${port}`
    const known = this.known.get(key)
    if (known !== undefined) return known
    const column: Sparse = { at: [], weight: [] }
    const stamper: Stamper = {
      model: this.model,
      node: (name) => findNode(this.index, name),
      branch: (branch) => findBranch(this.index, branch),
      add: () => {
        throw new RangeError(`${ref}: only sources and error sources can be variables of the bounds`)
      },
      addSource: (row, value) => {
        if (row < 0) return
        column.at.push(row)
        column.weight.push(value)
      },
    }
    stampPort(findElement(this.index, ref), port, stamper)
    this.known.set(key, this.list.length)
    return this.list.push(column) - 1
  }
}

function compileVariable(
  variable: SourceVariable,
  request: ExtremesRequest,
  ports: PortList,
): CompiledVariable {
  const middle = (variable.low + variable.high) / 2
  const half = (variable.high - variable.low) / 2
  const through: Sparse = { at: [], weight: [] }
  for (const { ref, port, scale } of variable.injections) {
    const at = ports.find(ref, port)
    const known = through.at.indexOf(at)
    if (known >= 0) through.weight[known]! += scale
    else {
      through.at.push(at)
      through.weight.push(scale)
    }
  }
  const pinned = Float64Array.from(request.cases, (held) => held.pinned[variable.id] ?? NaN)
  return {
    id: variable.id,
    nominal: variable.nominal,
    middle,
    half,
    reach: pinned.reduce(
      (most, value) => (Number.isNaN(value) ? most : Math.max(most, Math.abs(value - middle))),
      half,
    ),
    ports: through,
    inOutput: Float64Array.from(request.outputs, (output) => output.variables?.[variable.id] ?? 0),
    pinned,
  }
}

function compileResistor(ref: string, relative: number, index: UnknownIndex): BoxedResistor {
  const element = findElement(index, ref)
  const term = kindOf(element).conductance(element)
  if (!term) throw new RangeError(`${ref} is no resistor: it cannot have a resistor's tolerance`)
  if (!(relative < 1)) throw new RangeError(`${ref} has a tolerance of ${relative}; it has to be below 1`)
  return {
    ref,
    a: findNode(index, term.a),
    b: findNode(index, term.b),
    nominal: term.value,
    low: term.value / (1 + relative),
    high: term.value / (1 - relative),
  }
}

function compileOutput(output: ExtremesOutput, index: UnknownIndex): Sparse {
  const sparse: Sparse = { at: [], weight: [] }
  for (const [node, weight] of Object.entries(output.nodes)) {
    if (node !== GROUND && weight !== 0) addTerm(sparse, findNode(index, node), weight)
  }
  for (const [ref, weight] of Object.entries(output.currents ?? {})) {
    if (weight !== 0) addTerm(sparse, findBranch(index, ref), weight)
  }
  return sparse
}

function compileMean(ref: string, index: UnknownIndex): Sparse {
  const element = findElement(index, ref)
  const { loop } = kindOf(element)
  if (!loop) throw new RangeError(`${ref} is no amplifier: it has no common-mode rejection`)
  const { p, m } = loop.inputs(element)
  const sparse: Sparse = { at: [], weight: [] }
  for (const node of [p, m]) if (node !== GROUND) addTerm(sparse, findNode(index, node), 0.5)
  return sparse
}

function addTerm(sparse: Sparse, at: number, weight: number): void {
  sparse.at.push(at)
  sparse.weight.push(weight)
}

function checkRequest({ variables, outputs, cases, clip }: ExtremesRequest): void {
  const ids = new Set(variables.map(({ id }) => id))
  if (ids.size !== variables.length) throw new RangeError('Two variables of the bounds share an id')
  for (const { id, nominal, low, high } of variables) {
    if (![nominal, low, high].every(Number.isFinite) || low > high) {
      throw new RangeError(
        `Variable ${id} runs from ${low} to ${high}; it needs a finite range, low end first`,
      )
    }
  }
  const asked = [
    ...outputs.flatMap((output) => Object.keys(output.variables ?? {})),
    ...cases.flatMap((held) => Object.keys(held.pinned)),
    ...(clip ? [clip.variable] : []),
  ]
  for (const id of asked) if (!ids.has(id)) throw new RangeError(`There is no variable ${id}`)
}
