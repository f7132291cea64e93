import type { Point } from '#shared/drawings/shapes.ts'
import type { SchematicJunction, SchematicPart, SchematicTerminal, SchematicWire } from './types.ts'

/** A dot wherever three or more ends of wires, pins and terminals meet. */
export function findJunctions(drawing: {
  parts: readonly SchematicPart[]
  wires: readonly SchematicWire[]
  terminals: readonly SchematicTerminal[]
}): SchematicJunction[] {
  const meetings = new Map<string, SchematicJunction & { ends: number }>()
  const meet = (node: string, x: number, y: number, ends = 1) => {
    const key = `${x} ${y}`
    const known = meetings.get(key)
    if (known) known.ends += ends
    else meetings.set(key, { node, x, y, ends })
  }
  for (const { node, points } of drawing.wires) {
    const [first, last] = [points[0], points.at(-1)]
    for (const end of [first, last]) if (end) meet(node, end[0], end[1])
  }
  for (const part of drawing.parts) for (const pin of part.pins) meet(pin.node, pin.x, pin.y)
  for (const terminal of drawing.terminals) meet(terminal.node, terminal.x, terminal.y)
  // A wire that goes through a meeting place counts twice.
  for (const { points } of drawing.wires) {
    for (const [i, from] of points.entries()) {
      const to = points[i + 1]
      if (i > 0 && to) addThrough(meetings, from)
      if (!to) continue
      for (const place of meetings.values()) if (inside(place, from, to)) place.ends += 2
    }
  }
  return [...meetings.values()].filter((m) => m.ends > 2).map(({ node, x, y }) => ({ node, x, y }))
}

function addThrough(meetings: Map<string, SchematicJunction & { ends: number }>, [x, y]: Point): void {
  const place = meetings.get(`${x} ${y}`)
  if (place) place.ends += 2
}

/** Strictly between two points of a segment that is level, upright or slanted. */
function inside({ x, y }: { x: number; y: number }, [x1, y1]: Point, [x2, y2]: Point): boolean {
  const across = (x2 - x1) * (y - y1) - (y2 - y1) * (x - x1)
  if (Math.abs(across) > 1e-6) return false
  const along = (x - x1) * (x2 - x1) + (y - y1) * (y2 - y1)
  return along > 1e-9 && along < (x2 - x1) ** 2 + (y2 - y1) ** 2 - 1e-9
}
