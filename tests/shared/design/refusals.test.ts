import { describe, expect, it } from 'vitest'
import { planDesign } from '#shared/design/plan-design.ts'
import type { Fault } from '#shared/design/plan.ts'
import { DesignRefused, readDesign } from '#shared/design/read.ts'
import { buildDesign } from '#tests/support/designs.ts'
import { bridge, withValue, type Json } from '#tests/support/refused/rows.ts'
import { reversed, references, shapes } from '#tests/support/refused/structure.ts'
import { notANumber, outOfRange, parts, spans, notes, currents } from '#tests/support/refused/values.ts'

/*
 * What is not a design is refused, one fault for each thing wrong, by path, reason and what is accepted; by the reader and
 * again by the engine. Documents here are made by hand, so that they may hold what the types forbid.
 */

describe.each([
  ['numbers', notANumber],
  ['ranges', outOfRange],
  ['spans', spans],
  ['order', reversed],
  ['references and wiring', references],
  ['shape', shapes],
  ['notes', notes],
  ['parts', [...parts, ...currents]],
])('a document with wrong %s', (_, rows) => {
  it.each(rows)(
    'is refused for %s: path, reason and what is accepted',
    (_what, document, path, reason, accepted) => {
      const faults = faultsOf(document)
      const fault = faults.find((f) => f.path === path)
      expect(fault, JSON.stringify(faults)).toBeDefined()
      expect(fault?.reason).toMatch(reason)
      expect(fault?.accepted).toMatch(accepted)
      expect(faults.length, JSON.stringify(faults)).toBe(1)
    },
  )

  it.each(rows)('is refused by the engine too for %s', (_what, document) => {
    expect(() => planDesign(document)).toThrow(DesignRefused)
  })
})

function faultsOf(document: unknown): Fault[] {
  const read = readDesign(document)
  if (read.ok) throw new Error('the document was accepted')
  return read.faults
}

describe('a document with several faults', () => {
  it('has one line for each', () => {
    const document = withValue(
      'rails.positive',
      NaN,
      withValue('converter.bits', 99, withValue('sensor.speed', 1)),
    )
    expect(
      faultsOf(document)
        .map((f) => f.path)
        .sort(),
    ).toEqual(['converter.bits', 'rails.positive', 'sensor.speed'])
  })

  it('names them all in the error that the engine throws', () => {
    const document = withValue('rails.positive', NaN, withValue('converter.bits', 99))
    expect(() => planDesign(document)).toThrow(
      /rails\.positive: [^\n]+\nconverter\.bits|converter\.bits: [^\n]+\nrails/,
    )
  })
})

describe('reading', () => {
  it('leaves the prototype of objects alone', () => {
    readDesign(
      JSON.parse(
        '{"format":"spandrel-design/1","__proto__":{"polluted":true},"constructor":{"prototype":{"polluted":true}}}',
      ),
    )
    expect(({} as Json).polluted).toBeUndefined()
  })

  it('takes an excitation from the shift reference that is the positive rail', () => {
    const read = readDesign(
      buildDesign({
        sensor: { ...bridge, kind: 'bridge', excitation: { voltage: 5, same: 'shift' } },
        shiftReference: { same: 'positive' },
      }),
    )
    expect(read.ok).toBe(true)
  })

  it('changes nothing in what it is given', () => {
    const document = buildDesign()
    const before = JSON.stringify(document)
    readDesign(document)
    expect(JSON.stringify(document)).toBe(before)
  })
})
