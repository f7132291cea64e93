/**
 * How each style of a drawing is painted: widths and dashes in px, type sizes in px, widths of letters in per cent.
 * Colours are named by what they stand for and live with the painter (tokens on the page, print colours in the note).
 * Wide to narrow lines are 2 : 1 (ISO 128); hatching is at 45°.
 */

export type Hatch = 'poche' | 'room' | 'over'

export interface LinePaint {
  /** Line width, px; 0 for none. */
  width: number
  dash?: readonly number[]
  /** Whether the shape is filled with the colour of its style. */
  filled?: boolean
  hatch?: Hatch
  opacity?: number
}

export const lineStyles = {
  // Level diagram and transfer plot
  poche: { width: 0, filled: true, hatch: 'poche' },
  opening: { width: 0, filled: true },
  room: { width: 0, hatch: 'room' },
  wash: { width: 0, filled: true },
  over: { width: 0, filled: true, hatch: 'over' },
  worst: { width: 1, dash: [4, 2.5] },
  'worst-over': { width: 1, dash: [4, 2.5] },
  level: { width: 2 },
  'level-over': { width: 2 },
  signed: { width: 1.5, dash: [1.5, 3] },
  limit: { width: 2 },
  side: { width: 1 },
  link: { width: 1, opacity: 0.38 },
  break: { width: 1 },
  unknown: { width: 1, dash: [2.5, 2.5] },
  spandrel: { width: 0, filled: true },
  arch: { width: 2 },
  'dim-clear': { width: 1 },
  'dim-tight': { width: 1 },
  'dim-plain': { width: 1 },
  'head-clear': { width: 0, filled: true },
  'head-tight': { width: 0, filled: true },
  'head-plain': { width: 0, filled: true },
  extension: { width: 0.5 },
  axis: { width: 1 },
  grid: { width: 0.5 },
  cursor: { width: 1 },
  chosen: { width: 2 },
  // Charts of errors, spread and curves
  bar: { width: 0, filled: true },
  'bar-signal': { width: 0, filled: true },
  target: { width: 1, dash: [6, 2, 1.5, 2] },
  tick: { width: 1 },
  curve: { width: 1.2 },
  // Small levels of a list
  'mini-room': { width: 0, filled: true },
  'mini-level': { width: 0, filled: true, opacity: 0.5 },
  'mini-end': { width: 1.5 },
  'mini-limit': { width: 1.5 },
  'mini-over': { width: 0, filled: true },
  'mini-tight': { width: 0, filled: true },
  'mini-link': { width: 0.8, opacity: 0.6 },
  // Schematic
  body: { width: 1.5 },
  pin: { width: 0.9 },
  sign: { width: 1 },
  wire: { width: 0.9 },
  junction: { width: 0, filled: true },
  terminal: { width: 1.2 },
  chain: { width: 0.9 },
  'chain-stroke': { width: 1.6 },
} as const satisfies Record<string, LinePaint>

export type LineStyle = keyof typeof lineStyles

export interface TextPaint {
  /** px */
  size: number
  weight: number
  /** Width of the letters, per cent. */
  stretch: number
}

export const textStyles = {
  title: { size: 13, weight: 600, stretch: 96 },
  gain: { size: 11, weight: 400, stretch: 88 },
  'limit-value': { size: 11, weight: 500, stretch: 88 },
  'level-value': { size: 12, weight: 600, stretch: 90 },
  'over-value': { size: 12, weight: 600, stretch: 90 },
  'clip-value': { size: 11, weight: 500, stretch: 86 },
  'measurand-value': { size: 11, weight: 400, stretch: 88 },
  'room-clear': { size: 11.5, weight: 600, stretch: 90 },
  'room-tight': { size: 11.5, weight: 700, stretch: 90 },
  'room-over': { size: 12, weight: 650, stretch: 92 },
  'unknown-text': { size: 11, weight: 400, stretch: 88 },
  'key-text': { size: 11, weight: 400, stretch: 88 },
  'axis-text': { size: 11, weight: 400, stretch: 88 },
  'axis-name': { size: 11, weight: 550, stretch: 88 },
  'line-name': { size: 11, weight: 550, stretch: 88 },
  'dim-text': { size: 11, weight: 500, stretch: 88 },
  label: { size: 11, weight: 400, stretch: 88 },
  value: { size: 11, weight: 550, stretch: 92 },
  'chain-text': { size: 11, weight: 650, stretch: 100 },
  'pin-name': { size: 9, weight: 400, stretch: 88 },
} as const satisfies Record<string, TextPaint>

export type TextStyle = keyof typeof textStyles

/** The same table, seen without its literal types. */
export const linePaint = (style: LineStyle): LinePaint => lineStyles[style]
export const textPaint = (style: TextStyle): TextPaint => textStyles[style]
