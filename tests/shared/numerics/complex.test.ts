import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import {
  addComplex,
  complex,
  divideComplex,
  magnitude,
  multiplyComplex,
  phase,
  subtractComplex,
} from '#shared/numerics/complex.ts'
import { expectClose } from '#tests/support/expect-close.ts'

const part = fc.double({ min: -1e6, max: 1e6, noNaN: true })
const number = fc.record({ re: part, im: part })
const divisor = number.filter((value) => magnitude(value) > 1e-3)

describe('complex numbers', () => {
  it('divide and multiply undo each other', () => {
    fc.assert(
      fc.property(number, divisor, (a, b) => {
        const back = multiplyComplex(divideComplex(a, b), b)
        expectClose(magnitude(subtractComplex(back, a)), 0, { absolute: 1e-12 * (1 + magnitude(a)) })
      }),
    )
  })

  it('add and subtract undo each other', () => {
    const sum = addComplex(complex(1, 2), complex(3, -5))
    expect(sum).toEqual({ re: 4, im: -3 })
    expect(subtractComplex(sum, complex(3, -5))).toEqual({ re: 1, im: 2 })
  })

  it('divide numbers whose squares would overflow', () => {
    expect(divideComplex(complex(1e300, 1e300), complex(1e300, 1e300))).toEqual({ re: 1, im: 0 })
  })

  it('have magnitude and phase', () => {
    expect(magnitude(complex(3, 4))).toBe(5)
    expectClose(phase(complex(0, -2)), -Math.PI / 2, { relative: 1e-15 })
  })
})
