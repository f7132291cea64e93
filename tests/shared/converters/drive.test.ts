import { describe, expect, it } from 'vitest'
import {
  averageCurrent,
  chargeShare,
  largestSource,
  timeConstants,
  timeConstantsForBits,
} from '#shared/converters/drive.ts'
import { expectClose } from '#tests/support/expect-close.ts'

describe('charging a sampling capacitor', () => {
  it('takes no time where the step is smaller than the criterion', () => {
    expect(timeConstants(0.7)).toBe(0)
    expect(timeConstants(1)).toBe(0)
  })

  it('takes one more halving for each bit and each halving of the criterion', () => {
    expectClose(timeConstantsForBits(13, 0.5) - timeConstantsForBits(12, 0.5), Math.LN2, { relative: 1e-12 })
    expectClose(timeConstantsForBits(12, 0.25) - timeConstantsForBits(12, 0.5), Math.LN2, { relative: 1e-12 })
  })

  it('shares nothing without a sampling capacitor and all without a reservoir', () => {
    expect(chargeShare(0, 0)).toBe(0)
    expect(chargeShare(1e-11, 0)).toBe(1)
  })

  it('leaves nothing for the source where the switch alone is too slow', () => {
    expect(largestSource(1e-7, 1000, 1e-10, 10)).toBe(0)
  })

  it('draws capacitance times voltage times rate', () => {
    expectClose(averageCurrent(6e-11, 5, 1e5), 3e-5, { relative: 1e-12 })
  })
})
