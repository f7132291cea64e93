import type { Box, LineShape, Point } from '#shared/drawings/shapes.ts'

/** Corners of a closed path made of absolute M, L, H and V; null for any other, curves above all. */
export function readPolygon(d: string): Point[] | null {
  if (!/^\s*M[^MZ]*Z\s*$/i.test(d) || /[^MLHVZ\d\s.,e+-]/.test(d)) return null
  const points: Point[] = []
  for (const [, command = '', body = ''] of d.matchAll(/([MLHV])([^MLHVZ]*)/g)) {
    const numbers = (body.match(/[-+]?(?:\d+\.?\d*|\.\d+)(?:e[-+]?\d+)?/g) ?? []).map(Number)
    const [x, y] = points.at(-1) ?? [0, 0]
    if (command === 'H') for (const value of numbers) points.push([value, y])
    else if (command === 'V') for (const value of numbers) points.push([x, value])
    else for (let i = 0; i + 1 < numbers.length; i += 2) points.push([numbers[i] ?? 0, numbers[i + 1] ?? 0])
  }
  return points.length >= 3 ? points : null
}

export function boxOf(points: readonly Point[]): Box {
  const xs = points.map(([x]) => x)
  const ys = points.map(([, y]) => y)
  const [x, y] = [Math.min(...xs), Math.min(...ys)]
  return { x, y, width: Math.max(...xs) - x, height: Math.max(...ys) - y }
}

/** The parts of a line that lie inside a simple polygon (even-odd rule over its crossings with the edges). */
export function clipToPolygon(line: LineShape, points: readonly Point[]): LineShape[] {
  const [dx, dy] = [line.x2 - line.x1, line.y2 - line.y1]
  const cuts = points
    .flatMap(([ax, ay], index) => {
      const [bx, by] = points[(index + 1) % points.length] ?? [ax, ay]
      const [ex, ey] = [bx - ax, by - ay]
      const cross = dx * ey - dy * ex
      if (cross === 0) return []
      const along = ((ax - line.x1) * ey - (ay - line.y1) * ex) / cross
      const onEdge = ((ax - line.x1) * dy - (ay - line.y1) * dx) / cross
      // Half-open, so that a corner counts for one of its two edges.
      return onEdge >= 0 && onEdge < 1 ? [along] : []
    })
    .sort((a, b) => a - b)
  const parts: LineShape[] = []
  for (let i = 0; i + 1 < cuts.length; i += 2) {
    const [from, to] = [Math.max(0, cuts[i] ?? 0), Math.min(1, cuts[i + 1] ?? 0)]
    if (to > from)
      parts.push({
        ...line,
        x1: line.x1 + from * dx,
        y1: line.y1 + from * dy,
        x2: line.x1 + to * dx,
        y2: line.y1 + to * dy,
      })
  }
  return parts
}
