import type { Box, LineShape } from './shapes.ts'
import { line } from './shapes.ts'
import type { LineStyle } from './styles.ts'

/**
 * Hatching of a rectangle as lines cut at its edges, for painters without patterns.
 * `spacing` is the distance between lines measured square to them, px; `angle` in degrees, 45 rises to the right.
 * Lines of neighbouring areas meet, as the hatching starts from the drawing's own origin.
 */
export function hatchLines(box: Box, spacing: number, angle = 45, style: LineStyle = 'pin'): LineShape[] {
  if (!(spacing > 0)) throw new RangeError('the spacing of a hatching must be above 0')
  const turn = (angle * Math.PI) / 180
  // Direction of the lines and their normal; y grows downwards.
  const [dx, dy] = [Math.cos(turn), -Math.sin(turn)]
  const [nx, ny] = [-dy, dx]
  const corners = [
    [box.x, box.y],
    [box.x + box.width, box.y],
    [box.x, box.y + box.height],
    [box.x + box.width, box.y + box.height],
  ] as const
  const reach = corners.map(([x, y]) => x * nx + y * ny)
  const lines: LineShape[] = []
  const last = Math.floor(Math.max(...reach) / spacing)
  for (let i = Math.ceil(Math.min(...reach) / spacing); i <= last; i += 1) {
    const cut = clip(box, [i * spacing * nx, i * spacing * ny], [dx, dy])
    if (cut) lines.push(line(style, ...cut))
  }
  return lines
}

/** The part of an infinite line inside a box (slab method). */
function clip(
  box: Box,
  [px, py]: readonly [number, number],
  [dx, dy]: readonly [number, number],
): [number, number, number, number] | null {
  let from = -Infinity
  let to = Infinity
  for (const [p, d, low, high] of [
    [px, dx, box.x, box.x + box.width],
    [py, dy, box.y, box.y + box.height],
  ] as const) {
    if (Math.abs(d) < 1e-12) {
      if (p < low || p > high) return null
      continue
    }
    const a = (low - p) / d
    const b = (high - p) / d
    from = Math.max(from, Math.min(a, b))
    to = Math.min(to, Math.max(a, b))
  }
  if (!(to - from > 1e-9)) return null
  return [px + from * dx, py + from * dy, px + to * dx, py + to * dy]
}
