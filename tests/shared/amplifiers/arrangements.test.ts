import { evaluate } from 'mathjs'
import { describe, expect, it } from 'vitest'
import { arrangements } from '#shared/amplifiers/index.ts'
import { interpolate } from '#shared/amplifiers/kinds/integrated.ts'
import { placeWithOffset } from '#shared/amplifiers/place.ts'
import type { Need } from '#shared/amplifiers/define.ts'
import { solveDc } from '#shared/analysis/dc.ts'
import { kindOf } from '#shared/network/elements/index.ts'
import { arrangementDesigns, withExactResistors } from '#tests/support/designs.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { planChosen } from '#tests/support/plans.ts'
import { buildTrial, parseDesign } from '#tests/support/trials.ts'

/** The same is asked of every member of the list. */
describe.each(arrangements.map((arrangement) => ({ id: arrangement.id, arrangement })))(
  '$id',
  ({ id, arrangement }) => {
    const document = withExactResistors(arrangementDesigns.find(([known]) => known === id)![1])
    const design = parseDesign(document)
    const chosen = planChosen(document)
    const { network } = buildTrial(design, id).assessment.chains.low

    it('has an id for files and a title for people, each its own', () => {
      expect(id).toMatch(/^[a-z]+(-[a-z]+)*$/)
      expect(arrangement.title).toMatch(/^[A-Z].*[^.]$/)
      expect(arrangements.filter((a) => a.id === id || a.title === arrangement.title).length).toBe(1)
    })

    it('has a network that solves, ideal and real', () => {
      for (const model of ['ideal', 'real'] as const)
        expect(Number.isFinite(solveDc(network, { model }).output)).toBe(true)
    })

    it('has as many amplifiers as it says, and one more that buffers a level', () => {
      const parts = chosen.components.filter((c) => /amplifier/.test(c.kind) && c.stage === 'S1')
      expect(parts.length).toBe(arrangement.amplifiers)
      const buffers = chosen.components.filter((c) => c.kind === 'amplifier' && c.stage === 'level')
      expect(buffers.length).toBe('R7' in arrangement.roles ? 1 : 0)
    })

    it('says of every resistor what it does, and has each that it speaks of', () => {
      const own = chosen.components.filter(
        (c) => c.kind === 'resistor' && ['S1', 'level'].includes(c.stage) && !c.fixed,
      )
      for (const part of own) expect(part.sets).toBe(arrangement.roles[part.ref])
      expect(own.map((c) => c.ref).sort()).toEqual(Object.keys(arrangement.roles).sort())
    })

    it('names every element in its SPICE text', () => {
      for (const { ref } of network.elements)
        expect(chosen.netlist).toMatch(new RegExp(`(^|_)${ref}\\b`, 'm'))
    })

    it('has a symbol for every element', () => {
      for (const element of network.elements) expect(kindOf(element).symbol).toMatch(/\w/)
    })

    it('has pins with limits for every amplifier, and each on a node of the network', () => {
      const pins = chosen.headroom.filter((h) => h.pin !== 'Converter input')
      expect(pins.length).toBeGreaterThanOrEqual(2 * arrangement.amplifiers)
      const nodes = network.elements.flatMap((e) => kindOf(e).nodes(e))
      for (const pin of pins) expect(nodes).toContain(pin.node)
    })

    it('prints gain and offset as sums that come out, and that the circuit keeps', () => {
      const { low, high } = chosen.realised.ideal
      const { sensor } = design
      if (sensor.kind !== 'voltage') throw new Error('the designs here have a voltage output')
      const share =
        1 + (chosen.filter.resistance + (arrangement.amplifiers ? 0 : sensor.sourceResistance)) / 2e7
      const gain = (share * (high - low)) / (sensor.output.high - sensor.output.low)
      const offset = share * low - gain * sensor.output.low
      expect(chosen.equations.map((e) => e.name)).toEqual(['Gain', 'Offset'])
      const size = Math.abs(high - low)
      chosen.equations.forEach(({ symbolic, numeric }, at) => {
        const [name, sum = '', result = ''] = numeric.split(' = ')
        expect(symbolic.startsWith(`${name} = `)).toBe(true)
        const told = toNumber(result)
        expectClose(toNumber(sum), told, { relative: 2e-4, absolute: 1e-4 * size })
        expectClose(told, at === 0 ? gain : offset, { relative: 2e-4, absolute: 1e-4 * size })
      })
    })

    it('prints its equations with the names of its own parts', () => {
      const known = [...Object.keys(arrangement.roles), 'Rsource', 'Rref']
      for (const { symbolic } of chosen.equations)
        for (const [name] of symbolic.matchAll(/\bR[a-z0-9]+\b/g)) expect(known).toContain(name)
    })
  },
)

const prefixes: Record<string, string> = { k: 'e3', M: 'e6', m: 'e-3', μ: 'e-6', µ: 'e-6' }

/** A printed sum as a number: prefixes and units made into powers of ten. */
function toNumber(text: string): number {
  const plain = text
    .replace(/(?<=\d)[\u00a0\u202f\u2009 ](?=\d)/g, '')
    .replace(/[\u00a0\u202f\u2009]/g, ' ')
    .replace(
      /([\d.]+) ?([kMmμµ]?)(Ω|V)/g,
      (_, digits: string, prefix: string) => digits + (prefixes[prefix] ?? ''),
    )
    .replace(
      /([\d.]+) ([kMmμµ])(?![a-zA-Z])/g,
      (_, digits: string, prefix: string) => digits + (prefixes[prefix] ?? ''),
    )
    .replaceAll('×', '*')
    .replaceAll('·', '*')
    .replaceAll('−', '-')
  return Number(evaluate(plain))
}

describe('a gain that has to land inside a target with the offset given', () => {
  const need = (signal: [number, number], target: [number, number]) =>
    ({
      signal: { low: signal[0], high: signal[1] },
      target: { low: target[0], high: target[1] },
    }) as Need
  const wide = { minimum: 1e-6, maximum: 1e6 }

  it.each([
    ['from zero up', need([0, 1], [0, 2]), 0, 2],
    ['bound by the upper end', need([0.5, 1], [0.2, 2]), 0, 2],
    ['about a level', need([-1, 2], [0, 3]), 1, 1],
    ['falling', need([2, -1], [0, 3]), 1, 1],
  ])('is the largest that does: %s', (_, given, offset, gain) => {
    expectClose(placeWithOffset(given, 1, offset, wide)?.gain ?? NaN, gain, { relative: 1e-12 })
  })

  it('is negative for an inverting stage, and lands crosswise', () => {
    const placed = placeWithOffset(need([-2, -0.5], [0, 2]), -1, 0, wide)
    expectClose(placed?.gain ?? NaN, -1, { relative: 1e-12 })
    expect(placed?.target).toEqual({ low: 2, high: 0.5 })
    expect(placed?.short).toBe(true)
  })

  it('does not exist where no gain keeps both ends inside', () => {
    expect(placeWithOffset(need([-1, 1], [0, 2]), 1, 0, wide)).toBeNull()
    expect(placeWithOffset(need([0, 1], [0.5, 2]), 1, 0, wide)).toBeNull()
    expect(placeWithOffset(need([1, 2], [0, 1]), 1, 0, { minimum: 1, maximum: 10 })).toBeNull()
  })
})

describe('a figure of a part over gain', () => {
  const table = [
    [1, 80],
    [100, 110],
  ] as const

  it('lies on a straight line over the logarithm of the gain, and is held at both ends', () => {
    expectClose(interpolate(table, 10), 95, { relative: 1e-12 })
    expect([
      interpolate(table, 0.5),
      interpolate(table, 1),
      interpolate(table, 100),
      interpolate(table, 1e4),
    ]).toEqual([80, 80, 110, 110])
  })

  it('does not depend on the order of the rows', () => {
    expect(interpolate([...table].reverse(), 10)).toBe(interpolate(table, 10))
  })
})
