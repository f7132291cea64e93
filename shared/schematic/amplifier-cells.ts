import { text } from '#shared/drawings/shapes.ts'
import { feed } from './feed.ts'
import { farEnd, type AmplifierCell, type Device, type InstrumentationCell } from './graph.ts'
import { drawRow, snap, type Way } from './row.ts'
import { LEAD, LENGTH, type Sheet, type Spot } from './sheet.ts'
import { AMPLIFIER, INSTRUMENTATION, instrumentationSymbol } from './symbols.ts'

const { half: HALF, pin: PIN } = AMPLIFIER
/** From the column of the − input to the back of the triangle, and from its tip to the column of the output. */
const BACK = 24
const TIP = 16
/** From the middle of an amplifier to its feedback row. */
const FEEDBACK = 72
/** Between rows of parts that lie in parallel. */
const ROW = 48

export interface Arrival {
  way: Way
  start: Spot
}

/** Parts between the output and the − input. */
export const feedbackOf = (sheet: Sheet, cell: AmplifierCell): Device[] =>
  sheet.openAt(cell.m).filter((d) => farEnd(d, cell.m) === cell.out && cell.m !== cell.out)

/**
 * Feedback parts lying between the − column and the output column, the first on row `y`, others `step` px further each.
 * Both columns are drawn from `from` and `out` to the last row.
 */
export function drawFeedback(
  sheet: Sheet,
  cell: AmplifierCell,
  devices: readonly Device[],
  columns: { minus: Spot; out: Spot; y: number; step: number },
): void {
  const { minus, out, y, step } = columns
  let [fromMinus, fromOut] = [minus.y, out.y]
  devices.forEach((device, i) => {
    const row = y + i * step
    const left = { x: minus.x + (out.x - minus.x - LENGTH) / 2, y: row }
    sheet.wire(cell.m, [minus.x, fromMinus], [minus.x, row])
    sheet.wire(cell.m, [minus.x, row], [left.x, row])
    const right = sheet.across(device, cell.m, left)
    sheet.wire(cell.out, [right.x, row], [out.x, row])
    sheet.wire(cell.out, [out.x, row], [out.x, fromOut])
    fromMinus = row
    fromOut = row
  })
}

/** From a row to a part that leads over it from a node of the row to the output. */
const OVER = 56

/**
 * Parts from a node of the row to the output (filter sections), lying above row `y`. Both columns are drawn, the right
 * one down to `out`.
 */
function drawOver(
  sheet: Sheet,
  cell: AmplifierCell,
  spots: ReadonlyMap<string, Spot>,
  out: Spot,
  y: number,
): boolean {
  let row = y
  for (const [node, spot] of spots) {
    if (node === cell.m || node === cell.out) continue
    for (const device of sheet.openAt(node).filter((d) => farEnd(d, node) === cell.out)) {
      const left = { x: snap((spot.x + out.x - LENGTH) / 2), y: row }
      sheet.wire(node, [spot.x, spot.y], [spot.x, row], [left.x, row])
      const right = sheet.across(device, node, left)
      sheet.wire(cell.out, [right.x, row], [out.x, row], [out.x, out.y])
      row -= ROW
    }
  }
  return row !== y
}

/** Signal at the + input: it lies above, the feedback below, what the − input hangs on further below. */
export function drawSignalAtPlus(sheet: Sheet, cell: AmplifierCell, way: Way, start: Spot): Spot {
  const feedback = feedbackOf(sheet, cell)
  const spots = new Map<string, Spot>()
  const end = drawRow(sheet, way, start, new Set(), spots)
  const y = end.y + PIN
  if (cell.m === cell.out) {
    const back = end.x + BACK
    const pins = sheet.amplifier(cell, back, y, true)
    const out = { x: pins.out.x + TIP, y }
    const loop = y + HALF + LEAD
    sheet.wire(cell.p, [end.x, end.y], [back, end.y])
    sheet.wire(cell.out, [pins.out.x, y], [out.x, y])
    sheet.wire(
      cell.out,
      [out.x, y],
      [out.x, loop],
      [back - LEAD, loop],
      [back - LEAD, pins.minus.y],
      [back, pins.minus.y],
    )
    const beyond = { x: out.x + TIP, y }
    if (!drawOver(sheet, cell, spots, beyond, end.y - OVER)) return out
    sheet.wire(cell.out, [out.x, y], [beyond.x, y])
    return beyond
  }
  const column = end.x + LEAD
  const back = column + BACK
  const pins = sheet.amplifier(cell, back, y, true)
  const out = { x: pins.out.x + TIP, y }
  const row = y + FEEDBACK
  sheet.wire(cell.p, [end.x, end.y], [back, end.y])
  sheet.wire(cell.out, [pins.out.x, y], [out.x, y])
  sheet.wire(cell.m, [back, pins.minus.y], [column, pins.minus.y])
  const [shunt] = sheet.openAt(cell.m).filter((d) => !feedback.includes(d))
  drawFeedback(sheet, cell, feedback, { minus: { x: column, y: pins.minus.y }, out, y: row, step: ROW })
  if (shunt) {
    // Beside a second feedback row the column below is taken.
    const top = feedback.length > 1 ? { x: column - BACK, y: row - BACK } : { x: column, y: row }
    if (top.x !== column) sheet.wire(cell.m, [column, top.y], [top.x, top.y])
    sheet.wire(cell.m, [top.x, top.y], [top.x, top.y + LEAD])
    const foot = sheet.down(shunt, cell.m, { x: top.x, y: top.y + LEAD }, top.x === column ? 'right' : 'left')
    feed(sheet, farEnd(shunt, cell.m), foot)
  }
  return out
}

/** Signal at the − input: it lies above with the feedback over it, the + input is fed from below. */
export function drawSignalAtMinus(sheet: Sheet, cell: AmplifierCell, way: Way, start: Spot): Spot {
  const feedback = feedbackOf(sheet, cell)
  const spots = new Map<string, Spot>()
  const end = drawRow(sheet, way, start, new Set(feedback), spots)
  const y = end.y + PIN
  const column = end.x + 8
  const back = column + BACK
  const pins = sheet.amplifier(cell, back, y, false)
  const out = { x: pins.out.x + TIP, y }
  sheet.wire(cell.m, [end.x, end.y], [column, end.y])
  sheet.wire(cell.m, [column, end.y], [back, end.y])
  sheet.wire(cell.out, [pins.out.x, y], [out.x, y])
  drawFeedback(sheet, cell, feedback, { minus: { x: column, y: end.y }, out, y: y - FEEDBACK, step: -ROW })
  const last = y - FEEDBACK - (feedback.length - 1) * ROW
  drawOver(sheet, cell, spots, { x: out.x, y: last }, last - ROW)
  const foot = { x: back - LEAD, y: pins.plus.y }
  sheet.wire(cell.p, [back, foot.y], [foot.x, foot.y])
  feed(sheet, cell.p, foot)
  return out
}

/** Signal at both inputs: − above in one line with the feedback, + below with its leg hanging down. */
export function drawDifference(
  sheet: Sheet,
  cell: AmplifierCell,
  y: number,
  plus: Arrival,
  minus: Arrival,
): Spot {
  const feedback = feedbackOf(sheet, cell)
  const legs = sheet.openAt(cell.p).filter((d) => !plus.way.steps.some((s) => s.device === d))
  const above = drawRow(sheet, minus.way, minus.start, new Set(feedback))
  const below = drawRow(sheet, plus.way, plus.start, new Set(legs))
  const column = Math.max(above.x, below.x) + 8
  const back = column + BACK
  const pins = sheet.amplifier(cell, back, y, false)
  const out = { x: pins.out.x + TIP, y }
  sheet.wire(cell.out, [pins.out.x, y], [out.x, y])
  sheet.wire(cell.m, [above.x, above.y], [column, above.y])
  sheet.wire(cell.m, [column, above.y], [column, pins.minus.y], [back, pins.minus.y])
  drawFeedback(sheet, cell, feedback, { minus: { x: column, y: above.y }, out, y: above.y, step: -ROW })
  sheet.wire(cell.p, [below.x, below.y], [column, below.y])
  sheet.wire(cell.p, [column, below.y], [column, pins.plus.y], [back, pins.plus.y])
  const [leg] = legs
  if (leg) {
    sheet.wire(cell.p, [column, below.y], [column, below.y + LEAD])
    const foot = sheet.down(leg, cell.p, { x: column, y: below.y + LEAD })
    feed(sheet, farEnd(leg, cell.p), foot)
  }
  return out
}

/** One integrated part: gain resistor between its pins at the back, reference pin below. */
export function drawInstrumentation(
  sheet: Sheet,
  cell: InstrumentationCell,
  y: number,
  plus: Arrival,
  minus: Arrival,
): Spot {
  const { width, pin, gain, level, half } = INSTRUMENTATION
  const resistor = sheet.openAt(cell.gainP).find((d) => farEnd(d, cell.gainP) === cell.gainM)
  const above = drawRow(sheet, plus.way, plus.start)
  const below = drawRow(sheet, minus.way, minus.start)
  const spare = resistor ? snap(sheet.labelWidth(resistor) + 24) + BACK : BACK
  const back = Math.max(above.x, below.x) + spare
  const symbol = instrumentationSymbol(back, y)
  const foot = { x: back + level, y: y + (half * (width - level)) / width }
  const gainPins = resistor
    ? [
        { name: 'RG+', node: cell.gainP, x: back, y: y - gain },
        { name: 'RG−', node: cell.gainM, x: back, y: y + gain },
      ]
    : []
  sheet.parts.push({
    ref: cell.ref,
    kind: 'instrumentation-amplifier',
    stage: cell.stage,
    value: cell.name,
    pins: [
      { name: '+', node: cell.p, x: back, y: y - pin },
      { name: '−', node: cell.m, x: back, y: y + pin },
      ...gainPins,
      { name: 'REF', node: cell.level, ...foot },
      { name: 'out', node: cell.out, x: back + width, y },
    ],
    body: symbol.body,
    shapes: symbol.shapes,
    labels: [
      text('label', back + 52, y - 48, cell.ref, 'start', { on: 'sheet' }),
      text('pin-name', foot.x + 5, foot.y + 13, 'REF', 'start', { on: 'sheet' }),
    ],
  })
  sheet.wire(cell.p, [above.x, above.y], [back, above.y])
  sheet.wire(cell.m, [below.x, below.y], [back, below.y])
  if (resistor) {
    const x = back - BACK
    sheet.down(resistor, cell.gainP, { x, y: y - gain }, 'left')
    sheet.wire(cell.gainP, [x, y - gain], [back, y - gain])
    sheet.wire(cell.gainM, [x, y + gain], [back, y + gain])
  }
  sheet.wire(cell.level, [foot.x, foot.y], [foot.x, foot.y + LEAD + 4])
  feed(sheet, cell.level, { x: foot.x, y: foot.y + LEAD + 4 })
  return { x: back + width, y }
}
