import type { Box, Point, Shape, TextShape } from '#shared/drawings/shapes.ts'

/**
 * A schematic as plain geometry, placed from the network alone. Grid 8 px. Connections are made by pins, wires and
 * junction dots that share a place, and by terminals that share a node; wires never cross.
 */

export type SymbolSet = 'iec' | 'ansi'

export interface SchematicOptions {
  /** Resistors as rectangles (IEC 60617) or zigzags (IEEE 315). Pins are at the same places. */
  symbols?: SymbolSet
  /** Words for a source, the converter or a part by its designator: `{ VSENSE: 'Level sensor', converter: '14 bit' }`. */
  labels?: Readonly<Record<string, string>>
}

export interface SchematicPin {
  name: string
  node: string
  x: number
  y: number
}

export interface SchematicPart {
  ref: string
  kind: 'resistor' | 'capacitor' | 'amplifier' | 'instrumentation-amplifier' | 'converter'
  stage: string
  /** Value as a code of IEC 60062, or the name of an amplifier; '' where there is none. */
  value: string
  pins: SchematicPin[]
  /** Outline of the body, for the pointer and for what must stay clear of it. */
  body: readonly Point[]
  shapes: Shape[]
  labels: TextShape[]
}

export interface SchematicWire {
  node: string
  points: Point[]
}

/** A place where a node leaves the drawing: ground, a reference, an excitation, the sensor. */
export interface SchematicTerminal {
  node: string
  /** The element that drives the node; null for ground. */
  ref: string | null
  x: number
  y: number
  shapes: Shape[]
  labels: TextShape[]
}

export interface SchematicJunction {
  node: string
  x: number
  y: number
}

export interface SchematicDrawing {
  width: number
  height: number
  /** In signal order: the order of the tab key. */
  parts: SchematicPart[]
  wires: SchematicWire[]
  terminals: SchematicTerminal[]
  junctions: SchematicJunction[]
  /** Stages as a chain of oblique strokes above the drawing. */
  chain: Shape[]
  /** Everything but the parts: wires, terminals, dots, the chain. */
  background: Shape[]
  /** Everything in the order of painting. */
  shapes: Shape[]
  /** True where the circuit is not one of the known patterns: each part then stands alone, its pins named. */
  listed: boolean
}

export const outline = (box: Box): Point[] => [
  [box.x, box.y],
  [box.x + box.width, box.y],
  [box.x + box.width, box.y + box.height],
  [box.x, box.y + box.height],
]

export function boundsOf(points: readonly Point[]): Box {
  const xs = points.map(([x]) => x)
  const ys = points.map(([, y]) => y)
  const x = Math.min(...xs)
  const y = Math.min(...ys)
  return { x, y, width: Math.max(...xs) - x, height: Math.max(...ys) - y }
}
