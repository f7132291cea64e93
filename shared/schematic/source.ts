import { text } from '#shared/drawings/shapes.ts'
import { GROUND } from '#shared/network/types.ts'
import { toRkm } from '#shared/units/rkm.ts'
import { farEnd, findBridge, type Bridge } from './graph.ts'
import { LEAD, LENGTH, type Sheet, type Spot } from './sheet.ts'

/** A row that the first stage wants its signal on. */
export interface Demand {
  node: string
  y: number
}

/** Half the diagonal of the bridge. */
const HALF = 48
const REACH = 20

/** Draws what the signal comes from, at the left, and returns where each row begins. */
export function drawSource(sheet: Sheet, demands: readonly Demand[]): Map<string, Spot> {
  const bridge = findBridge(sheet.graph.devices)
  const legs = demands.filter((d) => bridge?.legs.includes(d.node))
  if (bridge && legs.length === 2) return drawBridge(sheet, bridge, legs)
  return new Map(
    demands.map(({ node, y }) => {
      sheet.terminal(node, 0, y, 'left')
      return [node, { x: 0, y }]
    }),
  )
}

/** Nodes at which a signal can begin. */
export function signalNodes(sheet: Sheet): Map<string, Spot> {
  const bridge = findBridge(sheet.graph.devices)
  const nodes = [...sheet.graph.signals.keys(), ...(bridge ? bridge.legs : [])]
  return new Map(nodes.map((node) => [node, { x: 0, y: 0 }]))
}

function drawBridge(sheet: Sheet, bridge: Bridge, legs: readonly Demand[]): Map<string, Spot> {
  const [upper, lower] = [...legs].sort((a, b) => a.y - b.y)
  if (!upper || !lower) throw new RangeError('a bridge has two legs')
  const y = (upper.y + lower.y) / 2
  const corner = {
    left: { x: 0, y },
    top: { x: HALF, y: y - HALF },
    right: { x: 2 * HALF, y },
    bottom: { x: HALF, y: y + HALF },
  }
  const arm = (
    first: Spot,
    second: Spot,
    from: string,
    to: string,
    which: readonly Bridge['upper'][number][],
  ) => {
    const device = which.find((d) => (d.a === from && d.b === to) || (d.a === to && d.b === from))
    if (!device) throw new RangeError(`no arm of the bridge between ${from} and ${to}`)
    const centre = { x: (first.x + second.x) / 2, y: (first.y + second.y) / 2 }
    const angle = Math.atan2(second.y - first.y, second.x - first.x)
    const end = (sign: 1 | -1) => ({
      x: Math.round((centre.x + sign * REACH * Math.cos(angle)) * 1000) / 1000,
      y: Math.round((centre.y + sign * REACH * Math.sin(angle)) * 1000) / 1000,
    })
    const [start, stop] = [end(-1), end(1)]
    sheet.slanted(
      device,
      [
        [from, start],
        [to, stop],
      ],
      centre,
      (angle * 180) / Math.PI,
      REACH,
    )
    sheet.wire(from, [first.x, first.y], [start.x, start.y])
    sheet.wire(to, [stop.x, stop.y], [second.x, second.y])
  }
  arm(corner.left, corner.top, bridge.top, upper.node, bridge.upper)
  arm(corner.left, corner.bottom, bridge.top, lower.node, bridge.upper)
  arm(corner.top, corner.right, upper.node, GROUND, bridge.lower)
  arm(corner.bottom, corner.right, lower.node, GROUND, bridge.lower)
  labelBridge(sheet, bridge, corner.left.x + HALF, y)

  sheet.wire(GROUND, [corner.right.x, y], [corner.right.x + 8, y])
  sheet.ground(corner.right.x + 8, y)
  drawExcitation(sheet, bridge.top, corner.left)
  const begin = corner.right.x + 24
  return new Map(
    [
      { row: upper, from: corner.top },
      { row: lower, from: corner.bottom },
    ].map(({ row, from }) => {
      const outside = row === upper ? row.y <= from.y : row.y >= from.y
      const turn = outside ? from.x : begin - 8
      sheet.wire(row.node, [from.x, from.y], [turn, from.y], [turn, row.y], [begin, row.y])
      return [row.node, { x: begin, y: row.y }]
    }),
  )
}

/** The arms differ by the signal; what is printed is their common value. */
function labelBridge(sheet: Sheet, bridge: Bridge, x: number, y: number): void {
  const arms = [...bridge.upper, ...bridge.lower]
  const mean = arms.reduce((sum, d) => sum + d.element.value, 0) / arms.length
  const first = sheet.parts.find((p) => p.ref === bridge.upper[0].element.ref)
  first?.labels.push(
    text('label', x, y - 2, 'bridge', 'middle'),
    text('value', x, y + 10, toRkm(mean, 'Ω', 3), 'middle'),
  )
}

function drawExcitation(sheet: Sheet, top: string, corner: Spot): void {
  const held = sheet.graph.fixed.has(top)
  const lead = { x: corner.x - LEAD, y: corner.y }
  sheet.wire(top, [corner.x, corner.y], [lead.x, lead.y])
  if (held) {
    sheet.terminal(top, lead.x, lead.y, 'left')
    return
  }
  const series = sheet.openAt(top).find((d) => sheet.graph.fixed.has(farEnd(d, top)))
  if (!series) return
  const node = farEnd(series, top)
  const left = { x: lead.x - LENGTH, y: lead.y }
  sheet.across(series, node, left)
  sheet.wire(node, [left.x, left.y], [left.x - LEAD, left.y])
  sheet.terminal(node, left.x - LEAD, left.y, 'left')
}
