/**
 * Dense LU factorisation with scaled partial pivoting on flat row-major Float64Arrays.
 *
 * Each row is compared relative to its largest entry: rows of a circuit mix conductances of 1e-12 S with plain ones,
 * and unscaled pivoting would call a high-impedance node singular.
 * Source: Golub and Van Loan, Matrix Computations, sections 3.4 and 3.5.
 */
export interface Lu {
  size: number
  /** Multipliers below the diagonal, U on and above it, rows in pivoted order. */
  factors: Float64Array
  /** Row of the original matrix that stands at each place. */
  order: Int32Array
  /** Sign of the determinant; 0 for a singular matrix. */
  sign: -1 | 0 | 1
  /** Column in which no pivot was found; -1 for a regular matrix. */
  singularColumn: number
}

/** A pivot smaller than this part of its row's largest entry counts as zero: it is rounding of a cancelled sum. */
const SMALLEST_PIVOT = 1e-14

/** Factors `matrix` (size × size, row-major, left unchanged). A singular matrix is reported, not thrown. */
export function factorLu(matrix: Float64Array, size: number): Lu {
  const a = matrix.slice()
  const order = new Int32Array(size)
  const scale = new Float64Array(size)
  for (let i = 0; i < size; i++) {
    order[i] = i
    let largest = 0
    for (let j = 0; j < size; j++) largest = Math.max(largest, Math.abs(a[i * size + j]!))
    scale[i] = largest === 0 ? 1 : 1 / largest
  }
  let sign = 1
  for (let k = 0; k < size; k++) {
    let best = k
    let bestWeight = 0
    for (let i = k; i < size; i++) {
      const weight = Math.abs(a[i * size + k]!) * scale[i]!
      if (weight > bestWeight) {
        bestWeight = weight
        best = i
      }
    }
    if (!(bestWeight > SMALLEST_PIVOT)) return { size, factors: a, order, sign: 0, singularColumn: k }
    if (best !== k) {
      swapRows(a, size, best, k)
      const row = order[best]!
      order[best] = order[k]!
      order[k] = row
      const weight = scale[best]!
      scale[best] = scale[k]!
      scale[k] = weight
      sign = -sign
    }
    const pivotRow = k * size
    const pivot = a[pivotRow + k]!
    if (pivot < 0) sign = -sign
    for (let i = k + 1; i < size; i++) {
      const row = i * size
      const entry = a[row + k]!
      if (entry === 0) continue
      const factor = entry / pivot
      a[row + k] = factor
      for (let j = k + 1; j < size; j++) a[row + j]! -= factor * a[pivotRow + j]!
    }
  }
  return { size, factors: a, order, sign: sign < 0 ? -1 : 1, singularColumn: -1 }
}

/** Solves A x = b. */
export function solveLu(lu: Lu, right: Float64Array): Float64Array {
  requireRegular(lu)
  const { size, factors, order } = lu
  const x = new Float64Array(size)
  for (let i = 0; i < size; i++) {
    let sum = right[order[i]!]!
    for (let j = 0; j < i; j++) sum -= factors[i * size + j]! * x[j]!
    x[i] = sum
  }
  for (let i = size - 1; i >= 0; i--) {
    let sum = x[i]!
    for (let j = i + 1; j < size; j++) sum -= factors[i * size + j]! * x[j]!
    x[i] = sum / factors[i * size + i]!
  }
  return x
}

/** Solves Aᵀ y = c with the factors of A. */
export function solveTransposedLu(lu: Lu, right: Float64Array): Float64Array {
  requireRegular(lu)
  const { size, factors, order } = lu
  const w = right.slice()
  for (let i = 0; i < size; i++) {
    let sum = w[i]!
    for (let j = 0; j < i; j++) sum -= factors[j * size + i]! * w[j]!
    w[i] = sum / factors[i * size + i]!
  }
  for (let i = size - 1; i >= 0; i--) {
    let sum = w[i]!
    for (let j = i + 1; j < size; j++) sum -= factors[j * size + i]! * w[j]!
    w[i] = sum
  }
  const y = new Float64Array(size)
  for (let i = 0; i < size; i++) y[order[i]!] = w[i]!
  return y
}

/** The inverse, row-major. */
export function invertLu(lu: Lu): Float64Array {
  requireRegular(lu)
  const { size, factors, order } = lu
  const inverse = new Float64Array(size * size)
  // rows of L⁻¹P, top down, then of U⁻¹L⁻¹P, bottom up: whole rows at a time keep the inner loops contiguous
  for (let i = 0; i < size; i++) {
    const row = i * size
    inverse[row + order[i]!] = 1
    for (let k = 0; k < i; k++) subtractRow(inverse, row, factors[row + k]!, k * size, size)
  }
  for (let i = size - 1; i >= 0; i--) {
    const row = i * size
    for (let k = i + 1; k < size; k++) subtractRow(inverse, row, factors[row + k]!, k * size, size)
    const pivot = factors[row + i]!
    for (let j = row; j < row + size; j++) inverse[j]! /= pivot
  }
  return inverse
}

function subtractRow(a: Float64Array, target: number, factor: number, source: number, size: number): void {
  if (factor === 0) return
  for (let j = 0; j < size; j++) a[target + j]! -= factor * a[source + j]!
}

/**
 * A vector that a singular matrix maps to zero (largest entry 1): its entries say which unknowns are not determined.
 * Takes the factors as far as they went, so that only columns up to `singularColumn` take part.
 */
export function nullVector(lu: Lu): Float64Array {
  const { size, factors, singularColumn } = lu
  const vector = new Float64Array(size)
  if (singularColumn < 0) return vector
  vector[singularColumn] = 1
  for (let i = singularColumn - 1; i >= 0; i--) {
    let sum = 0
    for (let j = i + 1; j <= singularColumn; j++) sum -= factors[i * size + j]! * vector[j]!
    vector[i] = sum / factors[i * size + i]!
  }
  const largest = vector.reduce((most, value) => Math.max(most, Math.abs(value)), 0)
  return vector.map((value) => value / largest)
}

function requireRegular(lu: Lu): void {
  if (lu.sign === 0) throw new RangeError(`The matrix is singular at column ${lu.singularColumn}`)
}

function swapRows(a: Float64Array, size: number, first: number, second: number): void {
  for (let j = 0; j < size; j++) {
    const value = a[first * size + j]!
    a[first * size + j] = a[second * size + j]!
    a[second * size + j] = value
  }
}
