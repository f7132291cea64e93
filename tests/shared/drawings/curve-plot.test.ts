import { describe, expect, it } from 'vitest'
import { logTicks } from '#shared/drawings/axis.ts'
import { loopPlot, noisePlot, responsePlot, stepPlot } from '#shared/drawings/curve-inputs.ts'
import {
  curveTable,
  layoutCurvePlot,
  readCurve,
  readCurves,
  type CurvePlot,
} from '#shared/drawings/curve-plot.ts'
import { textBox } from '#shared/drawings/text-width.ts'

/** One pole at 1 kHz by its closed form: −10·log(1 + (f/fc)²) dB and −atan(f/fc). */
const frequency = Array.from({ length: 121 }, (_, i) => 10 ** (i / 20))
const bode = {
  frequency,
  magnitude: frequency.map((f) => -10 * Math.log10(1 + (f / 1e3) ** 2)),
  phase: frequency.map((f) => (-Math.atan(f / 1e3) * 180) / Math.PI),
  band: {
    low: frequency.map((f) => -10 * Math.log10(1 + (f / 0.9e3) ** 2)),
    high: frequency.map((f) => -10 * Math.log10(1 + (f / 1.1e3) ** 2)),
  },
}
const tau = 1 / (2 * Math.PI * 1e3)
const time = Array.from({ length: 200 }, (_, i) => (i / 199) * 16 * tau)
const step = { time, output: time.map((t) => 0.5 + 2 * (1 - Math.exp(-t / tau))), final: 2.5, band: 2e-5 }
const spaced = (text: string) => text.replaceAll('\u00a0', ' ')
const words = (plot: CurvePlot, cursor: number | null = null) =>
  layoutCurvePlot(plot, { cursor }).shapes.flatMap((s) => (s.type === 'text' ? [spaced(s.text)] : []))

describe('ticks of a logarithmic axis', () => {
  it('are decades within the range, with 2 and 5 where there are few decades', () => {
    expect(logTicks(1, 1e6)).toEqual([1, 10, 100, 1e3, 1e4, 1e5, 1e6])
    expect(logTicks(0.3, 12)).toEqual([0.5, 1, 2, 5, 10])
    expect(logTicks(1e-3, 1e9, 6)).toEqual([1e-2, 1, 1e2, 1e4, 1e6, 1e8])
    expect(logTicks(0, 10)).toEqual([])
  })
})

describe('reading a curve', () => {
  it('goes straight between points on the axis that it is drawn on', () => {
    expect(readCurve({ x: [1, 100], y: [0, -40] }, 10, 'log')).toBeCloseTo(-20, 12)
    expect(readCurve({ x: [1, 100], y: [0, -99] }, 2, 'linear')).toBeCloseTo(-1, 12)
  })

  it('gives nothing outside of it', () => {
    expect(readCurve({ x: [1, 2], y: [0, 1] }, 0.5, 'linear')).toBeNull()
    expect(readCurve({ x: [1, 2], y: [0, 1] }, 3, 'linear')).toBeNull()
    expect(readCurve({ x: [1, 2], y: [5, 1] }, 1, 'linear')).toBe(5)
  })
})

describe('the frequency response', () => {
  const { plot, sentence } = responsePlot(bode, { filter: null, bandwidth: 20 })

  it('finds the corner of one pole again, and says it', () => {
    expect(spaced(sentence)).toBe('From sensor to converter the response is 3 dB down at 1 kHz.')
  })

  it('reads 3.01 dB and 45° at the corner', () => {
    const at = readCurves(plot, 1e3)
    expect(at[0]?.value).toBeCloseTo(-10 * Math.log10(2), 3)
    expect(at.find(({ name }) => name === 'Phase')?.value).toBeCloseTo(-45, 2)
  })

  it('draws the nominal once in each panel and two dashed limits of tolerance', () => {
    const styles = layoutCurvePlot(plot).shapes.map(({ style }) => style)
    expect(styles.filter((s) => s === 'level')).toHaveLength(2)
    expect(styles.filter((s) => s === 'worst')).toHaveLength(2)
    expect(words(plot).filter((w) => w === 'over tolerance')).toHaveLength(1)
  })

  it('marks the signal bandwidth through all panels', () => {
    expect(words(plot)).toContain('signal, 20 Hz')
    expect(layoutCurvePlot(plot).shapes.filter(({ style }) => style === 'target')).toHaveLength(1)
  })

  it('gives the same figures as a table, with a row for each mark', () => {
    const rows = curveTable(plot)
    expect(rows).toHaveLength(10)
    expect(rows.filter((row) => row.words !== null).map((row) => row.at)).toEqual([20])
    expect(rows[0]?.at).toBe(1)
    expect(rows.at(-1)?.at).toBe(1e6)
  })

  it('finds the place under a column again', () => {
    const drawing = layoutCurvePlot(plot, { cursor: 5e3 })
    const cursor = drawing.shapes.find((s) => s.style === 'cursor')
    if (cursor?.type !== 'line') throw new Error('no cursor')
    expect(drawing.across(cursor.x1) / 5e3).toBeCloseTo(1, 2)
  })
})

describe('the step response', () => {
  const settling = tau * Math.log(2 / 2e-5)
  const { plot, sentence } = stepPlot(step, { settling, criterion: 0.5, lsb: 4e-5 })

  it('shows the distance to the final value in codes against the criterion', () => {
    // One pole: the distance falls to half a code, 20 μV of 2 V, after τ·ln(2 V / 20 μV).
    const reading = readCurves(plot, settling)[1]
    expect(reading?.unit).toBe('LSB')
    expect(Math.log10((reading?.value ?? 1) / 0.5)).toBeCloseTo(0, 1)
    expect(words(plot)).toContain('0.5 LSB')
    expect(spaced(sentence)).toContain('from 1.84 ms on')
  })

  it('says that it does not settle where no time is known', () => {
    expect(stepPlot(step, { settling: null, criterion: 0.5, lsb: 4e-5 }).sentence).toContain(
      'does not settle',
    )
  })
})

describe('the loop gain', () => {
  it('dimensions the margin between half a turn and the phase at the crossover', () => {
    // Integrator with a second pole at its crossover of 1 MHz: 45° are left.
    const loop = {
      amplifier: 'U1',
      frequency: frequency.map((f) => f * 10),
      magnitude: frequency.map(
        (f) => 20 * Math.log10(1e6 / (f * 10)) - 10 * Math.log10(1 + (f / 1e5) ** 2) + 10 * Math.log10(2),
      ),
      phase: frequency.map((f) => -90 - (Math.atan(f / 1e5) * 180) / Math.PI),
    }
    const entry = {
      amplifier: 'U1',
      crossover: 1e6,
      phaseMargin: 45,
      worst: 42,
      state: 'tight' as const,
      cures: [],
    }
    const { plot, sentence } = loopPlot(loop, entry)
    expect(plot.panels[1]?.dimension?.to).toBeCloseTo(-135, 1)
    expect(words(plot)).toEqual(expect.arrayContaining(['margin 45°', 'gain of one at 1 MHz']))
    expect(spaced(sentence)).toBe(
      'The loop of U1 has a gain of one at 1 MHz with a phase margin of 45°, 42° at worst.',
    )
  })
})

describe('every curve plot', () => {
  const noise = {
    frequency,
    total: frequency.map((f) => 5e-8 / Math.sqrt(1 + (f / 1e3) ** 2)),
    parts: ['R1', 'Voltage noise of U1', 'Rf', 'Current noise of U1'].map((name, n) => ({
      name,
      x: frequency,
      y: frequency.map((f) => (4e-8 * 0.99 ** n) / Math.sqrt(1 + (f / 1e3) ** 2)),
    })),
  }
  const plots = {
    response: responsePlot(bode, { filter: null, bandwidth: 20 }).plot,
    step: stepPlot(step, { settling: 1e-3, criterion: 0.5, lsb: 4e-5 }).plot,
    noise: noisePlot(noise).plot,
  }

  it.each(Object.entries(plots))('of the %s stays inside its sheet, at any width', (_, plot) => {
    for (const width of [320, 560, 900]) {
      const drawing = layoutCurvePlot(plot, { width })
      for (const shape of drawing.shapes) {
        if (shape.type === 'line')
          for (const v of [shape.x1, shape.x2]) expect(v >= -0.5 && v <= width + 0.5).toBe(true)
        if (shape.type === 'polyline')
          for (const [x, y] of shape.points)
            expect(x >= 0 && x <= width && y >= 0 && y <= drawing.height).toBe(true)
      }
    }
  })

  it('keeps names of curves apart that end at the same height', () => {
    const names = layoutCurvePlot(plots.noise).shapes.flatMap((s) =>
      s.type === 'text' && s.anchor === 'start' && (s.style === 'key-text' || s.style === 'line-name')
        ? [textBox(s)]
        : [],
    )
    expect(names).toHaveLength(5)
    const tops = names.map(({ y }) => y).sort((a, b) => a - b)
    tops.slice(1).forEach((y, i) => expect(y - (tops[i] ?? 0)).toBeGreaterThanOrEqual(12))
  })

  it('starts a step at zero with four ticks or more', () => {
    for (const width of [320, 560, 900]) {
      const { shapes } = layoutCurvePlot(plots.step, { width })
      const words = shapes.flatMap((s) =>
        s.type === 'text' && s.style === 'axis-text' && s.anchor === 'middle' ? [s.text] : [],
      )
      expect(words[0]).toBe('0')
      expect(words.length).toBeGreaterThanOrEqual(4)
    }
  })
})
