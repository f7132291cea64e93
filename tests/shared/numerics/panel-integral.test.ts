import { describe, expect, it } from 'vitest'
import { integratePanel, refinePanels, type VectorFunction } from '#shared/numerics/panel-integral.ts'
import { expectClose } from '#tests/support/expect-close.ts'

const one =
  (f: (x: number) => number): VectorFunction =>
  (x) =>
    Float64Array.of(f(x))

describe('a panel of seven points', () => {
  it.each([0, 1, 2, 5, 9, 10, 11])('integrates x^%d exactly', (power) => {
    const panel = integratePanel(
      one((x) => x ** power),
      0.5,
      2,
    )
    expectClose(panel.sum, (2 ** (power + 1) - 0.5 ** (power + 1)) / (power + 1), { relative: 1e-13 })
  })

  it('finds no difference between its rules up to the fifth power and one beyond', () => {
    expectClose(
      integratePanel(
        one((x) => x ** 5),
        0,
        1,
      ).difference,
      0,
      { absolute: 1e-14 },
    )
    expect(
      integratePanel(
        one((x) => x ** 6),
        0,
        1,
      ).difference,
    ).toBeGreaterThan(1e-4)
  })

  it('keeps the functions apart', () => {
    const panel = integratePanel((x) => Float64Array.of(1, x), 0, 2)
    expectClose(panel.values[0]!, 2, { relative: 1e-14 })
    expectClose(panel.values[1]!, 2, { relative: 1e-14 })
    expectClose(panel.sum, 4, { relative: 1e-14 })
  })
})

describe('refined panels', () => {
  it.each([1, 10, 100, 1000])('resolve a resonance of quality %d', (q) => {
    // |1/(1 + jx/q − x²)|² over ln x from far below to far above
    const f = one((u) => {
      const x = Math.exp(u)
      return x / ((1 - x * x) ** 2 + (x / q) ** 2)
    })
    const edges = [-7, -5, -3, -1, 1, 3, 5]
    const panels = edges.slice(1).map((to, i) => integratePanel(f, edges[i]!, to))
    const [total] = refinePanels(f, panels)
    // ∫0..∞ dx/((1 − x²)² + (x/q)²) = π·q/2, less what lies below e^−7
    expectClose(total!, (Math.PI * q) / 2 - Math.exp(-7), { relative: 3e-4 })
  })

  it('of nothing are nothing', () => {
    expect(refinePanels(one(Math.exp), [])).toEqual(new Float64Array(0))
  })
})
