import { GROUND, type Network } from '#shared/network/types.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import { findBridge, readGraph, type Graph } from './graph.ts'
import { valueText } from './sheet.ts'

export interface Connection {
  ref: string
  /** Code of IEC 60062, or the name of an amplifier. */
  value: string
  /** "from U1 output to U1 −" */
  text: string
}

/** What is connected to what, in words: the text alternative of the schematic. Resistors, capacitors, amplifiers. */
export function describeConnections(network: Network): Connection[] {
  const graph = readGraph(network)
  const name = nodeNamer(graph)
  return [
    ...graph.devices.map((device) => ({
      ref: device.element.ref,
      value: valueText(device),
      text: `from ${name(device.a)} to ${name(device.b)}`,
    })),
    ...graph.cells.map((cell) => ({
      ref: cell.ref,
      value: cell.name,
      text:
        `+ at ${name(cell.p, cell.ref)}, − at ${name(cell.m, cell.ref)}, output to ${name(cell.out, cell.ref)}` +
        (cell.kind === 'instrumentation' ? `, REF at ${name(cell.level, cell.ref)}` : ''),
    })),
  ]
}

/** A name for each node by what it is: ground, a source, an output, an input, a point between parts. */
function nodeNamer(graph: Graph): (node: string, except?: string) => string {
  const bridge = findBridge(graph.devices)
  const points = new Map<string, string>()
  return (node, except) => {
    if (node === GROUND) return 'ground'
    const held = graph.fixed.get(node)
    if (held)
      return `the ${held.stage === 'source' ? 'excitation' : 'reference'}, ${formatQuantity(held.value, 'V')}`
    const signal = graph.signals.get(node)
    if (signal) return `the sensor${signal.sign === 0 ? '' : signal.sign > 0 ? ', +' : ', −'}`
    if (bridge && (node === bridge.top || bridge.legs.includes(node)))
      return node === bridge.top ? 'the top of the bridge' : `bridge leg ${bridge.legs.indexOf(node) + 1}`
    const others = graph.cells.filter((c) => c.ref !== except)
    const output = others.find((c) => c.out === node)
    if (output) return `${output.ref} output`
    if (node === graph.output) return 'the converter'
    const pin = others.flatMap((c) =>
      [
        { at: c.p, words: `${c.ref} +` },
        { at: c.m, words: `${c.ref} −` },
        ...(c.kind === 'instrumentation'
          ? [
              { at: c.gainP, words: `${c.ref} gain pin +` },
              { at: c.gainM, words: `${c.ref} gain pin −` },
            ]
          : []),
      ].filter((p) => p.at === node),
    )[0]
    if (pin) return pin.words
    const known = points.get(node)
    if (known) return known
    const point = `point ${String.fromCharCode(65 + (points.size % 26))}`
    points.set(node, point)
    return point
  }
}
