import { text } from '#shared/drawings/shapes.ts'
import { textWidth } from '#shared/drawings/text-width.ts'
import { GROUND, type Network } from '#shared/network/types.ts'
import { placeConverter } from './converter.ts'
import { readGraph } from './graph.ts'
import { LEAD, Sheet } from './sheet.ts'
import { AMPLIFIER, INSTRUMENTATION, instrumentationSymbol, terminalSymbol } from './symbols.ts'
import type { SchematicOptions, SchematicPin } from './types.ts'

/** Parts in a row before the next row begins. */
const ACROSS = 6

/**
 * For circuits that are none of the known patterns: every part by itself, each pin at a terminal with its node's name.
 * Not a drawing to be proud of, but one that says exactly what is connected to what.
 */
export function listParts(network: Network, options: SchematicOptions): Sheet {
  const sheet = new Sheet(readGraph(network), options)
  const { graph } = sheet
  const nodes = [
    ...graph.devices.flatMap((d) => [d.a, d.b]),
    ...graph.cells.flatMap((c) => [c.p, c.m, c.out]),
    graph.output,
  ]
  const widest = Math.max(...nodes.map((n) => textWidth(nameOf(n), 'label')))
  const pitch = 64 + 2 * (widest + 24)
  const spot = (i: number, height: number, top: number) => ({
    x: (i % ACROSS) * pitch,
    y: top + Math.floor(i / ACROSS) * height,
  })
  graph.devices.forEach((device, i) => {
    const left = spot(i, 56, 0)
    const right = sheet.across(device, device.a, left)
    name(sheet, device.a, left.x, left.y, 'left')
    name(sheet, device.b, right.x, right.y, 'right')
  })
  const below = Math.ceil(graph.devices.length / ACROSS) * 56 + 40
  graph.cells.forEach((cell, i) => {
    const middle = spot(i, 168, below + 24)
    const pins =
      cell.kind === 'amplifier'
        ? Object.entries(sheet.amplifier(cell, middle.x, middle.y, true)).map(([pin, s]) => ({
            node: pin === 'plus' ? cell.p : pin === 'minus' ? cell.m : cell.out,
            ...s,
            side: pin === 'out' ? ('right' as const) : ('left' as const),
          }))
        : instrumentation(sheet, cell, middle)
    for (const pin of pins) name(sheet, pin.node, pin.x, pin.y, pin.side)
  })
  const rows = Math.ceil(graph.cells.length / ACROSS)
  const tip = { x: 0, y: below + rows * 168 + AMPLIFIER.half }
  placeConverter(sheet, tip)
  name(sheet, graph.output, tip.x, tip.y, 'left')
  return sheet
}

function instrumentation(
  sheet: Sheet,
  cell: Extract<Sheet['graph']['cells'][number], { kind: 'instrumentation' }>,
  { x, y }: { x: number; y: number },
): { node: string; x: number; y: number; side: 'left' | 'right' | 'below' }[] {
  const { width, pin, gain, level, half } = INSTRUMENTATION
  const symbol = instrumentationSymbol(x, y)
  const foot = { x: x + level, y: y + (half * (width - level)) / width }
  const pins: SchematicPin[] = [
    { name: '+', node: cell.p, x, y: y - pin },
    { name: '−', node: cell.m, x, y: y + pin },
    { name: 'RG+', node: cell.gainP, x, y: y - gain },
    { name: 'RG−', node: cell.gainM, x, y: y + gain },
    { name: 'REF', node: cell.level, ...foot },
    { name: 'out', node: cell.out, x: x + width, y },
  ]
  sheet.parts.push({
    ref: cell.ref,
    kind: 'instrumentation-amplifier',
    stage: cell.stage,
    value: cell.name,
    pins,
    body: symbol.body,
    shapes: symbol.shapes,
    labels: [text('label', x + 52, y - 48, cell.ref, 'start', { on: 'sheet' })],
  })
  return pins.map((p) => ({
    node: p.node,
    x: p.x,
    y: p.y,
    side: p.name === 'out' ? 'right' : p.name === 'REF' ? 'below' : 'left',
  }))
}

const nameOf = (node: string): string => (node === GROUND ? 'ground' : node)

/** A short wire and a terminal with the node's name. */
function name(sheet: Sheet, node: string, x: number, y: number, side: 'left' | 'right' | 'below'): void {
  const [dx, dy] = side === 'below' ? [0, LEAD] : [side === 'left' ? -LEAD : LEAD, 0]
  const [cx, cy] = [x + dx, y + dy]
  sheet.wire(node, [x, y], [cx, cy])
  const anchor = side === 'below' ? 'middle' : side === 'left' ? 'end' : 'start'
  sheet.terminals.push({
    node,
    ref: sheet.driver(node)?.ref ?? null,
    x: cx,
    y: cy,
    shapes: terminalSymbol(cx, cy),
    labels: [
      text('label', cx + Math.sign(dx) * 7, cy + (side === 'below' ? 15 : 4), nameOf(node), anchor, {
        on: 'sheet',
      }),
    ],
  })
}
