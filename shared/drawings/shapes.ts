import type { LineStyle, TextStyle } from './styles.ts'

/**
 * Plain geometry of a drawing, in px of its own viewBox. The page (SVG) and the note (PDF) paint the same shapes; a
 * shape names a style and never a colour. Shapes are listed in the order in which they are painted.
 */

export type Point = readonly [x: number, y: number]

interface Named {
  /** Stable from one layout to the next, so that the same mark glides to its new place. */
  key?: string
}

export interface LineShape extends Named {
  type: 'line'
  x1: number
  y1: number
  x2: number
  y2: number
  style: LineStyle
}

export interface PolylineShape extends Named {
  type: 'polyline'
  points: readonly Point[]
  closed?: boolean
  style: LineStyle
}

export interface RectShape extends Named {
  type: 'rect'
  x: number
  y: number
  width: number
  height: number
  style: LineStyle
}

export interface PathShape extends Named {
  type: 'path'
  d: string
  style: LineStyle
}

export interface CircleShape extends Named {
  type: 'circle'
  cx: number
  cy: number
  r: number
  style: LineStyle
}

/** Text on its baseline; `turned` text is read from the right (turned by −90° about its anchor). */
export interface TextShape extends Named {
  type: 'text'
  x: number
  y: number
  text: string
  anchor: 'start' | 'middle' | 'end'
  style: TextStyle
  /** Ground that the text stands on; a painter may lay a halo of it under the text. */
  on?: 'sheet' | 'wash'
  turned?: boolean
  /** Factor on the size of its style; absent: 1. */
  scale?: number
}

export type Shape = LineShape | PolylineShape | RectShape | PathShape | CircleShape | TextShape

/** Axis-parallel rectangle. */
export interface Box {
  x: number
  y: number
  width: number
  height: number
}

export const line = (
  style: LineStyle,
  x1: number,
  y1: number,
  x2: number,
  y2: number,
  key?: string,
): LineShape => ({
  type: 'line',
  x1,
  y1,
  x2,
  y2,
  style,
  ...(key === undefined ? {} : { key }),
})

export const rect = (style: LineStyle, box: Box, key?: string): RectShape => ({
  type: 'rect',
  ...box,
  style,
  ...(key === undefined ? {} : { key }),
})

export const polyline = (style: LineStyle, points: readonly Point[], closed = false): PolylineShape => ({
  type: 'polyline',
  points,
  style,
  ...(closed ? { closed } : {}),
})

export const path = (style: LineStyle, d: string): PathShape => ({ type: 'path', d, style })

export const circle = (style: LineStyle, cx: number, cy: number, r: number): CircleShape => ({
  type: 'circle',
  cx,
  cy,
  r,
  style,
})

export const text = (
  style: TextStyle,
  x: number,
  y: number,
  content: string,
  anchor: TextShape['anchor'] = 'start',
  more: Partial<Pick<TextShape, 'on' | 'turned' | 'key' | 'scale'>> = {},
): TextShape => ({ type: 'text', x, y, text: content, anchor, style, ...more })

export const overlaps = (a: Box, b: Box, gap = 0): boolean =>
  a.x < b.x + b.width + gap &&
  b.x < a.x + a.width + gap &&
  a.y < b.y + b.height + gap &&
  b.y < a.y + a.height + gap

export const roundTo = (value: number, places = 2): number => {
  const scale = 10 ** places
  const rounded = Math.round(value * scale) / scale
  return Object.is(rounded, -0) ? 0 : rounded
}
