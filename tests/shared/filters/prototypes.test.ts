import { describe, expect, it } from 'vitest'
import {
  cornerFor,
  MOST_POLES,
  prototypeSections,
  responses,
  sectionGain,
  sectionsGain,
  toDb,
} from '#shared/filters/prototypes.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { filterCase, filterCases } from '#tests/support/filter-cases.ts'

const orders = Array.from({ length: MOST_POLES }, (_, i) => i + 1)
const every = responses.flatMap((response) => orders.map((order) => [response, order] as const))

describe.each(every)('the %s prototype of order %i', (response, order) => {
  const sections = prototypeSections(response, order)

  it('has as many poles as its order, the real one first, then by rising Q', () => {
    expect(sections.reduce((n, { q }) => n + (q === null ? 1 : 2), 0)).toBe(order)
    expect(sections.filter(({ q }) => q === null).length).toBe(order % 2)
    const qs = sections.map(({ q }) => q ?? 0)
    expect(qs).toEqual([...qs].sort((a, b) => a - b))
  })

  it('is 1/√2 of its value at 0 Hz at the corner', () => {
    expectClose(sectionsGain(sections, 1), Math.SQRT1_2, { relative: 1e-9 })
  })

  it('falls by 6 dB an octave and pole far above', () => {
    expectClose(
      toDb(sectionsGain(sections, 2e6)) - toDb(sectionsGain(sections, 1e6)),
      order * 20 * Math.log10(2),
      {
        relative: 1e-6,
      },
    )
  })
})

describe('a Butterworth prototype', () => {
  it.each(orders)('of order %i has |H|² = 1/(1 + f^2n) everywhere', (order) => {
    for (const f of [0.1, 0.5, 0.9, 1.3, 4, 20])
      expectClose(
        sectionsGain(prototypeSections('butterworth', order), f),
        1 / Math.sqrt(1 + f ** (2 * order)),
        {
          relative: 1e-12,
        },
      )
  })
})

describe('a Chebyshev prototype', () => {
  const square = 10 ** 0.05 - 1
  // T_n by its recurrence, so that nothing is shared with the poles.
  const chebyshev = (n: number, x: number): number => {
    let [before, now] = [1, x]
    for (let k = 1; k < n; k++) [before, now] = [now, 2 * x * now - before]
    return n === 0 ? 1 : now
  }

  it.each(orders)('of order %i has |H|² = 1/(1 + ε²T²) against its value at 0 Hz', (order) => {
    const sections = prototypeSections('chebyshev', order)
    const power = (x: number) => 1 / (1 + square * chebyshev(order, x) ** 2)
    // Where that is half of its value at 0 Hz, found by halving.
    let [low, high] = [1, 4]
    for (let i = 0; i < 100; i++) {
      const middle = (low + high) / 2
      if (power(middle) > power(0) / 2) low = middle
      else high = middle
    }
    for (const f of [0.05, 0.3, 0.7, 0.95, 1.5, 5])
      expectClose(sectionsGain(sections, f) ** 2, power(f * low) / power(0), { relative: 1e-9 })
  })

  it('keeps its ripple of 0.5 dB in the pass band', () => {
    const sections = prototypeSections('chebyshev', 5)
    const levels = Array.from({ length: 900 }, (_, i) => toDb(sectionsGain(sections, i / 1000)))
    expectClose(Math.max(...levels), 0.5, { relative: 1e-4 })
    expect(Math.min(...levels)).toBeGreaterThan(-1e-9)
  })
})

describe('a Bessel prototype', () => {
  /** Group delay by a difference of the phase. */
  const delay = (order: number, f: number) => {
    const phase = (at: number) =>
      prototypeSections('bessel', order).reduce((sum, { f0, q }) => {
        const r = at / f0
        return sum - (q === null ? Math.atan(r) : Math.atan2(r / q, 1 - r * r))
      }, 0)
    return -(phase(f + 1e-5) - phase(f - 1e-5)) / 2e-5
  }

  it.each(orders.slice(1))('of order %i is maximally flat in delay', (order) => {
    // Delay 1 − c·f^2n near 0: an octave lower the deviation is 2^2n times smaller.
    const deviation = (f: number) => 1 - delay(order, f) / delay(order, 1e-3)
    const ratio = Math.log2(deviation(0.6) / deviation(0.3)) / 2
    expect(ratio).toBeGreaterThan(order - 0.6)
  })
})

const tables = filterCases.filter(({ word }) => ['butterworth', 'bessel'].includes(word('type')))

it('has seven tables to be checked against', () => {
  expect(tables.length).toBe(7)
})

describe.each(tables)('$name', (table) => {
  const response = table.word('type') === 'bessel' ? 'bessel' : 'butterworth'
  const sections = prototypeSections(response, table.given('order'))
  const found: Record<string, number[]> = {
    a: sections.map(({ f0, q }) => (q === null ? 1 / f0 : 1 / (f0 * q))),
    b: sections.map(({ f0, q }) => (q === null ? 0 : 1 / f0 ** 2)),
    k: sections.map((s) => ownCorner(s.f0, s.q)),
    Q: sections.flatMap((s) => (s.q === null ? [] : [s.q])),
    f0_over_fc: sections.map((s) => s.f0),
  }

  it.each(table.exactKeys())('has %s at full precision', (key) => {
    const expected = table.exactList(key)
    expect(found[key]?.length).toBe(expected.length)
    expected.forEach((value, i) =>
      expectClose(found[key]?.[i] ?? NaN, value, { relative: 2e-8, absolute: 1e-9 }),
    )
  })

  it.each(table.printedKeys())('has the printed %s', (key) => {
    table
      .printedList(key)
      .forEach((value, i) => expectClose(found[key]?.[i] ?? NaN, value, table.allowance(key)))
  })
})

/** Where a section by itself is 3 dB down, by halving. */
function ownCorner(f0: number, q: number | null): number {
  let [low, high] = [0, 10]
  for (let i = 0; i < 80; i++) {
    const middle = (low + high) / 2
    if (sectionGain(f0, q, middle) > Math.SQRT1_2) low = middle
    else high = middle
  }
  return low
}

describe('the Chebyshev table of 3 dB', () => {
  const table = filterCase('chebyshev-2-of-3-decibels')
  const [section] = prototypeSections('chebyshev', 2, 3)
  const { f0, q } = { f0: section?.f0 ?? NaN, q: section?.q ?? NaN }

  it.each([
    ['a', 1 / (f0 * q)],
    ['b', 1 / f0 ** 2],
    ['Q', q],
  ])('has its %s normalised to 3 dB under the gain at 0 Hz', (key, value) => {
    expectClose(value, table.exact(key), { relative: 1e-8 })
    expectClose(value, table.printed(key), table.allowance(key))
  })
})

describe('the corner for a loss at the signal bandwidth', () => {
  it.each(every)(
    'of a %s response of order %i keeps every amplitude below within it, and is the lowest',
    (response, order) => {
      const corner = cornerFor(response, order, 100, 0.004)
      const sections = prototypeSections(response, order)
      const loss = (share: number) => Math.abs(sectionsGain(sections, share / corner) - 1)
      for (let f = 1; f <= 100; f++) expect(loss(f)).toBeLessThanOrEqual(0.004 + 1e-9)
      expect(loss(101)).toBeGreaterThan(0.004)
    },
  )
})

it('refuses an order that it has no poles for', () => {
  expect(() => prototypeSections('bessel', 7)).toThrow(RangeError)
  expect(() => prototypeSections('bessel', 1.5)).toThrow(RangeError)
})
