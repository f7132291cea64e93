import { GROUND } from '#shared/network/types.ts'
import { farEnd, type AmplifierCell, type Device } from './graph.ts'
import { LEAD, LENGTH, type Sheet, type Spot } from './sheet.ts'
import { AMPLIFIER } from './symbols.ts'

/**
 * Ends a column that comes down at `spot`: in ground, at the terminal of a held node, in a divider, or at the output of
 * the follower that makes the level. Returns false where the node is none of these.
 */
export function feed(sheet: Sheet, node: string, spot: Spot, words: 'below' | 'beside' = 'below'): boolean {
  if (node === GROUND) {
    sheet.ground(spot.x, spot.y)
    return true
  }
  if (sheet.graph.fixed.has(node)) {
    sheet.wire(node, [spot.x, spot.y], [spot.x, spot.y + 8])
    sheet.terminal(node, spot.x, spot.y + 8, words)
    return true
  }
  const follower = levelFollower(sheet, node)
  if (follower) {
    sheet.later.push(() => drawFollower(sheet, follower, spot))
    return true
  }
  if (isShared(sheet, node)) {
    sheet.wire(node, [spot.x, spot.y], [spot.x, spot.y + 8])
    sheet.terminal(node, spot.x, spot.y + 8, words)
    const source = readDivider(sheet, node)
    if (source) sheet.later.push(() => drawNamedDivider(sheet, node, source, spot))
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

/** A level that several amplifiers take is named at each of them instead of being wired. */
const isShared = (sheet: Sheet, node: string): boolean =>
  sheet.graph.cells.filter((c) => c.kind === 'amplifier' && c.p === node && c.m !== c.out).length > 1

interface Divider {
  upper: Device
  held: string
  lower: Device
  /** Capacitor beside the lower leg. */
  bypass: Device | null
}

/** One resistor to a held node and one to ground, with or without a capacitor beside it, and nothing else. */
function readDivider(sheet: Sheet, node: string): Divider | null {
  const open = sheet.openAt(node)
  const down = open.filter((d) => farEnd(d, node) === GROUND)
  const lower = down.find((d) => d.element.kind === 'resistor')
  const bypass = down.find((d) => d.element.kind === 'capacitor') ?? null
  const upper = open.find((d) => sheet.graph.fixed.has(farEnd(d, node)))
  if (!lower || !upper || open.length !== (bypass ? 3 : 2)) return null
  return { upper, lower, held: farEnd(upper, node), bypass }
}

/** From the tap: the upper leg to the left, to its terminal; the lower leg down to ground. */
function drawDivider(sheet: Sheet, node: string, divider: Divider, spot: Spot): void {
  const tap = { x: spot.x, y: Math.max(spot.y + LEAD, tapBelow(sheet, divider, spot.x)) }
  sheet.wire(node, [spot.x, spot.y], [tap.x, tap.y])
  drawLegs(sheet, node, divider, tap)
}

/** The divider of a level that is named: by itself, under everything. */
function drawNamedDivider(sheet: Sheet, node: string, divider: Divider, spot: Spot): void {
  if (sheet.isPlaced(divider.upper)) return
  const tap = { x: spot.x, y: tapBelow(sheet, divider, spot.x) + 2 * LEAD }
  sheet.wire(node, [tap.x, tap.y], [tap.x, tap.y - 8])
  sheet.terminal(node, tap.x, tap.y - 8, 'above')
  drawLegs(sheet, node, divider, tap)
}

/** Where a divider at column `x` lies clear of what is drawn. */
function tapBelow(sheet: Sheet, { held, lower, bypass }: Divider, x: number): number {
  const reach = LEAD + LENGTH + LEAD + sheet.terminalWidth(held) + 24
  const right = bypass ? x + sheet.labelWidth(lower) + sheet.labelWidth(bypass) + 48 : x - 8
  return Math.ceil((sheet.bottomWithin(x - reach, right) + 40) / 8) * 8
}

function drawLegs(sheet: Sheet, node: string, { upper, held, lower, bypass }: Divider, tap: Spot): void {
  // With a bypass four ways would meet: it leaves a little lower.
  const fork = { x: tap.x, y: bypass ? tap.y + 8 : tap.y }
  sheet.wire(node, [tap.x, tap.y], [fork.x, fork.y])
  sheet.wire(node, [fork.x, fork.y], [fork.x, fork.y + LEAD])
  const foot = sheet.down(lower, node, { x: fork.x, y: fork.y + LEAD })
  sheet.ground(foot.x, foot.y)
  const right = tap.x - LEAD
  const left = { x: right - LENGTH, y: tap.y }
  sheet.wire(node, [tap.x, tap.y], [right, tap.y])
  sheet.across(upper, held, left)
  sheet.wire(held, [left.x, left.y], [left.x - 8, left.y])
  sheet.terminal(held, left.x - 8, left.y, 'left')
  if (!bypass) return
  const column = fork.x + Math.ceil((sheet.labelWidth(lower) + 24) / 8) * 8
  sheet.wire(node, [fork.x, fork.y], [column, fork.y], [column, fork.y + LEAD])
  const end = sheet.down(bypass, node, { x: column, y: fork.y + LEAD })
  sheet.ground(end.x, end.y)
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
