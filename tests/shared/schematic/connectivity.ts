import type { Point } from '#shared/drawings/shapes.ts'
import type { Network } from '#shared/network/types.ts'
import type { SchematicDrawing, SchematicTerminal } from '#shared/schematic/types.ts'
import { liesInside, segmentsOf } from './geometry.ts'

/** What is connected to what, read back from a drawing by places alone, and from a network by nodes alone. */

class Sets {
  private readonly parent = new Map<string, string>()
  find(item: string): string {
    const up = this.parent.get(item)
    return up === undefined || up === item ? item : this.find(up)
  }
  join(a: string, b: string): void {
    const [x, y] = [this.find(a), this.find(b)]
    if (x !== y) this.parent.set(x, y)
  }
}

const place = (x: number, y: number) => `${x.toFixed(2)} ${y.toFixed(2)}`

/** Places joined by wires and dots; with `byLabel` also those that meet at terminals of the same name. */
function joinedPlaces(drawing: SchematicDrawing, byLabel: boolean): Sets {
  const sets = new Sets()
  const segments = drawing.wires.flatMap((w) => segmentsOf(w.points))
  for (const [a, b] of segments) sets.join(place(...a), place(...b))
  for (const dot of drawing.junctions) {
    const p: Point = [dot.x, dot.y]
    for (const s of segments) if (liesInside(p, s)) sets.join(place(...p), place(...s[0]))
  }
  if (byLabel) for (const t of drawing.terminals) sets.join(place(t.x, t.y), terminalName(t))
  return sets
}

/** What a terminal says: the same source, the same words, or ground. */
export const terminalName = (t: SchematicTerminal): string =>
  t.ref ?? (t.labels.map((l) => l.text).join(' ') || 'ground')

/** Net of each pin, by `ref.pin`: wires join their points, dots join what runs through them, terminals join by name. */
export function netsOfDrawing(drawing: SchematicDrawing): Map<string, string> {
  const sets = joinedPlaces(drawing, true)
  return new Map(
    drawing.parts.flatMap((part) =>
      part.pins.map((pin) => [`${part.ref}.${pin.name}`, sets.find(place(pin.x, pin.y))] as const),
    ),
  )
}

/** Pins that each terminal reaches by wires alone. */
export function pinsAtTerminals(drawing: SchematicDrawing): { name: string; pins: string[] }[] {
  const sets = joinedPlaces(drawing, false)
  const pins = drawing.parts.flatMap((part) =>
    part.pins.map((pin) => ({
      name: `${part.ref}.${pin.name}`,
      node: pin.node,
      net: sets.find(place(pin.x, pin.y)),
    })),
  )
  return drawing.terminals.map((t) => {
    const net = sets.find(place(t.x, t.y))
    return { name: terminalName(t), pins: pins.filter((p) => p.net === net).map((p) => p.node) }
  })
}

/**
 * Node of each pin that a drawing must show, by `ref.pin`. Series sources of 0 V and of the sensor, and a reference's
 * own resistance, count as connections: they are ideal means of the model, not parts.
 */
export function netsOfNetwork(network: Network): Map<string, string> {
  const nets = new Map<string, string>()
  const node = mergedNodes(network)
  for (const e of network.elements) {
    if (e.kind === 'resistor' || e.kind === 'capacitor') {
      if (e.ref === 'RREF' || e.ref === 'RADC' || (e.kind === 'resistor' && e.group === 'internal')) continue
      nets.set(`${e.ref}.a`, node(e.a))
      nets.set(`${e.ref}.b`, node(e.b))
    } else if (e.kind === 'amplifier' && e.macro === undefined) {
      nets.set(`${e.ref}.+`, node(e.p))
      nets.set(`${e.ref}.−`, node(e.m))
      nets.set(`${e.ref}.out`, node(e.out))
    } else if (e.kind === 'controlled-voltage-source' && e.stage !== 'source') {
      const half = (out: string) => network.elements.find((h) => h.kind === 'amplifier' && h.out === out)
      const [plus, minus] = [half(e.cp), half(e.cn)]
      if (plus?.kind !== 'amplifier' || minus?.kind !== 'amplifier' || !plus.macro) continue
      const ref = plus.macro
      nets.set(`${ref}.+`, node(plus.p))
      nets.set(`${ref}.−`, node(minus.p))
      nets.set(`${ref}.REF`, node(e.n))
      nets.set(`${ref}.out`, node(e.p))
      const gain = network.elements.some(
        (r) => r.kind === 'resistor' && r.group !== 'internal' && [r.a, r.b].includes(plus.m),
      )
      if (gain) {
        nets.set(`${ref}.RG+`, node(plus.m))
        nets.set(`${ref}.RG−`, node(minus.m))
      }
    }
  }
  nets.set('converter.in', node(network.output.p))
  return nets
}

function mergedNodes(network: Network): (name: string) => string {
  const sets = new Sets()
  for (const e of network.elements) {
    if (e.kind === 'voltage-source' && e.p !== '0' && e.n !== '0') sets.join(e.p, e.n)
    if (e.ref === 'RREF' && e.kind === 'resistor') sets.join(e.a, e.b)
  }
  return (name) => sets.find(name)
}

/** Node that each source of the network holds, by its designator, and ground. */
export function heldNodes(network: Network): Map<string, string> {
  const node = mergedNodes(network)
  const held = new Map([['ground', node('0')]])
  for (const e of network.elements) {
    if (e.kind === 'voltage-source' && e.n === '0') held.set(e.ref, node(e.p))
    if (e.kind === 'controlled-voltage-source' && e.stage === 'source') held.set(e.ref, node(e.p))
  }
  return held
}
