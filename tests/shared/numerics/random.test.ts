import { describe, expect, it } from 'vitest'
import { createStreams, RandomStream } from '#shared/numerics/random.ts'

const COUNT = 200_000

function drawn(fill: (stream: RandomStream, target: Float64Array) => void, seed = 5): Float64Array {
  const target = new Float64Array(COUNT)
  const [stream] = createStreams(seed, 1)
  if (stream) fill(stream, target)
  return target
}

const mean = (values: Float64Array, of: (value: number) => number) =>
  values.reduce((sum, value) => sum + of(value), 0) / values.length

/** Phi(3) and phi(3) of the normal distribution, tables of Abramowitz and Stegun 26.1. */
const PHI_AT_3 = 0.99865010196837
const DENSITY_AT_3 = 0.004431848411938

describe('RandomStream', () => {
  it('gives the published numbers of xoshiro128** 1.1 from the state 1, 2, 3, 4', () => {
    // Reference implementation of the authors, as kept in the tests of the Rust crate rand_xoshiro.
    const stream = new RandomStream([1, 2, 3, 4])
    expect(Array.from({ length: 10 }, () => stream.next())).toEqual([
      11520, 0, 5927040, 70819200, 2031721883, 1637235492, 1287239034, 3734860849, 3729100597, 4258142804,
    ])
  })

  it('jumps to the published state', () => {
    // Made with the reference implementation in C, as kept in the tests of a port to another processor.
    const seed = [0x964d4a0c, 0xd40ab895, 0xad7fdecb, 0x3006f0f0] as const
    const there = [0x2a6dd50d, 0x01177499, 0xd7eb7d01, 0xddc48284] as const
    const jumped = new RandomStream(seed).jumped()
    const direct = new RandomStream(there)
    expect(Array.from({ length: 8 }, () => jumped.next())).toEqual(
      Array.from({ length: 8 }, () => direct.next()),
    )
  })

  it('fills the same numbers however a stream is cut', () => {
    for (const fill of ['fillRectangular', 'fillNormal'] as const) {
      const [whole] = createStreams(9, 1)
      const [parts] = createStreams(9, 1)
      const [a, b] = [new Float64Array(100), new Float64Array(100)]
      whole?.[fill](a, 0, 100, 3)
      for (const [start, count] of [
        [0, 7],
        [7, 63],
        [70, 30],
      ] as const)
        parts?.[fill](b, start, count, 3)
      expect([...b]).toEqual([...a])
      expect(new Set(a).size).toBe(100)
    }
  })

  it('spreads rectangular numbers evenly over ±1, the ends excluded', () => {
    const values = drawn((stream, target) => stream.fillRectangular(target, 0, COUNT))
    const error = 5 / Math.sqrt(COUNT)
    expect(Math.abs(mean(values, (v) => v))).toBeLessThan(error * Math.sqrt(1 / 3))
    expect(Math.abs(mean(values, (v) => v * v) - 1 / 3)).toBeLessThan(error * Math.sqrt(4 / 45))
    expect(values.every((v) => Math.abs(v) < 1)).toBe(true)
    for (const limit of [-0.9, -0.25, 0, 0.5, 0.99])
      expect(Math.abs(mean(values, (v) => (v < limit ? 1 : 0)) - (limit + 1) / 2)).toBeLessThan(error / 2)
  })

  it('cuts normal numbers at the limit, with the variance of the cut distribution', () => {
    const values = drawn((stream, target) => stream.fillNormal(target, 0, COUNT, 3))
    // 1 − 2·c·phi(c)/(2·Phi(c) − 1), closed form
    const variance = (1 - (6 * DENSITY_AT_3) / (2 * PHI_AT_3 - 1)) / 9
    const error = 5 / Math.sqrt(COUNT)
    expect(Math.abs(mean(values, (v) => v))).toBeLessThan(error / 3)
    expect(Math.abs(mean(values, (v) => v * v) - variance)).toBeLessThan(error * Math.SQRT2 * variance)
    expect(values.every((v) => Math.abs(v) < 1)).toBe(true)
  })

  it('gives normal numbers their tabulated distribution', () => {
    const values = drawn((stream, target) => stream.fillNormal(target, 0, COUNT, 3))
    // Abramowitz and Stegun, table 26.1: Phi at 0.5, 1, 2 and 2.5
    const table = [
      [0.5, 0.691462461],
      [1, 0.841344746],
      [2, 0.977249868],
      [2.5, 0.993790335],
    ] as const
    for (const [x, phi] of table) {
      const expected = (phi - (1 - PHI_AT_3)) / (2 * PHI_AT_3 - 1)
      const error = 5 * Math.sqrt((expected * (1 - expected)) / COUNT)
      expect(Math.abs(mean(values, (v) => (v < x / 3 ? 1 : 0)) - expected)).toBeLessThan(error)
      expect(Math.abs(mean(values, (v) => (v < -x / 3 ? 1 : 0)) - (1 - expected))).toBeLessThan(error)
    }
  })

  it('takes its limit at another number of standard deviations, and refuses one that makes no sense', () => {
    const values = drawn((stream, target) => stream.fillNormal(target, 0, COUNT, 1.5))
    // phi(1.5) = 0.129517596, Phi(1.5) = 0.933192799
    const variance = (1 - (3 * 0.129517596) / (2 * 0.933192799 - 1)) / 1.5 ** 2
    expect(Math.abs(mean(values, (v) => v * v) - variance)).toBeLessThan((5 * variance) / Math.sqrt(COUNT))
    const [stream] = createStreams(1, 1)
    for (const wrong of [0, -1, 6, NaN])
      expect(() => stream?.fillNormal(new Float64Array(1), 0, 1, wrong)).toThrow(RangeError)
  })
})

describe('createStreams', () => {
  it('gives streams that are not correlated, nor with those of the next seed', () => {
    const streams = [...createStreams(1, 5), ...createStreams(2, 5), ...createStreams(0, 2)]
    const values = streams.map((stream) => {
      const target = new Float64Array(20_000)
      stream.fillRectangular(target, 0, target.length)
      return target
    })
    values.forEach((a, i) =>
      values.slice(0, i).forEach((b) => {
        const product = a.reduce((sum, value, k) => sum + value * (b[k] ?? 0), 0) / a.length
        expect(Math.abs(product)).toBeLessThan((5 * (1 / 3)) / Math.sqrt(a.length))
      }),
    )
  })
})
