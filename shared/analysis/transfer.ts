import { CircuitError } from '#shared/network/circuit-error.ts'
import type { ComplexVector } from '#shared/numerics/complex-lu.ts'
import { factorComplexLu, solveTransposedComplexLu } from '#shared/numerics/complex-lu.ts'
import type { System } from './system.ts'

/*
 * Transfer from several right sides to one output over many frequencies. Most unknowns of a circuit have no memory:
 * an unknown in whose column nothing is reactive, by an equation in which nothing is, leaves the system once for all,
 *
 *   x_c = (z_r − Σ m_rj·x_j)/m_rc,
 *
 * and each frequency then costs one small factorisation and one adjoint solve, whatever the number of right sides.
 */

/** A right side by its entries: row of the system and value. */
export type RightSide = readonly { row: number; value: number }[]

/** Smallest entry, as a part of the largest in its row, by which an unknown may leave. */
const SMALLEST_PIVOT = 0.01

/**
 * Prepares output/right side at s = j·2πf. `output` picks the output from the unknowns. The answer holds one phasor per
 * right side; it throws a CircuitError where the network has no single answer at that frequency (Hz, 0 or more).
 */
export function prepareTransfers(
  system: System,
  output: Float64Array,
  rightSides: readonly RightSide[],
): (frequency: number) => ComplexVector {
  const { size } = system.index
  const left = reduce({
    size,
    matrix: system.constant.slice(),
    rows: [...Array(size).keys()],
    columns: [...Array(size).keys()],
    pick: output.slice(),
    sides: rightSides.map((side) => expand(side, size)),
    direct: new Float64Array(rightSides.length),
    reactive: system.reactive,
  })
  const { rows, columns, direct } = left
  const count = rows.length
  const take = (from: Float64Array) =>
    Float64Array.from({ length: count * count }, (_, k) => {
      const [row, column] = [rows[Math.floor(k / count)]!, columns[k % count]!]
      return from[row * size + column]!
    })
  const constant = take(left.matrix)
  const slope = take(system.reactive)
  const pick = { re: Float64Array.from(columns, (j) => left.pick[j]!), im: new Float64Array(count) }
  const sides = left.sides.map((side) => Float64Array.from(rows, (i) => side[i]!))
  return (frequency) => {
    if (!(frequency >= 0) || !Number.isFinite(frequency))
      throw new RangeError(`A frequency of ${frequency} Hz; it has to be finite, 0 or more`)
    const omega = 2 * Math.PI * frequency
    const lu = factorComplexLu({ re: constant, im: slope.map((value) => omega * value) }, count)
    if (lu.singularColumn >= 0) throw notDetermined(system, columns[lu.singularColumn] ?? -1, frequency)
    const y = solveTransposedComplexLu(lu, pick)
    const re = direct.slice()
    const im = new Float64Array(direct.length)
    sides.forEach((side, k) => {
      for (let i = 0; i < count; i++) {
        const value = side[i]!
        if (value === 0) continue
        re[k]! += value * y.re[i]!
        im[k]! += value * y.im[i]!
      }
    })
    return { re, im }
  }
}

interface Reduction {
  size: number
  /** Constant part; of what has left nothing is read again. */
  matrix: Float64Array
  /** Equations and unknowns that are still there. */
  rows: number[]
  columns: number[]
  pick: Float64Array
  sides: Float64Array[]
  /** What the unknowns that have left give at the output by themselves. */
  direct: Float64Array
  reactive: Float64Array
}

function expand(side: RightSide, size: number): Float64Array {
  const full = new Float64Array(size)
  for (const { row, value } of side) if (row >= 0) full[row]! += value
  return full
}

function reduce(start: Reduction): Reduction {
  const { size, reactive } = start
  const every = [...Array(size).keys()]
  const freeRows = new Set(every.filter((i) => every.every((j) => reactive[i * size + j] === 0)))
  const freeColumns = new Set(every.filter((j) => every.every((i) => reactive[i * size + j] === 0)))
  let state = start
  for (;;) {
    const pivot = findPivot(state, freeRows, freeColumns)
    if (!pivot) return state
    freeRows.delete(pivot.row)
    freeColumns.delete(pivot.column)
    state = leave(state, pivot.row, pivot.column)
  }
}

/** The entry that is largest against its row, among equations and unknowns without memory. */
function findPivot(
  { matrix, size, columns }: Reduction,
  freeRows: ReadonlySet<number>,
  freeColumns: ReadonlySet<number>,
): { row: number; column: number } | null {
  let best: { row: number; column: number } | null = null
  let bestWeight = SMALLEST_PIVOT
  for (const row of freeRows) {
    let largest = 0
    for (const j of columns) largest = Math.max(largest, Math.abs(matrix[row * size + j]!))
    for (const column of freeColumns) {
      const weight = Math.abs(matrix[row * size + column]!) / largest
      if (weight > bestWeight) {
        bestWeight = weight
        best = { row, column }
      }
    }
    if (bestWeight === 1) break
  }
  return best
}

/** Solves one equation for one unknown and puts it into all others; changes the arrays in place. */
function leave(state: Reduction, row: number, column: number): Reduction {
  const { matrix, size, pick, sides, direct } = state
  const pivot = matrix[row * size + column]!
  const rows = state.rows.filter((i) => i !== row)
  const columns = state.columns.filter((j) => j !== column)
  for (const i of rows) {
    const entry = matrix[i * size + column]!
    if (entry === 0) continue
    const factor = entry / pivot
    for (const j of columns) matrix[i * size + j]! -= factor * matrix[row * size + j]!
    for (const side of sides) side[i]! -= factor * side[row]!
  }
  const share = pick[column]! / pivot
  if (share !== 0) {
    for (const j of columns) pick[j]! -= share * matrix[row * size + j]!
    sides.forEach((side, k) => {
      direct[k]! += share * side[row]!
    })
  }
  return { ...state, rows, columns }
}

function notDetermined({ index }: System, unknown: number, frequency: number): CircuitError {
  const name = [...index.nodes, ...index.branches][unknown] ?? ''
  return new CircuitError('not-determined', name, `${name} is not determined at ${frequency} Hz`)
}
