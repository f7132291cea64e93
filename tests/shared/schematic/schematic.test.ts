import { describe, expect, it } from 'vitest'
import { NetworkBuilder } from '#shared/network/builder.ts'
import { layoutSchematic } from '#shared/schematic/layout.ts'
import { wrongBodies, wrongConnections, wrongDots, wrongTerminals, wrongTexts, wrongWires } from './checks.ts'
import { sampleNetworks } from './sample-networks.ts'

const labels = { converter: '14 bit, 2.5 V' }
const samples = sampleNetworks()

describe.each(samples)('the schematic of $name', ({ network }) => {
  const drawing = layoutSchematic(network, { labels })

  it('is a drawing of a known pattern, not a list', () => {
    expect(drawing.listed).toBe(false)
  })

  it('shows every part once, connected as in the network and in no other way', () => {
    expect(wrongConnections(drawing, network)).toEqual([])
    expect(wrongTerminals(drawing, network)).toEqual([])
  })

  it('has no crossing wires, no wire that ends on another without a dot, and three ways at each dot', () => {
    expect(wrongWires(drawing)).toEqual([])
    expect(wrongDots(drawing)).toEqual([])
  })

  it('keeps bodies apart from one another and from wires', () => {
    expect(wrongBodies(drawing)).toEqual([])
  })

  it('keeps texts clear of bodies, wires, grounds and one another, and inside the drawing', () => {
    expect(wrongTexts(drawing)).toEqual([])
  })

  it('has its pins at the same places in both symbol sets', () => {
    const other = layoutSchematic(network, { symbols: 'ansi', labels })
    expect(other.parts.map((p) => p.pins)).toEqual(drawing.parts.map((p) => p.pins))
    expect(other.wires).toEqual(drawing.wires)
    for (const [i, part] of drawing.parts.entries())
      if (part.kind === 'resistor') expect(other.parts[i]?.shapes, part.ref).not.toEqual(part.shapes)
  })
})

describe('a circuit of no known pattern', () => {
  const builder = new NetworkBuilder()
  builder.voltageSource({ ref: 'VSENSE', p: 'sense', n: '0', value: 1, stage: 'source' })
  builder.resistor({ ref: 'R1', a: 'sense', b: 'x', value: 1000, stage: 'S1' })
  builder.resistor({ ref: 'R2', a: 'x', b: 'y', value: 1000, stage: 'S1' })
  builder.resistor({ ref: 'R3', a: 'x', b: 'z', value: 1000, stage: 'S1' })
  builder.resistor({ ref: 'R4', a: 'y', b: 'z', value: 1000, stage: 'S1' })
  builder.resistor({ ref: 'R5', a: 'y', b: 'adc', value: 1000, stage: 'S1' })
  builder.resistor({ ref: 'R6', a: 'z', b: '0', value: 1000, stage: 'S1' })
  const network = builder.build({ title: 'lattice', output: { p: 'adc', n: '0' }, temperature: 23 })

  it('is listed part by part with its nodes named, and connected as in the network', () => {
    const drawing = layoutSchematic(network)
    expect(drawing.listed).toBe(true)
    expect(wrongConnections(drawing, network)).toEqual([])
    expect(wrongTexts(drawing)).toEqual([])
  })
})

describe('the checks themselves', () => {
  const sample = samples.find((s) => s.name.startsWith('three-amplifier'))
  if (!sample) throw new Error('no sample')
  const { network } = sample
  const drawing = layoutSchematic(network, { labels })

  it('notice each single wire that is missing', () => {
    for (const wire of drawing.wires) {
      const without = { ...drawing, wires: drawing.wires.filter((w) => w !== wire) }
      const faults = [...wrongConnections(without, network), ...wrongTerminals(without, network)]
      expect(faults, JSON.stringify(wire)).not.toEqual([])
    }
  })

  it('notice exchanged inputs, a short, a moved part and a moved text', () => {
    const exchanged = drawing.parts.map((p) =>
      p.ref === 'U3'
        ? {
            ...p,
            pins: p.pins.map((pin) => ({ ...pin, name: { '+': '−', '−': '+' }[pin.name] ?? pin.name })),
          }
        : p,
    )
    expect(wrongConnections({ ...drawing, parts: exchanged }, network)).not.toEqual([])
    const [a, b] = [
      drawing.parts.find((p) => p.ref === 'R3')?.pins[0],
      drawing.parts.find((p) => p.ref === 'R6')?.pins[1],
    ]
    if (!a || !b) throw new Error('no such pins')
    const short = { node: 'short', points: [[a.x, a.y] as const, [b.x, b.y] as const] }
    expect(wrongConnections({ ...drawing, wires: [...drawing.wires, short] }, network)).not.toEqual([])
    expect(wrongWires({ ...drawing, wires: [...drawing.wires, short] })).not.toEqual([])
    const target = drawing.parts.find((p) => p.ref === 'R5')
    const moved = drawing.parts.map((p) => (p.ref === 'R3' && target ? { ...p, body: target.body } : p))
    expect(wrongBodies({ ...drawing, parts: moved })).not.toEqual([])
    const written = drawing.parts.map((p) => ({
      ...p,
      labels: p.labels.map((l) => ({ ...l, x: drawing.width / 2, y: drawing.height / 2 })),
    }))
    expect(wrongTexts({ ...drawing, parts: written })).not.toEqual([])
  })
})
