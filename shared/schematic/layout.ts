import { circle, line, text, type Shape } from '#shared/drawings/shapes.ts'
import type { Network } from '#shared/network/types.ts'
import { placeConverter } from './converter.ts'
import { findJunctions } from './junctions.ts'
import { listParts } from './listed.ts'
import { readGraph } from './graph.ts'
import { drawRow, findWay } from './row.ts'
import { drawSource, signalNodes } from './source.ts'
import { nextStep } from './steps.ts'
import { Sheet, type Spot } from './sheet.ts'
import { moveDrawing, sizeOf } from './move.ts'
import type { SchematicDrawing, SchematicOptions, SchematicPart } from './types.ts'

const MARGIN = 8
/** Space above the drawing for the chain of stages. */
const CHAIN = 28

/**
 * The schematic of a network, placed from its connections alone: amplifiers from left to right in signal order, series
 * parts on the rows, parts to ground or to a reference hanging down, references and their followers below. Ideal
 * sources are drawn as terminals, supplies not at all. A circuit of another pattern is listed part by part with its
 * nodes named. Lengths in px.
 */
export function layoutSchematic(network: Network, options: SchematicOptions = {}): SchematicDrawing {
  const sheet = new Sheet(readGraph(network), options)
  const complete = drawChain(sheet)
  const drawn = complete ? sheet : listParts(network, options)
  const parts = inSignalOrder(drawn.parts)
  const area = sizeOf({ parts, wires: drawn.wires, terminals: drawn.terminals, shapes: [] })
  // Whole px, so that the grid stays on the pixels of a screen.
  const [dx, dy] = [Math.ceil(MARGIN - area.x), Math.ceil(MARGIN + CHAIN - area.y)]
  const moved = moveDrawing({ parts, wires: drawn.wires, terminals: drawn.terminals }, dx, dy)
  const junctions = findJunctions(moved)
  const chain = complete ? stageChain(moved.parts) : []
  const background = [
    ...moved.wires.map(({ points }): Shape => ({ type: 'polyline', points, style: 'wire' })),
    ...moved.terminals.flatMap((t) => [...t.shapes, ...t.labels]),
    ...junctions.map(({ x, y }) => circle('junction', x, y, 2.2)),
    ...chain,
  ]
  return {
    width: Math.ceil(area.x + area.width + dx + MARGIN),
    height: Math.ceil(area.y + area.height + dy + MARGIN),
    ...moved,
    junctions,
    chain,
    background,
    shapes: [...background, ...moved.parts.flatMap((p) => [...p.shapes, ...p.labels])],
    listed: !complete,
  }
}

/** Draws from the source to the converter; false where a part found no place. */
function drawChain(sheet: Sheet): boolean {
  const { graph } = sheet
  let ends: Map<string, Spot> = signalNodes(sheet)
  let step = nextStep(sheet, ends)
  if (!step) {
    const way = findWay(sheet, graph.output, ends)
    if (!way) return false
    ends = drawSource(sheet, [{ node: way.from, y: 0 }])
  } else {
    ends = drawSource(
      sheet,
      step.demands.map(({ node, dy }) => ({ node, y: dy })),
    )
  }
  while (step) {
    const { demands } = step
    const middle = demands.reduce((sum, d) => sum + (ends.get(d.node)?.y ?? 0) - d.dy, 0) / demands.length
    const outs = step.draw(middle, ends)
    for (const { node } of demands) ends.delete(node)
    for (const [node, spot] of outs) ends.set(node, spot)
    step = nextStep(sheet, ends)
  }
  const tail = findWay(sheet, graph.output, ends)
  const start = tail ? ends.get(tail.from) : undefined
  if (!tail || !start) return false
  const end = drawRow(sheet, tail, start)
  placeConverter(sheet, { x: end.x + 24, y: end.y })
  sheet.wire(graph.output, [end.x, end.y], [end.x + 24, end.y])
  for (let i = 0; i < sheet.later.length; i += 1) sheet.later[i]?.()
  const drawn = new Set(sheet.parts.map((p) => p.ref))
  return graph.devices.every((d) => sheet.isPlaced(d)) && graph.cells.every((c) => drawn.has(c.ref))
}

const stageOrder = ['source', 'S1', 'level', 'S2', 'F1', 'F2', 'F3', 'filter', 'converter']

function inSignalOrder(parts: readonly SchematicPart[]): SchematicPart[] {
  const rank = (stage: string) =>
    stageOrder.includes(stage) ? stageOrder.indexOf(stage) : stageOrder.length - 2
  const left = (p: SchematicPart) => Math.min(...p.body.map(([x]) => x))
  return [...parts].sort((a, b) => rank(a.stage) - rank(b.stage) || left(a) - left(b))
}

const stageNames: Record<string, string> = { filter: 'Filter' }

/** Stages of equal rank as a line with oblique strokes, after the chains of drawing practice. */
function stageChain(parts: readonly SchematicPart[]): Shape[] {
  const spans = stageOrder
    .filter((stage) => stage !== 'source' && stage !== 'level' && stage !== 'converter')
    .map((stage) => ({
      stage,
      xs: parts.filter((p) => p.stage === stage).flatMap((p) => p.body.map(([x]) => x)),
    }))
    .filter(({ xs }) => xs.length > 0)
    .map(({ stage, xs }) => ({ stage, from: Math.min(...xs) - 16, to: Math.max(...xs) + 16 }))
    .sort((a, b) => a.from - b.from)
  const y = 22
  const stroke = (x: number) => line('chain-stroke', x - 3, y + 3, x + 3, y - 3)
  return spans.flatMap((span, i) => {
    const before = spans[i - 1]
    const after = spans[i + 1]
    const from = before ? (before.to + span.from) / 2 : span.from
    const to = after ? (span.to + after.from) / 2 : span.to
    return [
      line('chain', from, y, to, y),
      ...(i === 0 ? [stroke(from)] : []),
      stroke(to),
      text('chain-text', (from + to) / 2, y - 6, stageNames[span.stage] ?? span.stage, 'middle'),
    ]
  })
}
