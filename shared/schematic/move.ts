import type { Box, Point, Shape, TextShape } from '#shared/drawings/shapes.ts'
import { textBox } from '#shared/drawings/text-width.ts'
import { boundsOf, outline, type SchematicPart, type SchematicTerminal, type SchematicWire } from './types.ts'

interface Drawn {
  parts: SchematicPart[]
  wires: SchematicWire[]
  terminals: SchematicTerminal[]
}

/** Bounds of everything, texts with their width included. */
export function sizeOf(drawing: Drawn & { shapes: Shape[] }): Box {
  const corners: Point[] = [
    ...drawing.parts.flatMap((p) => [...p.body, ...p.labels.flatMap(corner)]),
    ...drawing.wires.flatMap((w) => w.points),
    ...drawing.terminals.flatMap((t) => [
      [t.x - 8, t.y - 8] as const,
      [t.x + 8, t.y + 8] as const,
      ...t.labels.flatMap(corner),
    ]),
  ]
  return corners.length > 0 ? boundsOf(corners) : { x: 0, y: 0, width: 0, height: 0 }
}

const corner = (label: TextShape): Point[] => outline(textBox(label))

export function moveDrawing(drawing: Drawn, dx: number, dy: number): Drawn {
  const spot = <T extends { x: number; y: number }>(s: T): T => ({ ...s, x: s.x + dx, y: s.y + dy })
  const point = ([x, y]: Point): Point => [x + dx, y + dy]
  return {
    parts: drawing.parts.map((p) => ({
      ...p,
      pins: p.pins.map(spot),
      body: p.body.map(point),
      shapes: p.shapes.map((s) => moveShape(s, dx, dy)),
      labels: p.labels.map(spot),
    })),
    wires: drawing.wires.map((w) => ({ ...w, points: w.points.map(point) })),
    terminals: drawing.terminals.map((t) => ({
      ...spot(t),
      shapes: t.shapes.map((s) => moveShape(s, dx, dy)),
      labels: t.labels.map(spot),
    })),
  }
}

function moveShape(shape: Shape, dx: number, dy: number): Shape {
  switch (shape.type) {
    case 'line':
      return { ...shape, x1: shape.x1 + dx, x2: shape.x2 + dx, y1: shape.y1 + dy, y2: shape.y2 + dy }
    case 'polyline':
      return { ...shape, points: shape.points.map(([x, y]) => [x + dx, y + dy] as const) }
    case 'circle':
      return { ...shape, cx: shape.cx + dx, cy: shape.cy + dy }
    case 'path':
      // Paths of symbols begin with one absolute move and go on in relative steps.
      return {
        ...shape,
        d: shape.d.replace(
          /^M(-?[\d.]+) (-?[\d.]+)/,
          (_, x: string, y: string) => `M${Number(x) + dx} ${Number(y) + dy}`,
        ),
      }
    case 'rect':
    case 'text':
      return { ...shape, x: shape.x + dx, y: shape.y + dy }
  }
}
