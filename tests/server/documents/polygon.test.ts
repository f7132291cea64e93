import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { boxOf, clipToPolygon, readPolygon } from '#server/documents/polygon.ts'
import { hatchLines } from '#shared/drawings/hatch.ts'
import { line, type LineShape } from '#shared/drawings/shapes.ts'

const length = (part: LineShape) => Math.hypot(part.x2 - part.x1, part.y2 - part.y1)

describe('hatching of a path', () => {
  it('reads the corners of a closed path of straight lines and refuses curves', () => {
    expect(readPolygon('M1 2L3.5 -4L-1e1 6Z')).toEqual([
      [1, 2],
      [3.5, -4],
      [-10, 6],
    ])
    expect(readPolygon('M0 0H4V3Z')).toEqual([
      [0, 0],
      [4, 0],
      [4, 3],
    ])
    expect(readPolygon('M0 0A5 5 0 0 1 10 0Z')).toBeNull()
    expect(readPolygon('M0 0L4 4')).toBeNull()
  })

  it('keeps the part of a line inside a triangle', () => {
    const triangle = readPolygon('M0 0L10 0L0 10Z') ?? []
    const [part, ...more] = clipToPolygon(line('pin', -5, 4, 20, 4), triangle)
    expect(more).toEqual([])
    expect(part).toMatchObject({ x1: 0, y1: 4, x2: 6, y2: 4 })
    expect(clipToPolygon(line('pin', -5, 11, 20, 11), triangle)).toEqual([])
  })

  it('cuts a line twice where the outline turns inward', () => {
    const notch = readPolygon('M0 0L10 0L10 10L5 2L0 10Z') ?? []
    expect(clipToPolygon(line('pin', -1, 6, 11, 6), notch)).toHaveLength(2)
  })

  it('covers the area of any triangle: lines times spacing', () => {
    const coordinate = fc.integer({ min: 0, max: 200 })
    const corner = fc.tuple(coordinate, coordinate)
    fc.assert(
      fc.property(corner, corner, corner, (a, b, c) => {
        const area = Math.abs((b[0] - a[0]) * (c[1] - a[1]) - (c[0] - a[0]) * (b[1] - a[1])) / 2
        fc.pre(area > 2000)
        const points = [a, b, c]
        const lines = hatchLines(boxOf(points), 1).flatMap((each) => clipToPolygon(each, points))
        const covered = lines.reduce((sum, each) => sum + length(each), 0)
        expect(covered).toBeGreaterThan(0.93 * area)
        expect(covered).toBeLessThan(1.07 * area)
      }),
    )
  })
})
