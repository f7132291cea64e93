import { text, type Point, type TextShape } from '#shared/drawings/shapes.ts'
import { textWidth } from '#shared/drawings/text-width.ts'
import { GROUND } from '#shared/network/types.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import { toRkm } from '#shared/units/rkm.ts'
import type { AmplifierCell, Device, Graph } from './graph.ts'
import {
  AMPLIFIER,
  amplifierSymbol,
  capacitorSymbol,
  groundSymbol,
  PIN,
  resistorSymbol,
  TERMINAL,
  terminalSymbol,
} from './symbols.ts'
import {
  boundsOf,
  type SchematicOptions,
  type SchematicPart,
  type SchematicTerminal,
  type SchematicWire,
} from './types.ts'

/** Lead between a junction and a part, px. */
export const LEAD = 16
/** Length of a two-pin part from pin to pin. */
export const LENGTH = 2 * PIN

export interface Spot {
  x: number
  y: number
}

/** Where symbols, wires and terminals are put while a drawing is made. */
export class Sheet {
  readonly parts: SchematicPart[] = []
  readonly wires: SchematicWire[] = []
  readonly terminals: SchematicTerminal[] = []
  /** Work that needs to know how deep everything above it reaches. */
  readonly later: (() => void)[] = []
  private readonly placed = new Set<Device>()

  constructor(
    readonly graph: Graph,
    readonly options: SchematicOptions,
  ) {}

  isPlaced(device: Device): boolean {
    return this.placed.has(device)
  }

  /** Devices at a node that are not drawn yet. */
  openAt(node: string): Device[] {
    return this.graph.devices.filter((d) => !this.placed.has(d) && (d.a === node || d.b === node))
  }

  wire(node: string, ...points: Point[]): void {
    const distinct = points.filter(
      (p, i) => i === 0 || p[0] !== points[i - 1]?.[0] || p[1] !== points[i - 1]?.[1],
    )
    if (distinct.length > 1) this.wires.push({ node, points: distinct })
  }

  /** Width that the two lines beside a symbol take. */
  labelWidth(device: Device): number {
    return Math.max(...this.labelLines(device).map(([words, style]) => textWidth(words, style)))
  }

  labelLines(device: Device): [string, 'label' | 'value'][] {
    return [
      [device.element.ref, 'label'],
      [valueText(device), 'value'],
    ]
  }

  /** A part lying on a row: its first pin, at `node`, at the left. Returns the place of the other pin. */
  across(device: Device, node: string, left: Spot): Spot {
    const centre = { x: left.x + PIN, y: left.y }
    const right = { x: left.x + LENGTH, y: left.y }
    const [ref, value] = this.labelLines(device)
    const clear = device.element.kind === 'capacitor' ? 12 : 8
    this.put(
      device,
      centre,
      0,
      [
        [node, left],
        [node === device.a ? device.b : device.a, right],
      ],
      [
        text('label', centre.x, centre.y - clear - 12, ref?.[0] ?? '', 'middle', { on: 'sheet' }),
        text('value', centre.x, centre.y - clear, value?.[0] ?? '', 'middle', { on: 'sheet' }),
      ],
    )
    return right
  }

  /** A part standing on a column: its first pin, at `node`, on top. Labels at one side. Returns the lower pin. */
  down(device: Device, node: string, top: Spot, side: 'left' | 'right' = 'right'): Spot {
    const centre = { x: top.x, y: top.y + PIN }
    const foot = { x: top.x, y: top.y + LENGTH }
    const [ref, value] = this.labelLines(device)
    const clear = device.element.kind === 'capacitor' ? 13 : 10
    const x = side === 'right' ? centre.x + clear : centre.x - clear
    const anchor = side === 'right' ? 'start' : 'end'
    this.put(
      device,
      centre,
      90,
      [
        [node, top],
        [node === device.a ? device.b : device.a, foot],
      ],
      [
        text('label', x, centre.y - 2, ref?.[0] ?? '', anchor, { on: 'sheet' }),
        text('value', x, centre.y + 10, value?.[0] ?? '', anchor, { on: 'sheet' }),
      ],
    )
    return foot
  }

  /** A part at any angle, without leads of its own. */
  slanted(device: Device, pins: [string, Spot][], centre: Spot, direction: number, reach: number): void {
    const symbol = resistorSymbol(centre.x, centre.y, direction, this.options.symbols ?? 'iec', reach, 14)
    this.add(device, pins, symbol, [])
  }

  private put(
    device: Device,
    centre: Spot,
    direction: number,
    pins: [string, Spot][],
    labels: TextShape[],
  ): void {
    const symbol =
      device.element.kind === 'capacitor'
        ? capacitorSymbol(centre.x, centre.y, direction)
        : resistorSymbol(centre.x, centre.y, direction, this.options.symbols ?? 'iec')
    this.add(device, pins, symbol, labels)
  }

  private add(
    device: Device,
    pins: [string, Spot][],
    symbol: { shapes: SchematicPart['shapes']; body: Point[] },
    labels: TextShape[],
  ): void {
    this.placed.add(device)
    this.parts.push({
      ref: device.element.ref,
      kind: device.element.kind,
      stage: device.element.stage,
      value: valueText(device),
      pins: pins.map(([node, spot], i) => ({ name: String(i + 1), node, ...spot })),
      body: symbol.body,
      shapes: symbol.shapes,
      labels,
    })
  }

  /** An operational amplifier with its back at `x`. Returns the places of its pins. */
  amplifier(
    cell: AmplifierCell,
    x: number,
    y: number,
    plusAbove: boolean,
  ): { plus: Spot; minus: Spot; out: Spot } {
    const { pin, width } = AMPLIFIER
    const plus = { x, y: plusAbove ? y - pin : y + pin }
    const minus = { x, y: plusAbove ? y + pin : y - pin }
    const out = { x: x + width, y }
    const symbol = amplifierSymbol(x, y, plusAbove)
    this.parts.push({
      ref: cell.ref,
      kind: 'amplifier',
      stage: cell.stage,
      value: cell.name,
      pins: [
        { name: '+', node: cell.p, ...plus },
        { name: '−', node: cell.m, ...minus },
        { name: 'out', node: cell.out, ...out },
      ],
      body: symbol.body,
      shapes: symbol.shapes,
      labels: [text('label', x + 32, y - 22, cell.ref, 'start', { on: 'sheet' })],
    })
    return { plus, minus, out }
  }

  /** Ground with its stem: hangs from (x, y). */
  ground(x: number, y: number): void {
    this.wire(GROUND, [x, y], [x, y + 8])
    this.terminals.push({ node: GROUND, ref: null, x, y: y + 8, shapes: groundSymbol(x, y + 8), labels: [] })
  }

  /** A terminal for a held node, at the end of a wire that arrives from `from`'s opposite side. */
  terminal(node: string, x: number, y: number, side: 'left' | 'below' | 'beside' | 'above'): void {
    const [name, value] = this.terminalWords(node)
    const cx = side === 'left' ? x - TERMINAL : x
    const cy = side === 'below' || side === 'beside' ? y + TERMINAL : side === 'above' ? y - TERMINAL : y
    const words: TextShape[] = []
    const lines: [string, 'value' | 'label'][] = []
    if (value) lines.push([value, 'value'])
    lines.push([name, 'label'])
    lines.forEach(([content, style], i) => {
      const shift = i - (lines.length - 1) / 2
      // Beside a column that ends in it: on the side away from the amplifier and its own columns.
      if (side === 'left' || side === 'beside')
        words.push(text(style, cx - 8, cy + 4 + shift * 12, content, 'end', { on: 'sheet' }))
      else
        words.push(
          text(
            style,
            cx,
            side === 'below' ? cy + 15 + i * 12 : cy - 8 - (lines.length - 1 - i) * 12,
            content,
            'middle',
            { on: 'sheet' },
          ),
        )
    })
    this.terminals.push({
      node,
      ref: this.driver(node)?.ref ?? null,
      x,
      y,
      shapes: terminalSymbol(cx, cy),
      labels: words,
    })
  }

  driver(node: string) {
    return this.graph.fixed.get(node) ?? this.graph.signals.get(node)
  }

  /** Name and, for a held node, its voltage. */
  terminalWords(node: string): [name: string, value: string] {
    const driver = this.driver(node)
    const given = driver ? this.options.labels?.[driver.ref] : undefined
    const signal = this.graph.signals.get(node)
    if (signal)
      return [
        `${given ?? this.options.labels?.VSENSE ?? 'sensor'}${signal.sign === 0 ? '' : signal.sign > 0 ? ' +' : ' −'}`,
        '',
      ]
    if (!driver) return [node, '']
    const name = given ?? (driver.stage === 'source' ? 'excitation' : 'reference')
    return [name, formatQuantity(driver.value, 'V')]
  }

  /** Width of the words beside a terminal. */
  terminalWidth(node: string): number {
    const [name, value] = this.terminalWords(node)
    return Math.max(textWidth(name, 'label'), textWidth(value, 'value'))
  }

  /** Lowest edge of everything between two columns. */
  bottomWithin(left: number, right: number): number {
    const boxes = [
      ...this.parts.flatMap((p) => [boundsOf(p.body), ...p.labels.map(roughBox)]),
      ...this.wires.map((w) => boundsOf(w.points)),
      ...this.terminals.flatMap((t) => [
        { x: t.x - 8, y: t.y, width: 16, height: 10 },
        ...t.labels.map(roughBox),
      ]),
    ]
    const below = boxes.filter((b) => b.x <= right && b.x + b.width >= left).map((b) => b.y + b.height)
    return below.length > 0 ? Math.max(...below) : -Infinity
  }
}

function roughBox(label: TextShape) {
  const width = textWidth(label.text, label.style)
  const shift = label.anchor === 'start' ? 0 : label.anchor === 'middle' ? width / 2 : width
  return { x: label.x - shift, y: label.y - 9, width, height: 11 }
}

/** "4k7", or "?" where the value is not set. */
export function valueText(device: Device): string {
  const { value, kind, fixed } = device.element
  if (!Number.isFinite(value) || value < 0) return '?'
  // Resistances of the source move with the signal: four digits tell them.
  return toRkm(value, kind === 'capacitor' ? 'F' : 'Ω', fixed ? 4 : 6)
}
