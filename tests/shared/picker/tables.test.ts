import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { pairAllowed, pairTable, priceTable } from '#shared/amplifiers/picker/pair-table.ts'
import { placeOf, sortedIndex } from '#shared/amplifiers/picker/sorted-index.ts'
import { listCosts, toValueList } from '#shared/amplifiers/picker/value-list.ts'

const special = fc.constantFrom(0, Infinity)
const positive = fc.double({ min: 1e-3, max: 1e9, noNaN: true })
const values = fc.uniqueArray(
  fc.oneof({ weight: 9, arbitrary: positive }, { weight: 1, arbitrary: special }),
  {
    minLength: 1,
    maxLength: 60,
  },
)

describe('place in a sorted list', () => {
  it('is that of the first value not below the wanted one', () => {
    fc.assert(
      fc.property(values, fc.oneof(positive, special, fc.constantFrom(-5, NaN)), (list, wanted) => {
        const sorted = Float64Array.from(list).sort()
        const index = sortedIndex(sorted)
        for (const asked of [wanted, ...sorted]) {
          const first = Array.from(sorted).findIndex((value) => !(value < asked))
          expect(placeOf(index, asked)).toBe(first < 0 ? sorted.length : first)
        }
      }),
    )
  })
})

describe('table of ratios', () => {
  const series = fc.constantFrom(0, 0, 47, 1000)

  it('holds every pair once, by ascending ratio, the cheapest of each ratio first', () => {
    fc.assert(
      fc.property(values, values, series, series, (a, b, above, below) => {
        const [upper, lower] = [toValueList(a), toValueList(b)]
        const table = pairTable(upper, lower, above, below, null)
        const costs = [listCosts(upper, 10_000), listCosts(lower, 10_000)] as const
        priceTable(table, ...costs)
        const seen = new Set<string>()
        table.ratios.forEach((ratio, i) => {
          if (i > 0) expect(ratio).toBeGreaterThan(table.ratios[i - 1] as number)
          let last = -Infinity
          for (let j = table.starts[i] as number; j < (table.starts[i + 1] as number); j++) {
            const [u, l] = [table.upper[j] as number, table.lower[j] as number]
            const own = ((upper.values[u] as number) + above) / ((lower.values[l] as number) + below)
            expect(own === ratio || Math.abs(own / ratio - 1) < 1e-13).toBe(true)
            const cost = (costs[0][u] as number) + (costs[1][l] as number)
            expect(cost).toBeGreaterThanOrEqual(last)
            if (last === -Infinity) expect(table.least[i]).toBe(cost)
            last = cost
            seen.add(`${u} ${l}`)
          }
        })
        const meant = upper.values.length * lower.values.length
        const meaningless = [...upper.values].flatMap((x) =>
          [...lower.values].filter((y) => Number.isNaN((x + above) / (y + below))),
        )
        expect(seen.size).toBe(meant - meaningless.length)
        expect(table.upper).toHaveLength(seen.size)
      }),
    )
  })

  it('leaves out the pairs that a demand excludes', () => {
    const list = toValueList([1000, 2200, 4700, 10_000])
    const bounds = { minimumSum: 6000, minimumParallel: 1000, maximumParallel: 4000 }
    const table = pairTable(list, list, 0, 0, bounds)
    const kept = [...table.upper].map((u, j) => [list.values[u], list.values[table.lower[j] as number]])
    const wanted = [...list.values].flatMap((a) =>
      [...list.values]
        .filter((b) => a + b >= 6000 && (a * b) / (a + b) >= 1000 && (a * b) / (a + b) <= 4000)
        .map((b) => [a, b]),
    )
    expect(kept.length).toBeGreaterThan(3)
    expect(kept.sort()).toEqual(wanted.sort())
  })

  it('counts an open resistor as infinite and a link as nothing in a demand', () => {
    const bounds = { minimumSum: 5000, minimumParallel: 0, maximumParallel: 2000 }
    expect(pairAllowed(1000, Infinity, bounds)).toBe(true)
    expect(pairAllowed(3000, Infinity, bounds)).toBe(false)
    expect(pairAllowed(0, 5000, bounds)).toBe(true)
    expect(pairAllowed(0, 1000, bounds)).toBe(false)
  })
})
