import { describe, expect, it } from 'vitest'
import { findCrossing } from '#shared/numerics/crossing.ts'
import { expectClose } from '#tests/support/expect-close.ts'

describe('the place where a function changes its sign', () => {
  it.each([
    ['√2', (x: number) => x * x - 2, 0, 2, Math.SQRT2],
    ['π', Math.sin, 3, 4, Math.PI],
    ['a falling function', (x: number) => 1 - Math.exp(x), -3, 1, 0],
    ['a flat end', (x: number) => x ** 9 - 1e-9, 0, 5, 0.1],
    ['a step', (x: number) => (x < 0.3 ? -1 : 1), 0, 1, 0.3],
  ])('is found for %s', (_, f, low, high, root) => {
    expectClose(findCrossing(f, low, high), root, { relative: 1e-11, absolute: 1e-12 })
  })

  it('takes few turns where the function is smooth', () => {
    let turns = 0
    findCrossing((x) => (turns++, Math.log(x) - 1), 1, 10)
    expect(turns).toBeLessThan(16)
  })
})
