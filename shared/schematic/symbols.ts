import { circle, line, path, polyline, roundTo, type Point, type Shape } from '#shared/drawings/shapes.ts'
import type { SymbolSet } from './types.ts'

/**
 * Symbols on a grid of 8 px. Two-pin symbols reach 24 px to both sides of their centre, in both symbol sets.
 * Bodies have wide lines, leads narrow ones (2 : 1, ISO 128).
 */

export const PIN = 24
const BODY = 16

/** Turns a drawing made along the x axis: unit vector (c, s) is the direction from the first pin to the second. */
type Turn = (along: number, across: number) => Point

const turnAt = (x: number, y: number, c: number, s: number): Turn => {
  return (along, across) => [roundTo(x + along * c - across * s, 3), roundTo(y + along * s + across * c, 3)]
}

export interface TwoPin {
  shapes: Shape[]
  body: Point[]
}

const lead = (turn: Turn, from: number, to: number): Shape => {
  const [x1, y1] = turn(from, 0)
  const [x2, y2] = turn(to, 0)
  return line('pin', x1, y1, x2, y2)
}

/** `direction` in degrees, clockwise from the x axis. `reach` is the distance of the pins from the centre. */
export function resistorSymbol(
  x: number,
  y: number,
  direction: number,
  symbols: SymbolSet,
  reach = PIN,
  half = BODY,
): TwoPin {
  const turn = turned(x, y, direction)
  const leads = [lead(turn, -reach, -half), lead(turn, half, reach)]
  const box: Point[] = [turn(-half, -5), turn(half, -5), turn(half, 5), turn(-half, 5)]
  if (symbols === 'iec') return { shapes: [...leads, polyline('body', box, true)], body: box }
  // Six strokes: three peaks up, three down.
  const step = half / 6
  const zigzag = [-half, ...[-5, -3, -1, 1, 3, 5].map((n) => n * step), half].map((along, i, all) =>
    turn(along, i === 0 || i === all.length - 1 ? 0 : i % 2 === 1 ? -5 : 5),
  )
  return { shapes: [...leads, polyline('body', zigzag)], body: box }
}

export function capacitorSymbol(x: number, y: number, direction: number): TwoPin {
  const turn = turned(x, y, direction)
  const plate = (along: number): Shape => polyline('body', [turn(along, -8), turn(along, 8)])
  return {
    shapes: [lead(turn, -PIN, -2.5), lead(turn, 2.5, PIN), plate(-2.5), plate(2.5)],
    body: [turn(-3, -8), turn(3, -8), turn(3, 8), turn(-3, 8)],
  }
}

function turned(x: number, y: number, direction: number): Turn {
  const turn = (direction * Math.PI) / 180
  return turnAt(x, y, roundTo(Math.cos(turn), 6), roundTo(Math.sin(turn), 6))
}

export const AMPLIFIER = { width: 56, half: 32, pin: 16 }

/** Triangle with its back at `x`, pointing right; signs at the pins. */
export function amplifierSymbol(x: number, y: number, plusAbove: boolean): TwoPin {
  const { width, half, pin } = AMPLIFIER
  const body: Point[] = [
    [x, y - half],
    [x + width, y],
    [x, y + half],
  ]
  const plus = plusAbove ? y - pin : y + pin
  const minus = plusAbove ? y + pin : y - pin
  return { shapes: [polyline('body', body, true), ...signs(x + 4, plus, minus)], body }
}

function signs(x: number, plus: number, minus: number): Shape[] {
  return [
    line('sign', x, plus, x + 6, plus),
    line('sign', x + 3, plus - 3, x + 3, plus + 3),
    line('sign', x, minus, x + 6, minus),
  ]
}

export const INSTRUMENTATION = { width: 96, half: 72, pin: 56, gain: 24, level: 48 }

/** Larger triangle: + above, gain resistor between, reference pin on the lower edge. */
export function instrumentationSymbol(x: number, y: number): TwoPin {
  const { width, half, pin } = INSTRUMENTATION
  const body: Point[] = [
    [x, y - half],
    [x + width, y],
    [x, y + half],
  ]
  return { shapes: [polyline('body', body, true), ...signs(x + 4, y - pin, y + pin)], body }
}

export const CONVERTER = { width: 64, half: 28, point: 16 }

/** Five-sided block, its point at (x, y) facing the signal; a staircase inside. */
export function converterSymbol(x: number, y: number): TwoPin {
  const { width, half, point } = CONVERTER
  const body: Point[] = [
    [x, y],
    [x + point, y - half],
    [x + width, y - half],
    [x + width, y + half],
    [x + point, y + half],
  ]
  return {
    shapes: [polyline('body', body, true), path('sign', `M${x + 27} ${y + 14}v-9h9v-9h9v-9h9`)],
    body,
  }
}

/** Ground, hanging from (x, y). */
export const groundSymbol = (x: number, y: number): Shape[] => [
  line('body', x - 7, y, x + 7, y),
  line('body', x - 4, y + 3.5, x + 4, y + 3.5),
  line('body', x - 1.5, y + 7, x + 1.5, y + 7),
]

export const TERMINAL = 3

/** Open circle centred at (x, y). */
export const terminalSymbol = (x: number, y: number): Shape[] => [circle('terminal', x, y, TERMINAL)]
