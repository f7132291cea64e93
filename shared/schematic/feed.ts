import { GROUND } from '#shared/network/types.ts'
import { farEnd, type AmplifierCell, type Device } from './graph.ts'
import { LEAD, LENGTH, type Sheet, type Spot } from './sheet.ts'
import { AMPLIFIER } from './symbols.ts'

/**
 * Ends a column that comes down at `spot`: in ground, at the terminal of a held node, in a divider, or at the output of
 * the follower that makes the level. Returns false where the node is none of these.
 */
export function feed(sheet: Sheet, node: string, spot: Spot): boolean {
  if (node === GROUND) {
    sheet.ground(spot.x, spot.y)
    return true
  }
  if (sheet.graph.fixed.has(node)) {
    sheet.wire(node, [spot.x, spot.y], [spot.x, spot.y + 8])
    sheet.terminal(node, spot.x, spot.y + 8, 'below')
    return true
  }
  const follower = levelFollower(sheet, node)
  if (follower) {
    sheet.later.push(() => drawFollower(sheet, follower, spot))
    return true
  }
  const divider = readDivider(sheet, node)
  if (divider) {
    // What hangs beside the column is drawn first, so that the divider finds its place under it.
    sheet.later.push(() => drawDivider(sheet, node, divider, spot))
    return true
  }
  return false
}

/** An amplifier that follows a level and has no part in the signal. */
function levelFollower(sheet: Sheet, node: string): AmplifierCell | null {
  const cell = sheet.graph.cells.find((c) => c.out === node)
  if (cell?.kind !== 'amplifier' || cell.m !== cell.out || sheet.parts.some((p) => p.ref === cell.ref))
    return null
  return sheet.graph.fixed.has(cell.p) || readDivider(sheet, cell.p) ? cell : null
}

interface Divider {
  upper: Device
  held: string
  lower: Device
}

/** One part to a held node and one to ground, and at most the part through which we came. */
function readDivider(sheet: Sheet, node: string): Divider | null {
  const open = sheet.openAt(node)
  const lower = open.find((d) => farEnd(d, node) === GROUND)
  const upper = open.find((d) => sheet.graph.fixed.has(farEnd(d, node)))
  if (!lower || !upper || open.length !== 2) return null
  return { upper, lower, held: farEnd(upper, node) }
}

/** From the tap: the upper leg to the left, to its terminal; the lower leg down to ground. */
function drawDivider(sheet: Sheet, node: string, { upper, held, lower }: Divider, spot: Spot): void {
  const tail = sheet.terminalWidth(held) + 24
  const reach = LEAD + LENGTH + LEAD + tail
  const clear = sheet.bottomWithin(spot.x - reach, spot.x - 8) + 40
  const tap = { x: spot.x, y: Math.max(spot.y + LEAD, Math.ceil(clear / 8) * 8) }
  sheet.wire(node, [spot.x, spot.y], [tap.x, tap.y])
  drawLegs(sheet, node, { upper, held, lower }, tap)
}

function drawLegs(sheet: Sheet, node: string, { upper, held, lower }: Divider, tap: Spot): void {
  sheet.wire(node, [tap.x, tap.y], [tap.x, tap.y + LEAD])
  const foot = sheet.down(lower, node, { x: tap.x, y: tap.y + LEAD })
  sheet.ground(foot.x, foot.y)
  const right = tap.x - LEAD
  const left = { x: right - LENGTH, y: tap.y }
  sheet.wire(node, [tap.x, tap.y], [right, tap.y])
  sheet.across(upper, held, left)
  sheet.wire(held, [left.x, left.y], [left.x - 8, left.y])
  sheet.terminal(held, left.x - 8, left.y, 'left')
}

/** Divider and follower below everything that stands at the left of the column, the output arriving from the left. */
function drawFollower(sheet: Sheet, cell: AmplifierCell, spot: Spot): void {
  const { width, pin, half } = AMPLIFIER
  const divider = readDivider(sheet, cell.p)
  const out = spot.x - 24
  const back = out - 8 - width
  const lowerLabel = divider ? sheet.labelWidth(divider.lower) : 0
  const tapX = back - 24 - Math.ceil((lowerLabel + 12) / 8) * 8
  const held = divider?.held ?? cell.p
  const reach = spot.x - tapX + LEAD + LENGTH + LEAD + sheet.terminalWidth(held) + 24
  const clear = sheet.bottomWithin(spot.x - reach, spot.x - 8) + 48
  const y = Math.max(spot.y + LEAD, Math.ceil((clear + half) / 8) * 8)
  const pins = sheet.amplifier(cell, back, y, true)
  sheet.wire(cell.out, [pins.out.x, y], [out, y])
  sheet.wire(cell.out, [out, y], [spot.x, y], [spot.x, spot.y])
  sheet.wire(
    cell.out,
    [out, y],
    [out, y + half + LEAD],
    [back - LEAD, y + half + LEAD],
    [back - LEAD, y + pin],
    [back, y + pin],
  )
  const tap = { x: tapX, y: y - pin }
  sheet.wire(cell.p, [back, tap.y], [tap.x, tap.y])
  if (divider) drawLegs(sheet, cell.p, divider, tap)
  else sheet.terminal(cell.p, tap.x, tap.y, 'left')
}
