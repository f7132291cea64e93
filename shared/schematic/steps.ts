import { farEnd, type AmplifierCell, type Cell, type Device, type InstrumentationCell } from './graph.ts'
import { drawInputPair, drawTwoAmplifiers } from './amplifier-pairs.ts'
import {
  drawDifference,
  drawInstrumentation,
  drawSignalAtMinus,
  drawSignalAtPlus,
} from './amplifier-cells.ts'
import { findWay, type Way } from './row.ts'
import type { Sheet, Spot } from './sheet.ts'

/** The next thing to draw in signal order: what it wants on which row, and how it is drawn around its middle. */
export interface Step {
  /** Open ends that it takes, with their rows above (−) or below its middle. */
  demands: { node: string; dy: number }[]
  draw(y: number, ends: ReadonlyMap<string, Spot>): Map<string, Spot>
}

/** The pattern that takes up the open ends next; null when no amplifier of the signal is left. */
export function nextStep(sheet: Sheet, ends: ReadonlyMap<string, Spot>): Step | null {
  const open = sheet.graph.cells.filter((c) => !sheet.parts.some((p) => p.ref === c.ref))
  const way = (node: string) => findWay(sheet, node, ends)
  const reached = open
    .filter((c): c is AmplifierCell => c.kind === 'amplifier')
    .map((cell) => ({ cell, plus: way(cell.p), minus: cell.m === cell.out ? null : way(cell.m) }))
  const both = pairStep(sheet, reached)
  if (both) return both
  for (const { cell, plus, minus } of reached) {
    if (plus && minus) return differenceStep(sheet, cell, plus, minus)
    if (plus) return singleStep(sheet, cell, plus, drawSignalAtPlus)
    if (minus) return singleStep(sheet, cell, minus, drawSignalAtMinus)
  }
  for (const cell of open) {
    if (cell.kind !== 'instrumentation') continue
    const [plus, minus] = [way(cell.p), way(cell.m)]
    if (plus && minus) return instrumentationStep(sheet, cell, plus, minus)
  }
  return null
}

function singleStep(
  sheet: Sheet,
  cell: AmplifierCell,
  way: Way,
  draw: (sheet: Sheet, cell: AmplifierCell, way: Way, start: Spot) => Spot,
): Step {
  return {
    demands: [{ node: way.from, dy: 0 }],
    draw: (_y, ends) => new Map([[cell.out, draw(sheet, cell, way, spotOf(ends, way.from))]]),
  }
}

function differenceStep(sheet: Sheet, cell: AmplifierCell, plus: Way, minus: Way): Step {
  return {
    demands: [
      { node: minus.from, dy: -56 },
      { node: plus.from, dy: 56 },
    ],
    draw: (y, ends) =>
      new Map([
        [
          cell.out,
          drawDifference(
            sheet,
            cell,
            y,
            { way: plus, start: spotOf(ends, plus.from) },
            { way: minus, start: spotOf(ends, minus.from) },
          ),
        ],
      ]),
  }
}

function instrumentationStep(sheet: Sheet, cell: InstrumentationCell, plus: Way, minus: Way): Step {
  return {
    demands: [
      { node: plus.from, dy: -56 },
      { node: minus.from, dy: 56 },
    ],
    draw: (y, ends) =>
      new Map([
        [
          cell.out,
          drawInstrumentation(
            sheet,
            cell,
            y,
            { way: plus, start: spotOf(ends, plus.from) },
            { way: minus, start: spotOf(ends, minus.from) },
          ),
        ],
      ]),
  }
}

interface Reached {
  cell: AmplifierCell
  plus: Way | null
}

/** Two amplifiers that take one leg each and share a gain resistor, or of which one feeds the other's − input. */
function pairStep(sheet: Sheet, reached: readonly Reached[]): Step | null {
  const between = (x: string, y: string): Device | null =>
    sheet.openAt(x).find((d) => farEnd(d, x) === y) ?? null
  for (const a of reached) {
    for (const b of reached) {
      if (a === b || !a.plus || !b.plus) continue
      const [plusA, plusB] = [a.plus, b.plus]
      const onward = between(a.cell.out, b.cell.m)
      const gain = between(a.cell.m, b.cell.m)
      if (onward)
        return {
          demands: [
            { node: plusB.from, dy: -56 },
            { node: plusA.from, dy: 56 },
          ],
          draw: (y, ends) =>
            new Map([
              [
                b.cell.out,
                drawTwoAmplifiers(
                  sheet,
                  { cell: a.cell, way: plusA, start: spotOf(ends, plusA.from) },
                  { cell: b.cell, way: plusB, start: spotOf(ends, plusB.from) },
                  { onward, gain },
                  y,
                ),
              ],
            ]),
        }
      if (gain && !between(b.cell.out, a.cell.m) && leadsToMinus(sheet, a.cell))
        return {
          demands: [
            { node: plusA.from, dy: -120 },
            { node: plusB.from, dy: 120 },
          ],
          draw: (y, ends) =>
            drawInputPair(
              sheet,
              { cell: a.cell, way: plusA, start: spotOf(ends, plusA.from) },
              { cell: b.cell, way: plusB, start: spotOf(ends, plusB.from) },
              gain,
              y,
            ),
        }
    }
  }
  return null
}

/** Whether an output leads through one part to the − input of another amplifier: it then lies above. */
function leadsToMinus(sheet: Sheet, cell: AmplifierCell): boolean {
  const next = sheet.openAt(cell.out).map((d) => farEnd(d, cell.out))
  return sheet.graph.cells.some((c: Cell) => c.ref !== cell.ref && next.includes(c.m))
}

function spotOf(ends: ReadonlyMap<string, Spot>, node: string): Spot {
  const spot = ends.get(node)
  if (!spot) throw new RangeError(`the drawing has no open end at ${node}`)
  return spot
}
