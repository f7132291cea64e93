import { describe, expect, it } from 'vitest'
import type { Budget, BudgetLine, BudgetTotal } from '#shared/design/plan.ts'
import { chartEnd, errorBars, layoutErrorChart, totalBar } from '#shared/drawings/error-chart.ts'
import { describeSpread, layoutSpreadPlot } from '#shared/drawings/spread-plot.ts'
import { textBox } from '#shared/drawings/text-width.ts'
import type { Spread } from '#shared/studies/types.ts'

const lineOf = (id: string, calibrated: number, share: number): BudgetLine => ({
  id,
  label: `Limit of ${id}`,
  source: id,
  path: 'parts.resistors.tolerance',
  limit: 0.001,
  unit: '',
  distribution: 'rectangular',
  sensitivity: 1,
  standard: calibrated / Math.sqrt(3),
  calibrates: 'span',
  group: null,
  asBuilt: calibrated * 2,
  zeroed: calibrated * 2,
  calibrated,
  share,
})

const total = (expanded: number): BudgetTotal => ({
  worst: expanded * 2,
  rss: expanded * 1.1,
  expanded,
  standard: expanded / 2,
  k: 2,
  coverageBy: 'normal',
  at: 5,
  temperature: 60,
})

const sizes = [1e-3, 3e-3, 2e-3, 4e-4, 5e-4, 6e-4, 7e-4, 8e-4, 9e-4, 1e-4]
const budget: Budget = {
  lines: sizes.map((size, i) => lineOf(`R${i + 1}`, size, size ** 2 / sizes.reduce((s, v) => s + v * v, 0))),
  totals: { asBuilt: total(9e-3), zeroed: total(8e-3), calibrated: total(4e-3) },
  coverage: 0.95,
  points: [0, 5],
  perQuantity: 0.5,
  target: { state: 'calibrated', limit: 5e-3, met: true },
  improvements: [],
  zeroingHurts: false,
}

describe('the error chart', () => {
  const chart = errorBars(budget, 'calibrated', 1 / budget.perQuantity)

  it('lists the largest first in the unit it is read in, eight of them, then all others', () => {
    expect(chart.bars.map((bar) => bar.id)).toEqual(['R2', 'R3', 'R1', 'R9', 'R8', 'R7', 'R6', 'R5'])
    expect(chart.bars[0]?.size).toBeCloseTo(3e-3 / Math.sqrt(3) / 0.5, 12)
    expect(chart.others?.count).toBe(2)
    expect(chart.others?.size).toBeCloseTo(Math.hypot(4e-4, 1e-4) / Math.sqrt(3) / 0.5, 12)
  })

  it('shares add up to the whole variance in every state', () => {
    for (const state of ['asBuilt', 'zeroed', 'calibrated'] as const) {
      const { bars, others } = errorBars(budget, state, 1)
      const sum = bars.reduce((s, bar) => s + bar.share, 0) + (others?.share ?? 0)
      expect(sum).toBeCloseTo(1, 12)
    }
  })

  it('leaves out lines that a state has nothing left of', () => {
    const none = { ...budget, lines: budget.lines.map((l) => (l.id === 'R2' ? { ...l, zeroed: 0 } : l)) }
    expect(errorBars(none, 'zeroed', 1).bars.map((bar) => bar.id)).not.toContain('R2')
  })

  it('sets one line that would be left over apart rather than summing it up', () => {
    const nine = { ...budget, lines: budget.lines.slice(0, 9) }
    const { bars, others } = errorBars(nine, 'calibrated', 1)
    expect(bars).toHaveLength(9)
    expect(others).toBeNull()
  })

  it('hatches what is left to the target, or crosses what is too much', () => {
    const end = chartEnd(chart)
    expect(totalBar(chart, end).gap).toEqual({ from: 8e-3 / end, to: 1e-2 / end, over: false })
    const styles = (target: number) =>
      layoutErrorChart({ ...chart, target }, { unit: 'm' }).shapes.map((s) => s.style)
    expect(styles(0.01)).toContain('room')
    expect(styles(0.01)).not.toContain('over')
    expect(styles(0.005)).toContain('over')
  })

  it('draws bars as long as their figures, all from one line, inside its width', () => {
    const { shapes } = layoutErrorChart(chart, { unit: 'm', width: 600 })
    const bars = shapes.flatMap((s) => (s.type === 'rect' && s.style === 'bar' ? [s] : []))
    expect(bars).toHaveLength(9)
    expect(new Set(bars.map((bar) => bar.x)).size).toBe(1)
    const [first, second] = bars
    expect((first?.width ?? 0) / (second?.width ?? 1)).toBeCloseTo(1.5, 2)
    for (const bar of bars) expect(bar.x + bar.width).toBeLessThan(600)
  })
})

const spread: Spread = {
  boards: 1000,
  wanted: 1000,
  seed: 1,
  state: 'calibrated',
  at: { quantity: 5, temperature: 60 },
  distribution: 'rectangular',
  clipped: 0,
  mean: 1e-4,
  deviation: 2e-3,
  quantiles: [
    [0.025, -4e-3],
    [0.5, 0],
    [0.975, 4e-3],
  ],
  histogram: { edges: [-6e-3, -3e-3, 0, 3e-3, 6e-3], counts: [100, 400, 400, 100] },
  worst: { low: -8e-3, high: 8e-3 },
  builds: [-0.001, 0.002, 0.2],
  yield: { inside: 900, share: 0.9, interval: { low: 0.88, high: 0.917 } },
  budget: { deviation: 2.1e-3, difference: -4.8 },
  finished: true,
}

describe('the spread of boards', () => {
  const drawing = layoutSpreadPlot(spread, { unit: 'm', target: 4.5e-3 })
  const of = (style: string) => drawing.shapes.filter((s) => s.style === style)

  it('is 560 × 240 px, outlined without fill, with bars from zero', () => {
    expect([drawing.width, drawing.height]).toEqual([560, 240])
    const [outline] = of('level')
    if (outline?.type !== 'polyline') throw new Error('no outline')
    const bottom = drawing.area.y + drawing.area.height
    expect(outline.points[0]?.[1]).toBe(bottom)
    expect(outline.points.at(-1)?.[1]).toBe(bottom)
    // Heights are counts: 100 stands a quarter as high as 400.
    const height = (i: number) => bottom - (outline.points[i]?.[1] ?? 0)
    expect(height(1) / height(3)).toBeCloseTo(0.25, 2)
  })

  it('fills the share outside the target only, cut at the target inside a bin', () => {
    const over = of('over').flatMap((s) => (s.type === 'rect' ? [s] : []))
    expect(over).toHaveLength(2)
    const [outline] = of('level')
    if (outline?.type !== 'polyline') throw new Error('no outline')
    const bin = (outline.points[2]?.[0] ?? 0) - (outline.points[0]?.[0] ?? 0)
    for (const part of over) expect(part.width / bin).toBeCloseTo(0.5, 1)
    expect(layoutSpreadPlot(spread, { unit: 'm', target: null }).shapes.map((s) => s.style)).not.toContain(
      'over',
    )
  })

  it('marks worst-case ends, 95 % of the boards, and single builds that are in sight', () => {
    expect(of('limit')).toHaveLength(2)
    expect(of('tick')).toHaveLength(2)
    const words = drawing.shapes.flatMap((s) => (s.type === 'text' ? [s.text.replaceAll('\u00a0', ' ')] : []))
    expect(words).toContain('95 % of boards within 8 mm')
  })

  it('keeps the words of the two target lines apart, however close the lines are', () => {
    for (const target of [4.5e-3, 1e-3, 1e-4]) {
      const words = layoutSpreadPlot(spread, { unit: 'm', target }).shapes.flatMap((s) =>
        s.type === 'text' && s.text === 'target' ? [textBox(s)] : [],
      )
      const [left, right] = words.sort((a, b) => a.x - b.x)
      if (!left || !right) throw new Error('no words')
      expect(left.x + left.width).toBeLessThan(right.x)
    }
  })

  it('is said in one sentence', () => {
    expect(describeSpread(spread, 'm').replaceAll('\u00a0', ' ')).toBe(
      'Error of the reading over 1000 boards: mean 100 μm, standard deviation 2 mm; 95 % of them lie from −4 mm to 4 mm.',
    )
  })

  it('stays drawable before the first board is done', () => {
    const empty = { ...spread, boards: 0, histogram: { edges: [], counts: [] }, quantiles: [], builds: [] }
    expect(layoutSpreadPlot(empty as Spread, { unit: 'm', target: null }).shapes.length).toBeGreaterThan(5)
  })
})
