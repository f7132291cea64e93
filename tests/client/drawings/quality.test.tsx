import { renderToStaticMarkup } from 'react-dom/server'
import { describe, expect, it } from 'vitest'
import { moveAcross } from '#client/components/drawings/curve-cursor.ts'
import { CurveFigure } from '#client/components/drawings/curve-figure.tsx'
import { ErrorList } from '#client/components/drawings/error-list.tsx'
import { LevelDiagram } from '#client/components/drawings/level-diagram.tsx'
import { stepPlot } from '#shared/drawings/curve-inputs.ts'
import type { CurvePlot } from '#shared/drawings/curve-plot.ts'
import type { ErrorBars } from '#shared/drawings/error-chart.ts'
import { gauge } from '#tests/shared/drawings/sample-levels.ts'

const plain = (markup: string) => markup.replaceAll(/<[^>]+>/g, '|').replaceAll('\u00a0', ' ')

const log: CurvePlot = {
  across: { name: 'Frequency', unit: 'Hz', scale: 'log' },
  panels: [
    {
      name: 'Response',
      unit: 'dB',
      scale: 'linear',
      lines: [{ name: 'nominal', x: [1, 1e4], y: [0, -80], look: 'signal' }],
      levels: [],
    },
  ],
  marks: [
    { x: 1000, words: 'b' },
    { x: 100, words: 'a' },
  ],
}
const keys = { fine: false, letters: true }

describe('the cursor of a curve plot', () => {
  it('moves by a hundredth of the drawn axis, with Shift by a thousandth', () => {
    // Four decades: a hundredth of them is a factor of 10^0.04.
    expect(moveAcross(log, 100, 'ArrowRight', keys)).toBeCloseTo(100 * 10 ** 0.04, 1)
    expect(moveAcross(log, 100, 'ArrowLeft', keys)).toBeCloseTo(100 / 10 ** 0.04, 1)
    expect(moveAcross(log, 100, 'ArrowRight', { ...keys, fine: true })).toBeCloseTo(100 * 10 ** 0.004, 1)
  })

  it('starts at an end, goes to the ends and stays between them', () => {
    expect(moveAcross(log, null, 'ArrowRight', keys)).toBe(1)
    expect(moveAcross(log, null, 'ArrowLeft', keys)).toBe(1e4)
    expect(moveAcross(log, 5, 'Home', keys)).toBe(1)
    expect(moveAcross(log, 5, 'End', keys)).toBe(1e4)
    expect(moveAcross(log, 1e4, 'ArrowRight', keys)).toBe(1e4)
  })

  it('goes from mark to mark by L, where letters are keys', () => {
    expect(moveAcross(log, 5, 'l', keys)).toBe(100)
    expect(moveAcross(log, 100, 'L', keys)).toBe(1000)
    expect(moveAcross(log, 1000, 'l', keys)).toBe(100)
    expect(moveAcross(log, 5, 'l', { ...keys, letters: false })).toBeNull()
    expect(moveAcross(log, 5, 'x', keys)).toBeNull()
  })
})

describe('a curve plot on the page', () => {
  const step = { time: [0, 1e-3, 2e-3], output: [0, 0.9, 1], final: 1, band: 1e-3 }
  const markup = renderToStaticMarkup(
    <CurveFigure
      title="Step"
      caption="volts"
      named={stepPlot(step, { settling: 1.5e-3, criterion: 0.5, lsb: 1e-3 })}
    />,
  )

  it('is a named figure with one stop, a sentence and a table of the same figures', () => {
    expect(markup).toMatch(/<figure[^>]+aria-labelledby/)
    expect(markup.match(/role="application"/g)).toHaveLength(1)
    expect(plain(markup)).toContain('stays within 0.5 LSB of its final value from 1.5 ms on.')
    expect(markup.match(/scope="row"/g)).toHaveLength(10)
    for (const svg of markup.match(/<svg[^>]*>/g) ?? []) expect(svg).toContain('aria-hidden="true"')
  })
})

describe('the terms of the error on the page', () => {
  const chart: ErrorBars = {
    state: 'calibrated',
    bars: [
      { id: 'R1.initial', label: 'R1', source: 'R1', path: 'x', size: 2e-3, share: 0.8 },
      { id: 'U1.vos', label: 'Offset of U1', source: 'U1', path: 'y', size: 1e-3, share: 0.2 },
    ],
    others: { count: 3, size: 1e-5, share: 0.0001 },
    expanded: 4.44e-3,
    target: 5e-3,
  }
  const render = (given: ErrorBars) =>
    renderToStaticMarkup(<ErrorList chart={given} unit="V" label="Terms" onOpen={() => undefined} />)

  it('are a list whose names lead to what sets them; bars say nothing to readers', () => {
    const markup = render(chart)
    expect(markup).toContain('<ul aria-label="Terms"')
    expect(markup.match(/<li>/g)).toHaveLength(3)
    expect(markup.match(/<button/g)).toHaveLength(2)
    expect(plain(markup)).toContain('All others, 3 terms')
    for (const svg of markup.match(/<svg[^>]*>/g) ?? []) expect(svg).toContain('aria-hidden="true"')
  })

  it('never print more room to the target than there is, nor less shortfall', () => {
    expect(plain(render(chart))).toContain('560 μV left of 5 mV')
    expect(plain(render({ ...chart, expanded: 5.5614e-3 }))).toContain('562 μV over 5 mV')
    expect(plain(render({ ...chart, target: null }))).toContain('no target')
  })
})

describe('the level diagram against a kept variant', () => {
  const quantity = { name: 'Level', unit: 'm', low: -0.1, high: 5.2 }
  it('draws its levels dotted and names them in the key, and only then', () => {
    const with_ = renderToStaticMarkup(<LevelDiagram levels={gauge} quantity={quantity} kept={gauge} />)
    const without = renderToStaticMarkup(<LevelDiagram levels={gauge} quantity={quantity} />)
    expect(with_.match(/class="d d-signed/g)).toHaveLength(2 * gauge.length + 1)
    expect(plain(with_)).toContain('Kept variant')
    expect(without).not.toContain('d-signed')
  })
})
