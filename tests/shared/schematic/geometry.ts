import type { Box, Point } from '#shared/drawings/shapes.ts'

/** Plain geometry for checking a drawing, written apart from the code that draws. */

export const corners = (box: Box): Point[] => [
  [box.x, box.y],
  [box.x + box.width, box.y],
  [box.x + box.width, box.y + box.height],
  [box.x, box.y + box.height],
]

/** Whether two convex outlines share more than `tolerance` px in every direction (separating axes). */
export function overlap(a: readonly Point[], b: readonly Point[], tolerance = 0.4): boolean {
  return [a, b].every((shape) =>
    shape.every((p, i) => {
      const q = shape[(i + 1) % shape.length] ?? p
      const length = Math.hypot(q[0] - p[0], q[1] - p[1])
      if (length === 0) return true
      const [nx, ny] = [-(q[1] - p[1]) / length, (q[0] - p[0]) / length]
      const reach = (points: readonly Point[]) => {
        const at = points.map(([x, y]) => x * nx + y * ny)
        return [Math.min(...at), Math.max(...at)] as const
      }
      const [la, ha] = reach(a)
      const [lb, hb] = reach(b)
      return Math.min(ha, hb) - Math.max(la, lb) > tolerance
    }),
  )
}

export type Segment = readonly [Point, Point]

export const segmentsOf = (points: readonly Point[]): Segment[] =>
  points.slice(1).map((to, i) => [points[i] ?? to, to] as const)

/** A segment as a thin outline. */
export function band([[x1, y1], [x2, y2]]: Segment, half = 0.5): Point[] {
  const length = Math.hypot(x2 - x1, y2 - y1)
  const [nx, ny] = [(-(y2 - y1) / length) * half, ((x2 - x1) / length) * half]
  return [
    [x1 + nx, y1 + ny],
    [x2 + nx, y2 + ny],
    [x2 - nx, y2 - ny],
    [x1 - nx, y1 - ny],
  ]
}

export const samePlace = (a: Point, b: Point): boolean => Math.hypot(a[0] - b[0], a[1] - b[1]) < 0.01

/** Whether a point lies on a segment, its ends excluded. */
export function liesInside(p: Point, [a, b]: Segment): boolean {
  if (samePlace(p, a) || samePlace(p, b)) return false
  const whole = Math.hypot(b[0] - a[0], b[1] - a[1])
  const parts = Math.hypot(p[0] - a[0], p[1] - a[1]) + Math.hypot(p[0] - b[0], p[1] - b[1])
  return parts - whole < 0.001
}

/** Whether two segments cross, or lie on one another, other than at a common end. */
export function cross(a: Segment, b: Segment): boolean {
  const side = (p: Point, [q, r]: Segment) => (r[0] - q[0]) * (p[1] - q[1]) - (r[1] - q[1]) * (p[0] - q[0])
  const [a0, a1, b0, b1] = [side(a[0], b), side(a[1], b), side(b[0], a), side(b[1], a)]
  const apart = (x: number, y: number) => x * y < -1e-6
  if (apart(a0, a1) && apart(b0, b1)) return true
  const along = [a0, a1, b0, b1].every((v) => Math.abs(v) < 1e-6)
  if (!along) return false
  const middle = (s: Segment): Point => [(s[0][0] + s[1][0]) / 2, (s[0][1] + s[1][1]) / 2]
  return liesInside(middle(a), b) || liesInside(middle(b), a)
}
