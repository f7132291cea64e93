import type { Point } from '#shared/drawings/shapes.ts'
import { textBox } from '#shared/drawings/text-width.ts'
import type { Network } from '#shared/network/types.ts'
import type { SchematicDrawing } from '#shared/schematic/types.ts'
import { heldNodes, netsOfDrawing, netsOfNetwork, pinsAtTerminals } from './connectivity.ts'
import { band, corners, cross, liesInside, overlap, samePlace, segmentsOf } from './geometry.ts'

/** Each check returns what is wrong with a drawing, in words; nothing wrong is an empty list. */

const isTwoEnded = (kind: string) => kind === 'resistor' || kind === 'capacitor'

/** Parts missing, too many, or connected otherwise than in the network. */
export function wrongConnections(drawing: SchematicDrawing, network: Network): string[] {
  const drawn = netsOfDrawing(drawing)
  const wanted = netsOfNetwork(network)
  const faults: string[] = []
  const nodeOf = new Map<string, string>()
  const netOf = new Map<string, string>()
  for (const part of drawing.parts) {
    for (const pin of part.pins) {
      const name = `${part.ref}.${pin.name}`
      // A part with two equal ends may lie either way round: its pins are told apart by the node they claim.
      const ends = isTwoEnded(part.kind) ? [wanted.get(`${part.ref}.a`), wanted.get(`${part.ref}.b`)] : []
      const node = isTwoEnded(part.kind) ? ends.find((n) => n === pin.node) : wanted.get(name)
      const net = drawn.get(name) ?? ''
      if (node === undefined) {
        faults.push(`${name} is no pin of the network`)
        continue
      }
      if ((nodeOf.get(net) ?? node) !== node) faults.push(`${name} is drawn together with ${nodeOf.get(net)}`)
      if ((netOf.get(node) ?? net) !== net) faults.push(`${name} is drawn apart from ${node}`)
      nodeOf.set(net, node)
      netOf.set(node, net)
    }
    if (!isTwoEnded(part.kind)) continue
    const claimed = part.pins.map((p) => p.node).sort()
    const real = [wanted.get(`${part.ref}.a`), wanted.get(`${part.ref}.b`)].sort()
    if (claimed.join() !== real.join())
      faults.push(`${part.ref} lies between ${claimed.join()}, not ${real.join()}`)
  }
  const refs = drawing.parts.map((p) => p.ref)
  const wantedRefs = new Set([...wanted.keys()].map((key) => key.split('.')[0] ?? ''))
  for (const ref of wantedRefs) if (!refs.includes(ref)) faults.push(`${ref} is missing`)
  for (const ref of refs) if (!wantedRefs.has(ref)) faults.push(`${ref} is not in the network`)
  refs.forEach((ref, i) => {
    if (refs.indexOf(ref) !== i) faults.push(`${ref} is drawn twice`)
  })
  return faults
}

/** Terminals that hang at another node than the one they name, or at none; sources and ground without a terminal. */
export function wrongTerminals(drawing: SchematicDrawing, network: Network): string[] {
  const held = heldNodes(network)
  const reached = pinsAtTerminals(drawing)
  const claimed = new Set(drawing.parts.flatMap((p) => p.pins.map((pin) => pin.node)))
  return [
    ...reached
      .filter(({ name, pins }) => pins.length === 0 || pins.some((node) => node !== (held.get(name) ?? name)))
      .map(({ name, pins }) => `${name} hangs at ${pins.join() || 'nothing'}`),
    ...[...held]
      .filter(([name, node]) => claimed.has(node) && !reached.some((r) => r.name === name))
      .map(([name]) => `${name} has no terminal`),
  ]
}

/** Wires that cross, lie on one another, or end on another without a dot. */
export function wrongWires(drawing: SchematicDrawing): string[] {
  const faults: string[] = []
  const wires = drawing.wires.map((w) => segmentsOf(w.points))
  wires.forEach((one, i) => {
    for (const other of wires.slice(i + 1))
      for (const a of one)
        for (const b of other) if (cross(a, b)) faults.push(`crossing ${JSON.stringify([a, b])}`)
  })
  const ends: Point[] = [
    ...drawing.wires.flatMap((w) => [w.points[0], w.points.at(-1)].filter((p) => p !== undefined)),
    ...drawing.parts.flatMap((p) => p.pins.map((pin): Point => [pin.x, pin.y])),
  ]
  for (const end of ends) {
    const onWire = wires.flat().some((s) => liesInside(end, s))
    if (onWire && !drawing.junctions.some((j) => samePlace([j.x, j.y], end)))
      faults.push(`no dot at ${end.join()}`)
  }
  return faults
}

/** Dots at which other than three ways meet. */
export function wrongDots(drawing: SchematicDrawing): string[] {
  const segments = drawing.wires.flatMap((w) => segmentsOf(w.points))
  return drawing.junctions.flatMap(({ x, y }) => {
    const ways = new Set<string>()
    const towards = (p: Point) => ways.add(Math.atan2(p[1] - y, p[0] - x).toFixed(2))
    for (const [a, b] of segments) {
      if (samePlace(a, [x, y]) || liesInside([x, y], [a, b])) towards(b)
      if (samePlace(b, [x, y]) || liesInside([x, y], [a, b])) towards(a)
    }
    for (const part of drawing.parts) {
      if (!part.pins.some((pin) => samePlace([pin.x, pin.y], [x, y]))) continue
      const middle = (axis: 0 | 1) => part.body.reduce((sum, p) => sum + p[axis], 0) / part.body.length
      towards([middle(0), middle(1)])
    }
    return ways.size === 3 ? [] : [`${ways.size} ways at ${x}, ${y}`]
  })
}

/** Bodies over one another or over wires. */
export function wrongBodies(drawing: SchematicDrawing): string[] {
  return drawing.parts.flatMap((part, i) => [
    ...drawing.parts
      .slice(i + 1)
      .filter((other) => overlap(part.body, other.body))
      .map((other) => `${part.ref} over ${other.ref}`),
    ...drawing.wires
      .filter((w) => segmentsOf(w.points).some((s) => overlap(part.body, band(s, 0.45), 0.5)))
      .map((w) => `${part.ref} over a wire of ${w.node}`),
  ])
}

/** Texts over anything, or outside the drawing. */
export function wrongTexts(drawing: SchematicDrawing): string[] {
  const texts = [
    ...drawing.parts.flatMap((p) => p.labels),
    ...drawing.terminals.flatMap((t) => t.labels),
    ...drawing.chain.filter((s) => s.type === 'text'),
  ].map((t) => ({ words: t.text, box: textBox(t), outline: corners(textBox(t)) }))
  const grounds = drawing.terminals.filter((t) => t.ref === null && t.labels.length === 0)
  return texts.flatMap(({ words, box, outline }, i) => [
    ...texts
      .slice(i + 1)
      .filter((other) => overlap(outline, other.outline))
      .map((other) => `“${words}” over “${other.words}”`),
    ...drawing.parts.filter((p) => overlap(outline, p.body)).map((p) => `“${words}” over ${p.ref}`),
    ...drawing.wires
      .filter((w) => segmentsOf(w.points).some((s) => overlap(outline, band(s))))
      .map((w) => `“${words}” over a wire of ${w.node}`),
    ...grounds
      .filter((t) => overlap(outline, corners({ x: t.x - 7, y: t.y, width: 14, height: 8 })))
      .map(() => `“${words}” over a ground`),
    ...(box.x < 0 || box.y < 0 || box.x + box.width > drawing.width || box.y + box.height > drawing.height
      ? [`“${words}” outside the drawing`]
      : []),
  ])
}
