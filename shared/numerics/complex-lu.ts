/**
 * Dense complex LU factorisation with scaled partial pivoting; real and imaginary parts in two flat row-major
 * Float64Arrays. The same method as `lu.ts`.
 */
export interface ComplexVector {
  re: Float64Array
  im: Float64Array
}

export interface ComplexLu {
  size: number
  re: Float64Array
  im: Float64Array
  order: Int32Array
  /** Column in which no pivot was found; -1 for a regular matrix. */
  singularColumn: number
}

const SMALLEST_PIVOT = 1e-14

/** Factors the matrix re + j·im (size × size, left unchanged). A singular matrix is reported, not thrown. */
export function factorComplexLu(matrix: ComplexVector, size: number): ComplexLu {
  const re = matrix.re.slice()
  const im = matrix.im.slice()
  const order = new Int32Array(size)
  const scale = new Float64Array(size)
  /** Columns in which the pivot row has an entry: most of a circuit's are empty and change nothing. */
  const filled = new Int32Array(size)
  for (let i = 0; i < size; i++) {
    order[i] = i
    let largest = 0
    for (let j = i * size; j < (i + 1) * size; j++) {
      largest = Math.max(largest, Math.abs(re[j]!) + Math.abs(im[j]!))
    }
    scale[i] = largest === 0 ? 1 : 1 / largest
  }
  for (let k = 0; k < size; k++) {
    let best = k
    let bestWeight = 0
    for (let i = k; i < size; i++) {
      const weight = (Math.abs(re[i * size + k]!) + Math.abs(im[i * size + k]!)) * scale[i]!
      if (weight > bestWeight) {
        bestWeight = weight
        best = i
      }
    }
    if (!(bestWeight > SMALLEST_PIVOT)) return { size, re, im, order, singularColumn: k }
    if (best !== k) {
      swap(order, best, k)
      swap(scale, best, k)
      for (let j = 0; j < size; j++) {
        swap(re, best * size + j, k * size + j)
        swap(im, best * size + j, k * size + j)
      }
    }
    const pivotRow = k * size
    const pivotRe = re[pivotRow + k]!
    const pivotIm = im[pivotRow + k]!
    const pivotSquare = pivotRe * pivotRe + pivotIm * pivotIm
    let count = 0
    for (let j = k + 1; j < size; j++)
      if (re[pivotRow + j]! !== 0 || im[pivotRow + j]! !== 0) filled[count++] = j
    for (let i = k + 1; i < size; i++) {
      const row = i * size
      const entryRe = re[row + k]!
      const entryIm = im[row + k]!
      if (entryRe === 0 && entryIm === 0) continue
      const factorRe = (entryRe * pivotRe + entryIm * pivotIm) / pivotSquare
      const factorIm = (entryIm * pivotRe - entryRe * pivotIm) / pivotSquare
      re[row + k] = factorRe
      im[row + k] = factorIm
      for (let n = 0; n < count; n++) {
        const j = filled[n]!
        const r = re[pivotRow + j]!
        const m = im[pivotRow + j]!
        re[row + j]! -= factorRe * r - factorIm * m
        im[row + j]! -= factorRe * m + factorIm * r
      }
    }
  }
  return { size, re, im, order, singularColumn: -1 }
}

/** Solves A x = b. */
export function solveComplexLu(lu: ComplexLu, right: ComplexVector): ComplexVector {
  requireRegular(lu)
  const { size, order } = lu
  const x = { re: new Float64Array(size), im: new Float64Array(size) }
  for (let i = 0; i < size; i++) {
    x.re[i] = right.re[order[i]!]!
    x.im[i] = right.im[order[i]!]!
    subtractProducts(lu, i * size, 1, x, i, 0, i)
  }
  for (let i = size - 1; i >= 0; i--) {
    subtractProducts(lu, i * size, 1, x, i, i + 1, size)
    divideEntry(x, i, lu.re[i * size + i]!, lu.im[i * size + i]!)
  }
  return x
}

/** Solves Aᵀ y = c (plain transpose, no conjugate) with the factors of A. */
export function solveTransposedComplexLu(lu: ComplexLu, right: ComplexVector): ComplexVector {
  requireRegular(lu)
  const { size, order } = lu
  const w = { re: right.re.slice(), im: right.im.slice() }
  for (let i = 0; i < size; i++) {
    subtractProducts(lu, i, size, w, i, 0, i)
    divideEntry(w, i, lu.re[i * size + i]!, lu.im[i * size + i]!)
  }
  for (let i = size - 1; i >= 0; i--) subtractProducts(lu, i, size, w, i, i + 1, size)
  const y = { re: new Float64Array(size), im: new Float64Array(size) }
  for (let i = 0; i < size; i++) {
    y.re[order[i]!] = w.re[i]!
    y.im[order[i]!] = w.im[i]!
  }
  return y
}

/** x[at] −= Σ factor(start + j·stride)·x[j] for j from..to. */
function subtractProducts(
  lu: ComplexLu,
  start: number,
  stride: number,
  x: ComplexVector,
  at: number,
  from: number,
  to: number,
): void {
  let sumRe = x.re[at]!
  let sumIm = x.im[at]!
  for (let j = from; j < to; j++) {
    const factorRe = lu.re[start + j * stride]!
    const factorIm = lu.im[start + j * stride]!
    sumRe -= factorRe * x.re[j]! - factorIm * x.im[j]!
    sumIm -= factorRe * x.im[j]! + factorIm * x.re[j]!
  }
  x.re[at] = sumRe
  x.im[at] = sumIm
}

function divideEntry(x: ComplexVector, at: number, re: number, im: number): void {
  const square = re * re + im * im
  const valueRe = x.re[at]!
  const valueIm = x.im[at]!
  x.re[at] = (valueRe * re + valueIm * im) / square
  x.im[at] = (valueIm * re - valueRe * im) / square
}

function swap(array: Float64Array | Int32Array, first: number, second: number): void {
  const value = array[first]!
  array[first] = array[second]!
  array[second] = value
}

function requireRegular(lu: ComplexLu): void {
  if (lu.singularColumn >= 0) throw new RangeError(`The matrix is singular at column ${lu.singularColumn}`)
}
