import { factorLu, invertLu } from '#shared/numerics/lu.ts'
import type { BoxedResistor, Problem, Sparse } from './extremes-problem.ts'
import { acrossResistor, addConductance, combineRows } from './vertex-walk.ts'

/** Outputs that depend on the same resistors. */
export interface ReachGroup {
  outputs: number[]
  resistors: number[]
}

export interface Reach {
  groups: ReachGroup[]
  /** Per output what all resistors that its group does not move can do together, V (or A): widens its bounds. */
  slack: Float64Array
}

/** A resistor whose whole tolerance moves an output less is not moved for it; its effect is added to the bounds, V. */
const SLIGHT = 1e-9
/** Effects are taken at a few places of the box; where they are that small they hardly differ elsewhere in it. */
const SAFETY = 2

/** Places in the box at which reach is tested; several, since a matched pair has no effect at nominal alone. */
const TEST_POINTS = 4

/** Visits of one output that cost about as much as a walk of its own. */
const WALK_COST = 400

/**
 * Groups outputs by the resistors that reach them, so that each group visits only the vertices that matter to it: an
 * ideal amplifier's output hides what lies behind it. An effect is (output per ampere in the resistor's place) × (change
 * of conductance) × (largest voltage across it), looked at in several places of the box.
 */
export function groupByReach(problem: Problem): Reach {
  const { reaches, slack } = findReach(problem)
  const groups = new Map<string, ReachGroup>()
  reaches.forEach((reach, output) => {
    const resistors = [...reach].sort((first, second) => first - second)
    const key = resistors.join(' ')
    const group = groups.get(key) ?? { outputs: [], resistors }
    group.outputs.push(output)
    groups.set(key, group)
  })
  return { groups: mergeSmall([...groups.values()]), slack }
}

/** Joins a group with one that moves the same resistors and more where the extra visits cost less than its own walk. */
function mergeSmall(groups: ReachGroup[]): ReachGroup[] {
  const kept: ReachGroup[] = []
  for (const group of groups.sort((first, second) => second.resistors.length - first.resistors.length)) {
    const visits = (resistors: readonly number[]) => 2 ** resistors.length * group.outputs.length
    const host = kept.findLast(
      ({ resistors }) =>
        visits(resistors) - visits(group.resistors) <= WALK_COST &&
        group.resistors.every((resistor) => resistors.includes(resistor)),
    )
    if (host) host.outputs.push(...group.outputs)
    else kept.push(group)
  }
  return kept
}

/** Per output the resistors that reach it, and what the others can do to it. */
function findReach(problem: Problem): { reaches: Set<number>[]; slack: Float64Array } {
  const { outputs, cmrr, ports, resistors } = problem
  const count = resistors.length
  /** Largest effect of each resistor, output by output, then common mode by common mode. */
  const effects = new Float64Array((outputs.length + cmrr.length) * count)
  /** Largest response of each output to the offset of each amplifier. */
  const feels = new Float64Array(outputs.length * cmrr.length)
  for (let point = 0; point < TEST_POINTS; point++) {
    const inverse = invertAt(problem, point)
    if (!inverse) continue
    const strength = resistors.map(
      (resistor) => (resistor.high - resistor.low) * largestVoltage(problem, inverse, resistor),
    )
    const mark = (weights: Sparse, row: number): Float64Array => {
      const response = combineRows(problem, weights, inverse)
      resistors.forEach(({ a, b }, i) => {
        const transfer = (a < 0 ? 0 : response[a]!) - (b < 0 ? 0 : response[b]!)
        const effect = Math.abs(transfer) * strength[i]!
        if (effect > effects[row * count + i]!) effects[row * count + i] = effect
      })
      return response
    }
    cmrr.forEach(({ mean }, k) => mark(mean, outputs.length + k))
    outputs.forEach((output, o) => {
      const response = mark(output, o)
      cmrr.forEach(({ port }, k) => {
        const felt = Math.abs(respond(response, ports[port]!))
        if (felt > feels[o * cmrr.length + k]!) feels[o * cmrr.length + k] = felt
      })
    })
  }
  // a common-mode error carries what moves the common mode to every output that feels the amplifier's offset
  outputs.forEach((_, o) =>
    cmrr.forEach(({ x }, k) => {
      const weight = feels[o * cmrr.length + k]! * x
      for (let i = 0; i < count; i++)
        effects[o * count + i]! += weight * effects[(outputs.length + k) * count + i]!
    }),
  )
  const slack = new Float64Array(outputs.length)
  const reaches = outputs.map((_, o) => {
    const reach = new Set<number>()
    for (let i = 0; i < count; i++) {
      const effect = effects[o * count + i]!
      if (effect > SLIGHT) reach.add(i)
      else slack[o]! += SAFETY * effect
    }
    return reach
  })
  return { reaches, slack }
}

function invertAt(problem: Problem, point: number): Float64Array | null {
  const matrix = problem.matrix.slice()
  problem.resistors.forEach((resistor, i) => {
    // irrational steps: no two resistors keep a round ratio at any of the points
    const place = point === 0 ? 0.5 : ((i + 1) * point * 0.6180339887498949) % 1
    addConductance(matrix, problem.size, resistor, resistor.low + place * (resistor.high - resistor.low))
  })
  const lu = factorLu(matrix, problem.size)
  return lu.sign === 0 ? null : invertLu(lu)
}

const respond = (response: Float64Array, { at, weight }: Sparse): number =>
  at.reduce((sum, i, k) => sum + weight[k]! * response[i]!, 0)

/** Largest voltage that the sources put across a resistor at this place of the box, V. */
function largestVoltage(problem: Problem, inverse: Float64Array, resistor: BoxedResistor): number {
  const { ports, variables, portHalf, cmrr, middleSource } = problem
  const row = acrossResistor(problem, resistor, inverse)
  let sum = Math.abs(middleSource.reduce((total, value, j) => total + value * row[j]!, 0))
  ports.forEach((port, p) => {
    sum += Math.abs(respond(row, port)) * portHalf[p]!
  })
  for (const { ports: through, reach } of variables) {
    sum +=
      Math.abs(through.at.reduce((total, p, k) => total + through.weight[k]! * respond(row, ports[p]!), 0)) *
      reach
  }
  // a common-mode error counts as the offset that a common mode of 100 V would make
  for (const { port, x } of cmrr) sum += Math.abs(respond(row, ports[port]!)) * x * 100
  return sum
}
