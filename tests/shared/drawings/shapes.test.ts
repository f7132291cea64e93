import fc from 'fast-check'
import { readFileSync } from 'node:fs'
import { describe, expect, it } from 'vitest'
import { hatchLines } from '#shared/drawings/hatch.ts'
import { describeMiniLevels, layoutMiniLevels } from '#shared/drawings/mini-levels.ts'
import { lineStyles, textStyles } from '#shared/drawings/styles.ts'
import { textWidth } from '#shared/drawings/text-width.ts'
import { gauge, inverted } from './sample-levels.ts'

describe('hatching', () => {
  it('lies inside its rectangle at the stated angle and spacing, in line with its neighbours', () => {
    const box = fc.record({
      x: fc.double({ min: -50, max: 50, noNaN: true }),
      y: fc.double({ min: -50, max: 50, noNaN: true }),
      width: fc.double({ min: 1, max: 200, noNaN: true }),
      height: fc.double({ min: 1, max: 200, noNaN: true }),
    })
    fc.assert(
      fc.property(box, fc.constantFrom(45, 135, 0, 90, 30), (area, angle) => {
        const lines = hatchLines(area, 4, angle)
        const turn = (angle * Math.PI) / 180
        for (const { x1, y1, x2, y2 } of lines) {
          for (const x of [x1, x2]) expect(x > area.x - 1e-6 && x < area.x + area.width + 1e-6).toBe(true)
          for (const y of [y1, y2]) expect(y > area.y - 1e-6 && y < area.y + area.height + 1e-6).toBe(true)
          expect((x2 - x1) * Math.sin(turn) + (y2 - y1) * Math.cos(turn)).toBeCloseTo(0, 6)
          const steps = (x1 * Math.sin(turn) + y1 * Math.cos(turn)) / 4
          expect(Math.abs(steps - Math.round(steps))).toBeLessThan(1e-6)
        }
      }),
      { numRuns: 200, seed: 2 },
    )
  })

  it('covers a square of 40 px with 14 lines 4 px apart', () => {
    // The diagonal is 56.6 px: 14 lines, not counting those that touch a corner only.
    expect(hatchLines({ x: 0.5, y: 0, width: 40, height: 40 }, 4).length).toBe(14)
    expect(() => hatchLines({ x: 0, y: 0, width: 1, height: 1 }, 0)).toThrow(RangeError)
  })
})

describe('styles', () => {
  const css = readFileSync(
    new URL('../../../client/components/drawings/drawings.css', import.meta.url),
    'utf8',
  )

  it('have a colour on the page, each of them', () => {
    const missing = [...Object.keys(lineStyles), ...Object.keys(textStyles)].filter(
      (style) => style !== 'room' && !new RegExp(`\\.d-${style}[\\s,{]`).test(css),
    )
    expect(missing).toEqual([])
  })

  it('keep type at 11 px and more on screen, but for the names of pins inside a symbol', () => {
    for (const [name, { size }] of Object.entries(textStyles))
      if (name !== 'pin-name') expect(size, name).toBeGreaterThanOrEqual(11)
  })
})

describe('text widths', () => {
  it('grow with each letter and with the size', () => {
    expect(textWidth('4k99', 'value')).toBeGreaterThan(textWidth('4k9', 'value'))
    expect(textWidth('0.380 V', 'level-value', 2)).toBeCloseTo(2 * textWidth('0.380 V', 'level-value'), 9)
    // Four figures of 0.555 em at 11 px, weight 500, width 88 %, with 4 % to spare.
    expect(textWidth('4999', 'limit-value')).toBeCloseTo(4 * 0.56 * 11 * 1.04, 6)
  })
})

describe('the small levels of a list', () => {
  it('are bays of 18 × 22 px, 25 px apart, solid past a limit that is passed', () => {
    const drawing = layoutMiniLevels(gauge)
    const rooms = drawing.shapes.filter((s) => s.style === 'mini-room')
    expect(rooms).toMatchObject([0, 1, 2, 3].map((i) => ({ x: 2 + 25 * i, y: 4, width: 18, height: 22 })))
    expect(drawing.shapes.filter((s) => s.style === 'mini-over')).toHaveLength(1)
    expect(drawing.shapes.filter((s) => s.style === 'mini-tight')).toHaveLength(1)
    expect(layoutMiniLevels(inverted).shapes.some((s) => s.style === 'mini-over')).toBe(false)
  })

  it('say in words what they show', () => {
    expect(describeMiniLevels(gauge)).toBe('4 nodes, over at Converter input, tight at After S2')
    expect(describeMiniLevels(inverted)).toBe('3 nodes, all clear')
    expect(describeMiniLevels([])).toBe('0 nodes, all clear')
  })
})
