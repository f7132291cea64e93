import { describe, expect, it } from 'vitest'
import { prepareExponential } from '#shared/numerics/exponential-steps.ts'
import { expectClose } from '#tests/support/expect-close.ts'

/** exp(−t·W⁻¹)·start after `count` shortest steps. */
function after(memory: number[][], start: number[], shortest: number, count: number): Float64Array {
  const size = memory.length
  const steps = prepareExponential(Float64Array.from(memory.flat()), size, shortest)
  let state = Float64Array.from(start)
  for (let level = 0, left = count; left > 0; level++, left = Math.floor(left / 2))
    if (left % 2 === 1) state = Float64Array.from(steps.advance(state, level))
  return state
}

describe('steps of an exponential', () => {
  it.each([1, 7, 100, 10_000])('decay as one time constant after %d steps', (count) => {
    const [value] = after([[2]], [1], 1e-3, count)
    expectClose(value!, Math.exp((-count * 1e-3) / 2), { relative: 1e-12 })
  })

  it('keep the digits of a motion that is a million million times slower than the step', () => {
    const [value] = after([[1]], [1], 1e-12, 2 ** 40)
    expectClose(value!, Math.exp(-(2 ** 40) * 1e-12), { relative: 1e-11 })
  })

  it('turn as an undamped pair', () => {
    // W⁻¹ = [[0, 1], [−1, 0]]
    const [cosine, sine] = after(
      [
        [0, -1],
        [1, 0],
      ],
      [1, 0],
      1e-2,
      700,
    )
    expectClose(cosine!, Math.cos(7), { absolute: 1e-11 })
    expectClose(Math.abs(sine!), Math.abs(Math.sin(7)), { absolute: 1e-11 })
  })

  it('of a double pole have the term in t', () => {
    // W⁻¹ = [[1, −1], [0, 1]] for W = [[1, 1], [0, 1]]: e^−t·(1, t)
    const [first] = after(
      [
        [1, 1],
        [0, 1],
      ],
      [0, 1],
      1e-2,
      300,
    )
    expectClose(first!, 3 * Math.exp(-3), { relative: 1e-10 })
  })

  it('leave nothing of what has no memory, and little of what is far too fast to follow', () => {
    const [none, fast, slow] = after(
      [
        [0, 0, 0],
        [0, 1e-9, 0],
        [0, 0, 1],
      ],
      [1, 1, 1],
      1e-3,
      64,
    )
    expect(none).toBe(0)
    expectClose(fast!, 0, { absolute: 1e-15 })
    expectClose(slow!, Math.exp(-0.064), { relative: 1e-12 })
  })
})
