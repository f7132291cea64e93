import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { factorComplexLu, solveComplexLu, solveTransposedComplexLu } from '#shared/numerics/complex-lu.ts'
import { factorLu, invertLu, nullVector, solveLu, solveTransposedLu } from '#shared/numerics/lu.ts'
import { expectClose } from '#tests/support/expect-close.ts'

/** A matrix whose diagonal outweighs its rows: regular and well conditioned, whatever the entries; rows shuffled so that
 * pivots have to be found. */
const regular = fc.integer({ min: 1, max: 9 }).chain((size) =>
  fc.record({
    size: fc.constant(size),
    entries: fc.array(fc.double({ min: -1, max: 1, noNaN: true }), {
      minLength: size * size,
      maxLength: size * size,
    }),
    shift: fc.integer({ min: 0, max: size - 1 }),
    right: fc.array(fc.double({ min: -9, max: 9, noNaN: true }), { minLength: size, maxLength: size }),
  }),
)

function buildMatrix(size: number, entries: number[], shift: number): Float64Array {
  const matrix = new Float64Array(size * size)
  for (let i = 0; i < size; i++) {
    for (let j = 0; j < size; j++) {
      matrix[((i + shift) % size) * size + j] = entries[i * size + j]! + (i === j ? size + 1 : 0)
    }
  }
  return matrix
}

const times = (a: Float64Array, x: Float64Array, size: number, transposed = false) =>
  Float64Array.from({ length: size }, (_, i) =>
    x.reduce((sum, value, j) => sum + (transposed ? a[j * size + i]! : a[i * size + j]!) * value, 0),
  )

describe('LU factorisation', () => {
  it('solves A x = b and Aᵀ y = b with the same factors', () => {
    fc.assert(
      fc.property(regular, ({ size, entries, shift, right }) => {
        const a = buildMatrix(size, entries, shift)
        const b = Float64Array.from(right)
        const lu = factorLu(a, size)
        times(a, solveLu(lu, b), size).forEach((value, i) => expectClose(value, b[i]!, { absolute: 1e-12 }))
        times(a, solveTransposedLu(lu, b), size, true).forEach((value, i) =>
          expectClose(value, b[i]!, { absolute: 1e-12 }),
        )
      }),
    )
  })

  it('inverts: A⁻¹·A is the unit matrix', () => {
    fc.assert(
      fc.property(regular, ({ size, entries, shift }) => {
        const a = buildMatrix(size, entries, shift)
        const inverse = invertLu(factorLu(a, size))
        for (let j = 0; j < size; j++) {
          const column = Float64Array.from({ length: size }, (_, i) => a[i * size + j]!)
          times(inverse, column, size).forEach((value, i) =>
            expectClose(value, i === j ? 1 : 0, { absolute: 1e-12 }),
          )
        }
      }),
    )
  })

  it('leaves the matrix as it was', () => {
    const a = Float64Array.from([0, 2, 3, 4])
    factorLu(a, 2)
    expect([...a]).toEqual([0, 2, 3, 4])
  })

  it.each([
    ['a diagonal', [2, 0, 0, 3], 1],
    ['one swap of rows', [0, 2, 3, 0], -1],
    ['a negative entry', [-2, 0, 0, 3], -1],
    ['a singular matrix', [1, 2, 2, 4], 0],
  ])('gives the sign of the determinant of %s', (_, entries, sign) => {
    expect(factorLu(Float64Array.from(entries), 2).sign).toBe(sign)
  })

  it('solves rows of conductances beside rows of plain ones', () => {
    // 1 V through 1 TΩ into 3 TΩ, with the source current as third unknown
    const [g1, g2] = [1e-12, 1 / 3e12]
    const a = Float64Array.from([g1, -g1, 1, -g1, g1 + g2, 0, 1, 0, 0])
    expectClose(solveLu(factorLu(a, 3), Float64Array.from([0, 0, 1]))[1]!, 0.75, { relative: 1e-14 })
  })

  it('says which unknowns a singular matrix leaves free', () => {
    const lu = factorLu(Float64Array.from([1, 0, 0, 0, 1, -2, 0, 2, -4]), 3)
    expect(lu.singularColumn).toBe(2)
    expect([...nullVector(lu)]).toEqual([0, 1, 0.5])
    expect(() => solveLu(lu, new Float64Array(3))).toThrow(RangeError)
  })
})

describe('complex LU factorisation', () => {
  it('solves A x = b and the plain transpose', () => {
    fc.assert(
      fc.property(regular, regular, (first, second) => {
        const { size } = first
        const re = buildMatrix(size, first.entries, first.shift)
        const im = Float64Array.from(
          { length: size * size },
          (_, i) => second.entries[i % second.entries.length]!,
        )
        const right = { re: Float64Array.from(first.right), im: new Float64Array(size) }
        const lu = factorComplexLu({ re, im }, size)
        for (const transposed of [false, true]) {
          const x = transposed ? solveTransposedComplexLu(lu, right) : solveComplexLu(lu, right)
          const realPart = times(re, x.re, size, transposed).map(
            (v, i) => v - times(im, x.im, size, transposed)[i]!,
          )
          const imaginary = times(re, x.im, size, transposed).map(
            (v, i) => v + times(im, x.re, size, transposed)[i]!,
          )
          realPart.forEach((value, i) => expectClose(value, right.re[i]!, { absolute: 1e-10 }))
          imaginary.forEach((value) => expectClose(value, 0, { absolute: 1e-10 }))
        }
      }),
    )
  })

  it('reports a singular matrix', () => {
    const zero = new Float64Array(4)
    const lu = factorComplexLu({ re: zero, im: Float64Array.from([1, 2, 2, 4]) }, 2)
    expect(lu.singularColumn).toBe(1)
    expect(() => solveComplexLu(lu, { re: new Float64Array(2), im: new Float64Array(2) })).toThrow(RangeError)
  })
})
