import type { Lu } from '#shared/numerics/lu.ts'
import { factorLu, invertLu } from '#shared/numerics/lu.ts'
import type { BoxedResistor, Problem, Sparse } from './extremes-problem.ts'
import { explainSingular } from './system.ts'

/**
 * Responses at one vertex of the box, moved from vertex to vertex. Rows: the chosen outputs, the common modes, then
 * the moving resistors (voltage across each). Columns: all variables in the middle of their ranges, one unit of each
 * variable, of each port, and one ampere through each moving resistor's place.
 */
export interface VertexWalk {
  problem: Problem
  /** Outputs of the request that stand in the first rows. */
  outputs: readonly number[]
  /** Resistors that move; the others stay at nominal. */
  moving: BoxedResistor[]
  /** 1 where the moving resistor has its larger conductance. */
  state: Uint8Array
  rows: number
  columns: number
  firstMean: number
  firstResistorRow: number
  firstPort: number
  firstResistorColumn: number
  table: Float64Array
  /** Sign of the determinant at the first vertex. */
  sign: number
}

export interface WalkOutcome {
  vertices: number
  keepsSign: boolean
}

/** Rank-one updates between two fresh solutions: keeps their rounding below 1e-13 V. */
const REFRESH = 256

/** A walk at the vertex of all smaller conductances. Throws a CircuitError where the network is singular there. */
export function startVertexWalk(
  problem: Problem,
  resistors: readonly number[],
  outputs: readonly number[],
): VertexWalk {
  const moving = resistors.map((at) => problem.resistors[at]!)
  const firstResistorRow = outputs.length + problem.cmrr.length
  const firstPort = 1 + problem.variables.length
  const firstResistorColumn = firstPort + problem.ports.length
  const rows = firstResistorRow + moving.length
  const columns = firstResistorColumn + moving.length
  const walk: VertexWalk = {
    problem,
    outputs,
    moving,
    state: new Uint8Array(moving.length),
    rows,
    columns,
    firstMean: outputs.length,
    firstResistorRow,
    firstPort,
    firstResistorColumn,
    table: new Float64Array(rows * columns),
    sign: 0,
  }
  const lu = factorVertex(walk)
  if (lu.sign === 0) throw explainSingular(problem.network, problem.request.model, lu)
  walk.sign = lu.sign
  fillTable(walk, invertLu(lu))
  return walk
}

/** Solves the present vertex from its equations; returns the sign of the determinant, 0 where there is no solution. */
export function refreshWalk(walk: VertexWalk): number {
  const lu = factorVertex(walk)
  if (lu.sign !== 0) fillTable(walk, invertLu(lu))
  return lu.sign
}

/**
 * Visits all 2^n vertices in Gray-code order, one resistor changing at a time. Stops at the first change of the
 * determinant's sign.
 */
export function walkVertices(walk: VertexWalk, visit: () => void): WalkOutcome {
  const total = 2 ** walk.moving.length
  visit()
  for (let step = 1; step < total; step++) {
    // the bit that changes in a reflected Gray code is the lowest set bit of the step's number
    const flip = 31 - Math.clz32(step & -step)
    const { low, high } = walk.moving[flip]!
    const change = walk.state[flip] === 1 ? low - high : high - low
    walk.state[flip]! ^= 1
    const keepsSign =
      step % REFRESH === 0 ? refreshWalk(walk) === walk.sign : changeConductance(walk, flip, change)
    if (!keepsSign) return { vertices: step, keepsSign: false }
    visit()
  }
  return { vertices: total, keepsSign: true }
}

/**
 * Changes one conductance: with u the resistor's place, every response a·M⁻¹·b loses f·(a·M⁻¹u)(uᵀM⁻¹·b),
 * f = change/(1 + change·uᵀM⁻¹u). False where the determinant, which grows by that denominator, does not keep its sign.
 * Source: Sherman and Morrison, Annals of Mathematical Statistics 21 (1950).
 */
function changeConductance(walk: VertexWalk, resistor: number, change: number): boolean {
  const { table, rows, columns } = walk
  const own = (walk.firstResistorRow + resistor) * columns
  const column = walk.firstResistorColumn + resistor
  const denominator = 1 + change * table[own + column]!
  if (!(denominator > 1e-12)) return false
  const factor = change / denominator
  for (let row = 0, start = 0; row < rows; row++, start += columns) {
    const response = table[start + column]!
    if (response === 0 || start === own) continue
    const weight = factor * response
    for (let j = 0; j < columns; j++) table[start + j]! -= weight * table[own + j]!
  }
  // the resistor's own row last, since the others are made from it: 1 − f·uᵀM⁻¹u = 1/denominator
  for (let j = own; j < own + columns; j++) table[j]! /= denominator
  return true
}

function factorVertex({ problem, moving, state }: VertexWalk): Lu {
  const matrix = problem.matrix.slice()
  for (const resistor of problem.resistors) {
    const at = moving.indexOf(resistor)
    const conductance = at < 0 ? resistor.nominal : state[at] === 1 ? resistor.high : resistor.low
    addConductance(matrix, problem.size, resistor, conductance)
  }
  return factorLu(matrix, problem.size)
}

export function addConductance(
  matrix: Float64Array,
  size: number,
  { a, b }: BoxedResistor,
  conductance: number,
): void {
  if (a >= 0) matrix[a * size + a]! += conductance
  if (b >= 0) matrix[b * size + b]! += conductance
  if (a >= 0 && b >= 0) {
    matrix[a * size + b]! -= conductance
    matrix[b * size + a]! -= conductance
  }
}

function fillTable(walk: VertexWalk, inverse: Float64Array): void {
  const { problem, outputs, moving, columns, firstMean, firstResistorRow } = walk
  outputs.forEach((o, row) => {
    fillRow(walk, row, combineRows(problem, problem.outputs[o]!, inverse))
    walk.table[row * columns]! += problem.middleConstant[o]!
    problem.variables.forEach(({ inOutput }, v) => (walk.table[row * columns + 1 + v]! += inOutput[o]!))
  })
  problem.cmrr.forEach(({ mean, reference }, k) => {
    fillRow(walk, firstMean + k, combineRows(problem, mean, inverse))
    walk.table[(firstMean + k) * columns]! -= reference
  })
  moving.forEach((resistor, i) =>
    fillRow(walk, firstResistorRow + i, acrossResistor(problem, resistor, inverse)),
  )
}

/** Weighted sum of rows of the inverse. */
export function combineRows({ size }: Problem, { at, weight }: Sparse, inverse: Float64Array): Float64Array {
  const sum = new Float64Array(size)
  at.forEach((unknown, i) => {
    for (let j = 0; j < size; j++) sum[j]! += weight[i]! * inverse[unknown * size + j]!
  })
  return sum
}

/** Row of the inverse that gives the voltage across a resistor. */
export function acrossResistor(
  { size }: Problem,
  { a, b }: BoxedResistor,
  inverse: Float64Array,
): Float64Array {
  const row = new Float64Array(size)
  for (let j = 0; j < size; j++) {
    row[j] = (a < 0 ? 0 : inverse[a * size + j]!) - (b < 0 ? 0 : inverse[b * size + j]!)
  }
  return row
}

/** Responses of `response` (a row of the inverse) to every column. */
function fillRow(walk: VertexWalk, row: number, response: Float64Array): void {
  const { problem, table, columns, moving, firstPort, firstResistorColumn } = walk
  const start = row * columns
  let middle = 0
  for (let j = 0; j < problem.size; j++) middle += response[j]! * problem.middleSource[j]!
  table[start] = middle
  problem.ports.forEach(({ at, weight }, p) => {
    let sum = 0
    for (let i = 0; i < at.length; i++) sum += weight[i]! * response[at[i]!]!
    table[start + firstPort + p] = sum
  })
  problem.variables.forEach(({ ports: { at, weight } }, v) => {
    let sum = 0
    for (let i = 0; i < at.length; i++) sum += weight[i]! * table[start + firstPort + at[i]!]!
    table[start + 1 + v] = sum
  })
  moving.forEach(({ a, b }, i) => {
    table[start + firstResistorColumn + i] = (a < 0 ? 0 : response[a]!) - (b < 0 ? 0 : response[b]!)
  })
}
