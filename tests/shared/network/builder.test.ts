import { describe, expect, it } from 'vitest'
import { NetworkBuilder } from '#shared/network/builder.ts'
import { buildAmplifierPart } from '#tests/support/amplifier-part.ts'

const resistor = { ref: 'R1', a: 'in', b: '0', value: 1e3, stage: 'S1' }
const details = { title: 'test', output: { p: 'in', n: '0' }, temperature: 25 }

describe('network builder', () => {
  it('fills in what a plain resistor leaves out', () => {
    const [element] = new NetworkBuilder().resistor(resistor).build(details).elements
    expect(element).toEqual({
      ...resistor,
      kind: 'resistor',
      tolerance: 0,
      drift: 0,
      fixed: true,
      group: null,
    })
  })

  it('keeps elements in the order in which they were given', () => {
    const builder = new NetworkBuilder()
      .voltageSource({ ref: 'V1', p: 'in', n: '0', value: 1, stage: 'source' })
      .resistor(resistor)
    expect(builder.build(details).elements.map(({ ref }) => ref)).toEqual(['V1', 'R1'])
  })

  it('gives a network that later elements do not change', () => {
    const builder = new NetworkBuilder().resistor(resistor)
    const network = builder.build(details)
    builder.resistor({ ...resistor, ref: 'R2' })
    expect(network.elements).toHaveLength(1)
  })

  it('refuses a designator used twice, whatever its case', () => {
    const builder = new NetworkBuilder().resistor(resistor)
    expect(() => builder.resistor({ ...resistor, ref: 'r1' })).toThrow(
      'Reference designator r1 is used twice',
    )
  })

  it.each([0, -5, NaN, Infinity])('refuses a resistor of %s Ω', (value) => {
    expect(() => new NetworkBuilder().resistor({ ...resistor, value })).toThrow(/^R1 /)
  })

  it.each([0, -1e-12, NaN])('refuses a capacitor of %s F', (value) => {
    expect(() => new NetworkBuilder().capacitor({ ref: 'C1', a: 'in', b: '0', value, stage: 'S1' })).toThrow(
      /^C1 /,
    )
  })

  it.each([
    [{ a0: Infinity }, 'U1 has a0 Infinity'],
    [{ gbw: 0 }, 'U1 has gbw 0'],
    [{ rcm: -1 }, 'U1 has rcm -1'],
    [{ rout: -1 }, 'U1 has rout -1'],
    [{ cin: { common: NaN, differential: 0 } }, 'U1 has common NaN'],
    [{ cin: { common: 0, differential: -1 } }, 'U1 has cin.differential -1'],
  ])('refuses an amplifier with %o', (figures, message) => {
    const part = buildAmplifierPart(figures)
    const given = { ref: 'U1', p: 'in', m: 'out', out: 'out', vpos: 'vpos', vneg: 'vneg', part, stage: 'S1' }
    expect(() => new NetworkBuilder().amplifier(given)).toThrow(message)
  })

  it.each(['Q1', 'V1', 'R 1', '', 'R_1', '1R'])('refuses "%s" as a resistor', (ref) => {
    expect(() => new NetworkBuilder().resistor({ ...resistor, ref })).toThrow(RangeError)
  })

  it.each(['', 'a b', 'a__b', '_a', 'a-b'])('refuses "%s" as a node', (node) => {
    expect(() => new NetworkBuilder().resistor({ ...resistor, a: node })).toThrow(/no node name/)
  })

  it('refuses nodes that SPICE would take for one', () => {
    const builder = new NetworkBuilder().resistor(resistor)
    expect(() => builder.resistor({ ...resistor, ref: 'R2', a: 'IN' })).toThrow(/differ in case only/)
  })

  it('refuses an output that nothing touches, and a title of several lines', () => {
    const builder = new NetworkBuilder().resistor(resistor)
    expect(() => builder.build({ ...details, output: { p: 'adc', n: '0' } })).toThrow(/Output node adc/)
    expect(() => builder.build({ ...details, title: 'a\n.op' })).toThrow(/one line/)
    expect(() => builder.build({ ...details, temperature: NaN })).toThrow(/temperature/)
  })

  it('does not keep an element that it refused', () => {
    const builder = new NetworkBuilder().resistor(resistor)
    expect(() => builder.resistor({ ...resistor, ref: 'R2', value: 0 })).toThrow()
    expect(builder.resistor({ ...resistor, ref: 'R2' }).build(details).elements).toHaveLength(2)
  })
})
