import { describe, expect, it } from 'vitest'
import { isInSeries, nearest, type SeriesName, seriesNames, standardValues } from '#shared/parts/series.ts'

const counts: Record<SeriesName, number> = {
  E3: 3,
  E6: 6,
  E12: 12,
  E24: 24,
  E48: 48,
  E96: 96,
  E192: 192,
  'E24+E96': 114,
}

describe('standard values of IEC 60063', () => {
  it.each(seriesNames)('has as many values in a decade as %s says', (series) => {
    expect(standardValues(series, 1000, 9999)).toHaveLength(counts[series])
  })

  it('rounds 10^(i/n) to three digits from E48 on, but for 9.20 in E192', () => {
    for (const [series, n] of [
      ['E48', 48],
      ['E96', 96],
      ['E192', 192],
    ] as const) {
      const formula = Array.from({ length: n }, (_, i) => Math.round(100 * 10 ** (i / n)))
      const listed = standardValues(series, 100, 999)
      const off = formula.flatMap((value, i) => (value === listed[i] ? [] : [[value, listed[i]]]))
      expect(off).toEqual(series === 'E192' ? [[919, 920]] : [])
    }
  })

  it('rounds 10^(i/24) to two digits for E24 but for its eight historical values', () => {
    const formula = Array.from({ length: 24 }, (_, i) => Math.round(10 * 10 ** (i / 24)))
    const listed = standardValues('E24', 10, 99)
    const off = formula.flatMap((value, i) => (value === listed[i] ? [] : [[value, listed[i]]]))
    expect(off).toEqual([
      [26, 27],
      [29, 30],
      [32, 33],
      [35, 36],
      [38, 39],
      [42, 43],
      [46, 47],
      [83, 82],
    ])
  })

  it('nests: each coarser series is every second value of the finer one', () => {
    const chains: [SeriesName, SeriesName, number][] = [
      ['E3', 'E6', 2],
      ['E6', 'E12', 2],
      ['E12', 'E24', 2],
      ['E48', 'E96', 2],
      ['E96', 'E192', 2],
    ]
    for (const [coarse, fine, step] of chains) {
      const every = standardValues(fine, 1000, 9999).filter((_, i) => i % step === 0)
      expect(standardValues(coarse, 1000, 9999)).toEqual(every)
    }
  })

  it('spans the default window of 1 kΩ to 1 MΩ with both ends', () => {
    const sizes = (['E24', 'E96', 'E192', 'E24+E96'] as const).map(
      (series) => standardValues(series, 1e3, 1e6).length,
    )
    expect(sizes).toEqual([73, 289, 577, 343])
    expect(standardValues('E96', 1e3, 1e6)[0]).toBe(1000)
    expect(standardValues('E96', 1e3, 1e6).at(-1)).toBe(1_000_000)
  })

  it('gives the double nearest to each decimal, for capacitors too', () => {
    expect(standardValues('E6', 4.7e-12, 6.8e-12)).toEqual([4.7e-12, 6.8e-12])
    expect(standardValues('E24', 4.7e3, 4.7e3)).toEqual([4700])
    expect(standardValues('E192', 0.0101, 0.0102)).toEqual([0.0101, 0.0102])
  })

  it('ascends, without a value twice, in the union of E24 and E96', () => {
    const values = standardValues('E24+E96', 1e3, 1e5)
    expect(values.every((value, i) => i === 0 || value > (values[i - 1] as number))).toBe(true)
    expect(values).toContain(4700)
    expect(values).toContain(4750)
  })

  it('gives the same frozen list for the same request', () => {
    const values = standardValues('E12', 1e3, 1e6)
    expect(standardValues('E12', 1e3, 1e6)).toBe(values)
    expect(Object.isFrozen(values)).toBe(true)
  })

  it('is empty where the window holds no value of the series', () => {
    expect(standardValues('E3', 1.1e3, 2.1e3)).toEqual([])
  })

  it.each([
    [0, 10],
    [10, 5],
    [1, Infinity],
    [NaN, 5],
  ])('refuses a window from %s to %s', (minimum, maximum) => {
    expect(() => standardValues('E24', minimum, maximum)).toThrow(RangeError)
  })
})

describe('membership', () => {
  it('knows the values of a series in every decade and no others', () => {
    expect([4.7e-12, 4.7, 4700, 1e6, 9.1e5, 0.1].map((value) => isInSeries(value, 'E24'))).toEqual(
      Array.from({ length: 6 }, () => true),
    )
    expect([4750, 0, -4700, Infinity, NaN, 4701].map((value) => isInSeries(value, 'E24'))).toEqual(
      Array.from({ length: 6 }, () => false),
    )
    expect(isInSeries(9200, 'E192')).toBe(true)
    expect(isInSeries(9190, 'E192')).toBe(false)
  })

  it('agrees with the list of every series over six decades', () => {
    for (const series of seriesNames) {
      const listed = new Set(standardValues(series, 1, 1e6))
      for (const value of standardValues('E192', 1, 1e6).concat(standardValues('E24', 1, 1e6)))
        expect(isInSeries(value, series)).toBe(listed.has(value))
    }
  })
})

describe('nearest value', () => {
  it.each([
    ['E24', 1234, 1200, 1200],
    ['E96', 1234, 1240, 1240],
    ['E192', 1234, 1230, 1230],
    ['E96', 10_000, 10_000, 10_000],
    ['E24', 98_000, 100_000, 100_000],
    ['E12', 5000, 4700, 4700],
    ['E96', 995, 1000, 1000],
    ['E192', 9195, 9200, 9200],
    ['E48', 4700, 4640, 4640],
    ['E96', 4700, 4750, 4750],
    ['E6', 2700, 2200, 3300],
    ['E3', 3400, 2200, 4700],
  ] as const)('of %s to %s is %s by difference and %s by ratio', (series, value, linear, ratio) => {
    expect(nearest(value, series, 'difference')).toBe(linear)
    expect(nearest(value, series)).toBe(ratio)
  })

  it('refuses what is not a finite number above 0', () => {
    for (const value of [0, -1, NaN, Infinity]) expect(() => nearest(value, 'E24')).toThrow(RangeError)
  })
})
