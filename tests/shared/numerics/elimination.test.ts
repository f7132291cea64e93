import { describe, expect, it } from 'vitest'
import { planElimination, type Elimination } from '#shared/numerics/elimination.ts'
import { factorLu, solveLu } from '#shared/numerics/lu.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { createRandom } from '#tests/support/random.ts'

/** Runs a plan on one matrix. */
function follow(plan: Elimination, matrix: Float64Array, right: Float64Array): Float64Array {
  const { size, steps } = plan
  const entries = new Float64Array(plan.slots)
  for (let at = 0; at < matrix.length; at++) {
    const slot = plan.slotOf(Math.floor(at / size), at % size)
    if (slot >= 0) entries[slot] = matrix[at]!
  }
  const b = right.slice()
  for (const { row, pivot, rows } of steps)
    for (const other of rows) {
      const ratio = entries[other.factor]! / entries[pivot]!
      for (let n = 0; n < other.pairs.length; n += 2)
        entries[other.pairs[n + 1]!]! -= ratio * entries[other.pairs[n]!]!
      b[other.row]! -= ratio * b[row]!
    }
  const x = new Float64Array(size)
  for (const { row, column, pivot, rest } of [...steps].reverse())
    x[column] =
      rest.reduce((sum, { column: c, slot }) => sum - entries[slot]! * x[c]!, b[row]!) / entries[pivot]!
  return x
}

const patternOf = (matrix: Float64Array) => Uint8Array.from(matrix, (value) => (value === 0 ? 0 : 1))

function sparse(size: number, seed: number): Float64Array {
  const random = createRandom(seed)
  return Float64Array.from({ length: size * size }, (_, at) => {
    const diagonal = Math.floor(at / size) === at % size
    return diagonal || random() < 0.25 ? (random() - 0.5) * 10 ** (4 * random() - 2) : 0
  })
}

describe('planElimination', () => {
  it.each([1, 2, 3, 4, 5, 6])(
    'solves a sparse matrix as dense elimination with pivoting does, %i',
    (seed) => {
      const size = 3 + 3 * seed
      const matrix = sparse(size, seed)
      const right = Float64Array.from({ length: size }, (_, i) => Math.sin(i + seed))
      const plan = planElimination(matrix, patternOf(matrix), size, 0)
      const lu = factorLu(matrix, size)
      expect(lu.sign).not.toBe(0)
      const expected = solveLu(lu, right)
      const largest = expected.reduce((most, value) => Math.max(most, Math.abs(value)), 0)
      if (!plan) throw new Error('no plan')
      follow(plan, matrix, right).forEach((value, i) =>
        expectClose(value, expected[i] ?? NaN, { absolute: 1e-9 * largest }),
      )
    },
  )

  it('solves for the unknown that is asked for without any other', () => {
    const matrix = sparse(9, 4)
    const plan = planElimination(matrix, patternOf(matrix), 9, 5)
    expect(plan?.steps.at(-1)?.column).toBe(5)
    expect(plan?.steps.at(-1)?.rest).toEqual([])
  })

  it('fills nothing in where an order without fill exists', () => {
    // An arrow: eliminated from the wrong end it becomes full.
    const size = 8
    const matrix = Float64Array.from({ length: size * size }, (_, at) => {
      const [row, column] = [Math.floor(at / size), at % size]
      return row === column ? 4 : row === 0 || column === 0 ? 1 : 0
    })
    const entries = matrix.filter((value) => value !== 0).length
    expect(planElimination(matrix, patternOf(matrix), size, 0)?.slots).toBe(entries)
  })

  it('takes entries of the pattern that happen to be zero on the nominal matrix, but not as pivots', () => {
    const nominal = Float64Array.of(0, 2, 3, 1)
    const plan = planElimination(nominal, new Uint8Array(4).fill(1), 2, 1)
    if (!plan) throw new Error('no plan')
    const x = follow(plan, Float64Array.of(0.5, 2, 3, 1), Float64Array.of(4.5, 5))
    expectClose(x[0] ?? NaN, 1, { relative: 1e-14 })
    expectClose(x[1] ?? NaN, 2, { relative: 1e-14 })
  })

  it('says so when the nominal matrix is singular', () => {
    expect(planElimination(Float64Array.of(1, 2, 2, 4), new Uint8Array(4).fill(1), 2, 0)).toBeNull()
    expect(planElimination(new Float64Array(4), new Uint8Array(4), 2, 0)).toBeNull()
  })
})
