import { drawFeedback, feedbackOf } from './amplifier-cells.ts'
import { feed } from './feed.ts'
import { farEnd, type AmplifierCell, type Device } from './graph.ts'
import { drawRow, snap, type Way } from './row.ts'
import { LEAD, LENGTH, type Sheet, type Spot } from './sheet.ts'
import { AMPLIFIER } from './symbols.ts'

const { pin: PIN } = AMPLIFIER
const BACK = 24
const TIP = 16
const FEEDBACK = 72

interface Leg {
  cell: AmplifierCell
  way: Way
  start: Spot
}

/**
 * Two amplifiers, mirrored about the gain resistor between their − inputs. Their middles are 104 px above and below
 * `y`. Returns both outputs.
 */
export function drawInputPair(
  sheet: Sheet,
  upper: Leg,
  lower: Leg,
  gain: Device,
  y: number,
): Map<string, Spot> {
  const ends = [upper, lower].map((leg) => drawRow(sheet, leg.way, leg.start))
  const begin = Math.max(...ends.map((e) => e.x))
  const column = begin + snap(sheet.labelWidth(gain) + 24)
  const back = column + BACK
  const outs = [upper, lower].map(({ cell }, i): [string, Spot] => {
    const plusAbove = i === 0
    const away = plusAbove ? 1 : -1
    const middle = y - away * 104
    const end = ends[i] ?? { x: begin, y: middle }
    const pins = sheet.amplifier(cell, back, middle, plusAbove)
    const out = { x: pins.out.x + TIP, y: middle }
    sheet.wire(cell.p, [end.x, end.y], [end.x, pins.plus.y], [back, pins.plus.y])
    sheet.wire(cell.out, [pins.out.x, middle], [out.x, middle])
    sheet.wire(cell.m, [back, pins.minus.y], [column, pins.minus.y])
    drawFeedback(sheet, cell, feedbackOf(sheet, cell), {
      minus: { x: column, y: pins.minus.y },
      out,
      y: middle + away * FEEDBACK,
      step: away * -48,
    })
    return [cell.out, out]
  })
  const top = y - 104 + FEEDBACK
  const bottom = y + 104 - FEEDBACK
  sheet.wire(upper.cell.m, [column, top], [column, y - LENGTH / 2])
  sheet.down(gain, upper.cell.m, { x: column, y: y - LENGTH / 2 }, 'left')
  sheet.wire(lower.cell.m, [column, y + LENGTH / 2], [column, bottom])
  return new Map(outs)
}

/**
 * Two amplifiers with one string of resistors below them: level, − input of the first, its output, − input of the
 * second, its output. The second takes the upper row. Returns its output.
 */
export function drawTwoAmplifiers(
  sheet: Sheet,
  first: Leg,
  second: Leg,
  parts: { onward: Device; gain: Device | null },
  y: number,
): Spot {
  const string = y + 144
  const rows = {
    second: drawRow(sheet, second.way, second.start),
    first: drawRow(sheet, first.way, first.start),
  }
  const m1 = first.cell.m
  const o1 = first.cell.out
  const m2 = second.cell.m

  const column1 = rows.first.x + LEAD
  const back1 = column1 + BACK
  const middle1 = rows.first.y + PIN
  const pins1 = sheet.amplifier(first.cell, back1, middle1, true)
  const out1 = { x: pins1.out.x + TIP, y: middle1 }
  const feedback1 = feedbackOf(sheet, first.cell)
  sheet.wire(first.cell.p, [rows.first.x, rows.first.y], [back1, rows.first.y])
  sheet.wire(o1, [pins1.out.x, middle1], [out1.x, middle1])
  sheet.wire(m1, [back1, pins1.minus.y], [column1, pins1.minus.y])

  // What stays at the − input of the first after its feedback and the gain resistor leads to the level.
  const level = sheet.openAt(m1).find((d) => !feedback1.includes(d) && d !== parts.gain)
  drawFeedback(sheet, first.cell, feedback1, {
    minus: { x: column1, y: pins1.minus.y },
    out: out1,
    y: string,
    step: 48,
  })
  const gainLeft = column1 - LEAD
  sheet.wire(m1, [gainLeft, string], [column1, string])
  if (level) {
    const node = farEnd(level, m1)
    const left = { x: gainLeft - LEAD - LENGTH, y: string }
    sheet.wire(m1, [gainLeft - LEAD, string], [gainLeft, string])
    sheet.across(level, node, left)
    sheet.wire(node, [left.x, string], [left.x - LEAD, string])
    feed(sheet, node, { x: left.x - LEAD, y: string })
  }

  const right = out1.x + BACK
  sheet.wire(o1, [out1.x, string], [right, string])
  const between = sheet.across(parts.onward, o1, { x: right, y: string })
  const gainRight = between.x + LEAD
  const column2 = gainRight + LEAD
  sheet.wire(m2, [between.x, string], [gainRight, string])
  sheet.wire(m2, [gainRight, string], [column2, string])
  const back2 = column2 + BACK
  const middle2 = rows.second.y + PIN
  const pins2 = sheet.amplifier(second.cell, back2, middle2, true)
  const out2 = { x: pins2.out.x + TIP, y: middle2 }
  sheet.wire(second.cell.p, [rows.second.x, rows.second.y], [back2, rows.second.y])
  sheet.wire(second.cell.out, [pins2.out.x, middle2], [out2.x, middle2])
  sheet.wire(m2, [back2, pins2.minus.y], [column2, pins2.minus.y])
  drawFeedback(sheet, second.cell, feedbackOf(sheet, second.cell), {
    minus: { x: column2, y: pins2.minus.y },
    out: out2,
    y: string,
    step: 48,
  })

  if (parts.gain) {
    const row = string + 48
    const left = { x: (gainLeft + gainRight - LENGTH) / 2, y: row }
    sheet.wire(m1, [gainLeft, string], [gainLeft, row], [left.x, row])
    const end = sheet.across(parts.gain, m1, left)
    sheet.wire(m2, [end.x, row], [gainRight, row], [gainRight, string])
  }
  return out2
}
