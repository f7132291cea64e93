import { GROUND } from '#shared/network/types.ts'
import { farEnd, type Device } from './graph.ts'
import { feed } from './feed.ts'
import { LEAD, LENGTH, type Sheet, type Spot } from './sheet.ts'

/** A way from an open end of the drawing to a pin: parts in series and the nodes between them. */
export interface Way {
  from: string
  steps: { device: Device; node: string }[]
}

/** Shortest way from one of the open ends to `pin` through parts that are not drawn yet; null where there is none. */
export function findWay(sheet: Sheet, pin: string, ends: ReadonlyMap<string, Spot>): Way | null {
  const { graph } = sheet
  const outs = new Set(graph.cells.map((c) => c.out))
  const closed = (node: string) => node === GROUND || graph.fixed.has(node) || outs.has(node)
  const seen = new Set([pin])
  let front: Way[] = [{ from: pin, steps: [] }]
  while (front.length > 0) {
    const arrived = front.find((way) => ends.has(way.from))
    if (arrived) return arrived
    front = front.flatMap((way) => {
      // Ground, a reference or another output on the way ends it.
      if (closed(way.from)) return []
      return sheet.openAt(way.from).flatMap((device) => {
        const node = farEnd(device, way.from)
        if (seen.has(node)) return []
        seen.add(node)
        return [{ from: node, steps: [{ device, node: way.from }, ...way.steps] }]
      })
    })
  }
  return null
}

/** Space between a part on a row and what comes next. */
const GAP = 16

/**
 * Draws a way on one row, parts in series lying, what goes to ground or to a reference hanging below.
 * `keep` names parts that belong elsewhere (feedback); `spots` takes the place of each node behind a part. Returns where
 * the row ends.
 */
export function drawRow(
  sheet: Sheet,
  way: Way,
  start: Spot,
  keep: ReadonlySet<Device> = new Set(),
  spots = new Map<string, Spot>(),
): Spot {
  const reserved = new Set([...keep, ...way.steps.map((s) => s.device)])
  let at = drawShunts(sheet, way.from, start, reserved)
  let node = way.from
  for (const { device, node: next } of way.steps) {
    const spare = Math.max(0, (sheet.labelWidth(device) - LENGTH) / 2 + 4)
    const left = { x: at.x + Math.max(LEAD, snap(spare)), y: at.y }
    sheet.wire(node, [at.x, at.y], [left.x, left.y])
    const right = sheet.across(device, node, left)
    const end = { x: right.x + Math.max(GAP, snap(spare)), y: right.y }
    sheet.wire(next, [right.x, right.y], [end.x, end.y])
    spots.set(next, end)
    at = drawShunts(sheet, next, end, reserved)
    node = next
  }
  return at
}

/** Parts from a node of the row to ground or to a reference, each on a column of its own. */
function drawShunts(sheet: Sheet, node: string, start: Spot, reserved: ReadonlySet<Device>): Spot {
  let at = start
  for (const device of sheet.openAt(node).filter((d) => !reserved.has(d))) {
    const next = farEnd(device, node)
    if (next !== GROUND && !sheet.graph.fixed.has(next)) continue
    const column = { x: at.x + 8, y: at.y }
    sheet.wire(node, [at.x, at.y], [column.x, column.y])
    sheet.wire(node, [column.x, column.y], [column.x, column.y + LEAD])
    const foot = sheet.down(device, node, { x: column.x, y: column.y + LEAD })
    feed(sheet, next, foot, 'beside')
    const beside = Math.max(
      sheet.labelWidth(device) + 10,
      next === GROUND ? 8 : sheet.terminalWidth(next) / 2,
    )
    at = { x: column.x + snap(beside + 12), y: column.y }
    sheet.wire(node, [column.x, column.y], [at.x, at.y])
  }
  return at
}

/** Up to the next line of the grid. */
export const snap = (length: number): number => Math.ceil(length / 8) * 8
