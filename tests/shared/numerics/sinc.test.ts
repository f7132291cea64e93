import { describe, expect, it } from 'vitest'
import { sincMagnitude, sincPower, type Sinc } from '#shared/numerics/sinc.ts'
import { expectClose } from '#tests/support/expect-close.ts'

const sinc = (order: number, ratio: number | null): Sinc => ({
  order,
  outputRate: 10,
  modulatorRate: ratio === null ? null : 10 * ratio,
})

/** The averager itself: its weights, convolved, and their Fourier sum. */
function weights(order: number, ratio: number): number[] {
  let found = [1]
  for (let k = 0; k < order; k++) {
    const next = new Array<number>(found.length + ratio - 1).fill(0)
    found.forEach((w, i) => {
      for (let j = 0; j < ratio; j++) next[i + j]! += w / ratio
    })
    found = next
  }
  return found
}

function fourier(taps: readonly number[], turns: number): number {
  const re = taps.reduce((sum, w, n) => sum + w * Math.cos(2 * Math.PI * turns * n), 0)
  const im = taps.reduce((sum, w, n) => sum + w * Math.sin(2 * Math.PI * turns * n), 0)
  return Math.hypot(re, im)
}

describe.each([1, 2, 3, 4])('an averager of order %d', (order) => {
  it('answers as its weights do', () => {
    const taps = weights(order, 16)
    for (const frequency of [0, 1, 4.43, 12, 37, 79, 120, 161])
      expectClose(sincMagnitude(sinc(order, 16), frequency), fourier(taps, frequency / 160), {
        absolute: 1e-12,
      })
  })

  it('has its nulls at the multiples of its output rate and passes the modulator rate', () => {
    expectClose(sincMagnitude(sinc(order, 64), 50), 0, { absolute: 1e-12 })
    expect(sincMagnitude(sinc(order, 64), 640)).toBe(1)
  })

  it('lets the power of white noise through that its weights give', () => {
    const [ratio, steps] = [64, 64 * 400]
    const sum = weights(order, ratio).reduce((total, w) => total + w * w, 0)
    const top = 10 * ratio
    let mean = 0
    for (let i = 0; i < steps; i++) mean += sincPower(sinc(order, ratio), ((i + 0.5) * top) / 2 / steps)
    expectClose(mean / steps, sum, { relative: 3e-3 })
    // an image above half the modulator rate has the same mean
    expectClose(sincPower(sinc(order, ratio), 7 * top), sum, { relative: 2e-3 })
  })

  it('is the limit of a fast modulator where none is stated', () => {
    for (const frequency of [3, 17, 42])
      expectClose(sincMagnitude(sinc(order, null), frequency), sincMagnitude(sinc(order, 1e5), frequency), {
        absolute: 1e-8,
      })
  })
})
