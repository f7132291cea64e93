import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import type { Candidate } from '#shared/design/plan.ts'
import { ticks } from '#shared/drawings/axis.ts'
import {
  readTransfer,
  transferOf,
  transferTable,
  type TransferInput,
} from '#shared/drawings/transfer-input.ts'
import { describeTransfer, layoutTransferPlot } from '#shared/drawings/transfer-plot.ts'
import { gauge } from './sample-levels.ts'

const input: TransferInput = {
  quantity: { name: 'Stilling-well level', unit: 'm', low: 0, high: 5 },
  converter: { input: { low: 0, high: 4 }, bits: 12, coding: 'straight' },
  nominal: { low: 0.5, high: 3 },
  worst: { low: { low: 0.4, high: 0.6 }, high: { low: 2.9, high: 3.1 } },
  codesUsed: 2560,
  region: { low: 0, high: 4 },
  linear: { low: -1, high: 7 },
  worstLinear: { low: -0.8, high: 6.6 },
}

describe('reading the transfer', () => {
  it('follows the straight line inside the linear span and stays flat past its ends', () => {
    expect(readTransfer(input, 2)).toEqual({ quantity: 2, volts: 1.5, code: 1536, clipped: false })
    expect(readTransfer(input, 9)).toEqual({ quantity: 9, volts: 4, code: 4095, clipped: true })
    expect(readTransfer(input, -3)).toEqual({ quantity: -3, volts: 0, code: 0, clipped: true })
  })

  it('gives eleven points from one end of the span to the other', () => {
    const points = transferTable(input)
    expect(points).toHaveLength(11)
    expect(points.map((p) => p.quantity)).toEqual([0, 0.5, 1, 1.5, 2, 2.5, 3, 3.5, 4, 4.5, 5])
    expect(points.at(-1)).toMatchObject({ volts: 3, code: 3072 })
  })

  it('takes the linear span from the first limit met at any node', () => {
    const realised = {
      converter: { low: 0.228, high: 4.235 },
      worst: { low: { low: 0.2, high: 0.25 }, high: { low: 4.2, high: 4.26 } },
      codesUsed: 64000,
    }
    const candidate = { levels: gauge, realised } as unknown as Candidate
    const found = transferOf(candidate, { name: 'x', unit: 'm', low: -0.1, high: 5.2 }, input.converter)
    // Converter input at 4.096 V above, S2 at 0.1 V below: both on the straight line through the nominal ends.
    const at = (volts: number) => -0.1 + (5.3 * (volts - 0.228)) / (4.235 - 0.228)
    expect(found?.linear.high).toBeCloseTo(at(4.096), 9)
    expect(found?.linear.low).toBeCloseTo(at(0.1), 9)
    expect(transferOf({ levels: gauge } as unknown as Candidate, input.quantity, input.converter)).toBeNull()
  })
})

describe('the transfer plot', () => {
  const styles = (given: TransferInput) => layoutTransferPlot(given).shapes.map((s) => s.style)

  it('runs flat in the colour of over past each limit that is met, and nowhere else', () => {
    expect(styles(input).filter((s) => s === 'level-over')).toHaveLength(2)
    expect(
      styles({ ...input, linear: { low: null, high: 7 } }).filter((s) => s === 'level-over'),
    ).toHaveLength(1)
    expect(styles({ ...input, linear: { low: null, high: null } })).not.toContain('level-over')
  })

  it('hatches four corners where there is room at both ends, two where one end is over', () => {
    expect(styles(input).filter((s) => s === 'room')).toHaveLength(4)
    expect(styles({ ...input, linear: { low: -1, high: 4.5 } }).filter((s) => s === 'room')).toHaveLength(2)
  })

  it('states required span, linear span of every board, room at both ends and codes used', () => {
    const words = layoutTransferPlot(input).shapes.flatMap((s) => (s.type === 'text' ? [s.text] : []))
    const plain = words.map((w) => w.replaceAll('\u00a0', ' '))
    expect(plain).toEqual(
      expect.arrayContaining([
        'required 0 m to 5 m',
        'linear −0.8 m to 6.6 m, every board',
        '0.8 m',
        '1.6 m',
        '2560 of 4096 codes',
      ]),
    )
    expect(describeTransfer(input).replaceAll('\u00a0', ' ')).toBe(
      'Stilling-well level from 0 m to 5 m gives 0.5 V to 3.0 V at the converter, 2560 codes. Every board is linear from −0.8 m to 6.6 m.',
    )
  })

  it('stays inside 560 × 360 px and finds the measurand under a column again', () => {
    const arbitrary = fc.record({
      low: fc.double({ min: -100, max: 100, noNaN: true }),
      span: fc.double({ min: 0.1, max: 1000, noNaN: true }),
      inverted: fc.boolean(),
      past: fc.tuple(
        fc.double({ min: -0.3, max: 3, noNaN: true }),
        fc.double({ min: -0.3, max: 3, noNaN: true }),
      ),
      at: fc.double({ min: 0, max: 1, noNaN: true }),
    })
    fc.assert(
      fc.property(arbitrary, ({ low, span, inverted, past, at }) => {
        const linear = { low: low - past[0] * span, high: low + span + past[1] * span }
        const given: TransferInput = {
          ...input,
          quantity: { ...input.quantity, low, high: low + span },
          nominal: inverted ? { low: 3, high: 0.5 } : input.nominal,
          linear,
          worstLinear: linear,
        }
        const value = low + at * span
        const drawing = layoutTransferPlot(given, { cursor: value })
        expect([drawing.width, drawing.height]).toEqual([560, 360])
        for (const s of drawing.shapes) {
          if (s.type !== 'line') continue
          for (const v of [s.x1, s.x2]) expect(v >= 0 && v <= 560).toBe(true)
          for (const v of [s.y1, s.y2]) expect(v >= 0 && v <= 360).toBe(true)
        }
        const cursor = drawing.shapes.find((s) => s.style === 'cursor')
        if (cursor?.type !== 'line') throw new Error('no cursor')
        // A hundredth of a px of the drawing.
        expect(Math.abs(drawing.quantityAt(cursor.x1) - value)).toBeLessThan(span * 1e-3)
      }),
      { numRuns: 300, seed: 5 },
    )
  })
})

describe('ticks', () => {
  it('stand at 1, 2 or 5 times a power of ten, within the range', () => {
    expect(ticks(-0.42, 5.8, 8)).toEqual([0, 1, 2, 3, 4, 5])
    expect(ticks(0, 2.5, 5)).toEqual([0, 0.5, 1, 1.5, 2, 2.5])
    expect(ticks(-0.3, 0.3, 6)).toEqual([-0.3, -0.2, -0.1, 0, 0.1, 0.2, 0.3])
    expect(ticks(3, 3, 5)).toEqual([])
  })
})
