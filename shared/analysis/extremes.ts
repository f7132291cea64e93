import type { Model, PortName } from '#shared/network/elements/element-kind.ts'
import type { Network } from '#shared/network/types.ts'
import type { ClipEnds } from './clip-range.ts'
import { climbVertices } from './extremes-climb.ts'
import { createBounds, createEvaluator } from './extremes-evaluate.ts'
import type { Problem } from './extremes-problem.ts'
import { compileExtremes } from './extremes-problem.ts'
import { nominalOutputs } from './extremes-nominal.ts'
import { groupByReach } from './extremes-reach.ts'
import { startVertexWalk, walkVertices } from './vertex-walk.ts'

/*
 * Exact bounds of node voltages over independent boxes.
 *
 * Each resistor enters the equations as a term of rank one, so that with the others fixed every voltage is
 * (a + b·g)/(c + d·g) in its conductance: monotone, unless the denominator vanishes in the box. The extreme over the
 * box therefore lies at a vertex, and all vertices are visited. Sources enter linearly: at one vertex their extreme is
 * Σ c·middle ± Σ |c|·half, without enumeration. The determinant is multi-linear in the conductances: one sign at all
 * vertices proves that no pole lies inside.
 */

/** An uncertain or swept source. The deviation (value − nominal)·scale is added at each injection; the network holds
 * every variable at its nominal. */
export interface SourceVariable {
  id: string
  nominal: number
  low: number
  high: number
  injections: { ref: string; port: Exclude<PortName, 'cmrr'>; scale: number }[]
}

/** A weighted sum of node voltages, branch currents (`DcSolution.current`) and variables: a pin, or a margin. */
export interface ExtremesOutput {
  id: string
  nodes: Record<string, number>
  currents?: Record<string, number>
  variables?: Record<string, number>
  constant?: number
}

export interface ExtremesCase {
  id: string
  /** Variables held at a value; the others take their whole range. */
  pinned: Record<string, number>
}

export interface ExtremesRequest {
  model: Model
  /** Resistors with their limits ±, as fractions below 1. */
  resistors: { ref: string; relative: number }[]
  variables: SourceVariable[]
  /** |x| = 1/CMRR of an amplifier and the common mode at which its offset is given, V. Taken as an offset of half-range
   * x·(|middle of v_cm − reference| + half of v_cm) at each vertex: an outer bound, off by second order in x. */
  cmrr: { ref: string; x: number; reference: number }[]
  outputs: ExtremesOutput[]
  cases: ExtremesCase[]
  /** Regards every output as a margin that must stay at or above 0 and finds the range of this variable over which
   * it does. */
  clip?: { variable: string }
}

/** Range of the clip variable (its own value) in which a margin stays at or above 0; null: no end on that side.
 * `empty`: the margin is below 0 somewhere at every value; the ends then are where each side would be met. */
export interface ClipRange {
  low: number | null
  high: number | null
  empty: boolean
}

export interface ExtremesEntry {
  /** All resistors and free variables at nominal, pinned ones as pinned. */
  nominal: number
  low: number
  high: number
  /** Over all boards; only with `clip`. */
  clip?: ClipRange
  nominalClip?: ClipRange
}

export interface ExtremesResult {
  /** Output id → case id → bounds. */
  outputs: Record<string, Record<string, ExtremesEntry>>
  /** Vertices visited. */
  vertices: number
  /** Toleranced resistors that reach some output. */
  resistors: number
  /** False where too many resistors reach a pin for all vertices to be visited: the best found is then shown. */
  proven: boolean
  /** False: the network passes through a pole inside the box, so that the bounds hold nothing. Refuse the design. */
  keepsSign: boolean
}

/** Above this number of resistors at one pin the vertices are searched instead of visited. */
export const MOST_RESISTORS = 20

/**
 * Bounds of each output in each case over every board (V or A, as the outputs are weighted). Throws a CircuitError for a
 * singular network and a RangeError for a request that names what the network does not have.
 */
export function computeExtremes(network: Network, request: ExtremesRequest): ExtremesResult {
  const problem = compileExtremes(network, request)
  const bounds = createBounds(problem)
  const nominal = nominalOutputs(problem)
  let vertices = 0
  let proven = true
  let keepsSign = true
  const reaching = new Set<number>()
  const { groups, slack } = groupByReach(problem)
  for (const group of groups) {
    for (const resistor of group.resistors) reaching.add(resistor)
    const walk = startVertexWalk(problem, group.resistors, group.outputs)
    const evaluate = createEvaluator(walk, bounds)
    const outcome =
      group.resistors.length <= MOST_RESISTORS
        ? walkVertices(walk, evaluate)
        : climbVertices(walk, bounds, evaluate)
    if (group.resistors.length > MOST_RESISTORS) proven = false
    vertices += outcome.vertices
    keepsSign &&= outcome.keepsSign
  }
  const outputs: ExtremesResult['outputs'] = {}
  request.outputs.forEach(({ id }, o) => {
    const entries: Record<string, ExtremesEntry> = {}
    request.cases.forEach((held, c) => {
      const at = o * request.cases.length + c
      const entry: ExtremesEntry = {
        nominal: nominal.values[at]!,
        low: bounds.low[at]! - slack[o]!,
        high: bounds.high[at]! + slack[o]!,
      }
      if (problem.clip) {
        entry.clip = toClipRange(problem, bounds, o, c)
        entry.nominalClip = toClipRange(problem, nominal, o, c)
      }
      entries[held.id] = entry
    })
    outputs[id] = entries
  })
  return { outputs, vertices, resistors: reaching.size, proven, keepsSign }
}

function toClipRange(problem: Problem, ends: ClipEnds, output: number, held: number): ClipRange {
  const found = problem.clipCase[held]!
  const at = output * problem.cases + found
  const origin = problem.clipOrigin[found]!
  const [low, high] = [ends.clipLow[at]!, ends.clipHigh[at]!]
  return {
    low: Number.isFinite(low) ? origin + low : null,
    high: Number.isFinite(high) ? origin + high : null,
    empty: ends.clipEmpty[at] === 1 || low > high,
  }
}
