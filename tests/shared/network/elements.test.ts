import { describe, expect, it } from 'vitest'
import { solveDc } from '#shared/analysis/dc.ts'
import { toSpice } from '#shared/analysis/spice.ts'
import { elementKinds, kindOf, stampPort } from '#shared/network/elements/index.ts'
import type { Network, NetworkElement } from '#shared/network/types.ts'
import { sampleNetworks } from '#tests/support/circuits.ts'

const samples = Object.values(sampleNetworks())

function findSample(kind: string): { element: NetworkElement; network: Network } {
  for (const network of samples) {
    const element = network.elements.find((candidate) => candidate.kind === kind)
    if (element) return { element, network }
  }
  throw new Error(`No sample network holds a ${kind}`)
}

describe.each(Object.keys(elementKinds))('element kind %s', (name) => {
  const { element, network } = findSample(name)
  const kind = kindOf(element)

  it('solves in a network, ideal and real', () => {
    for (const model of ['ideal', 'real'] as const) {
      expect(Object.values(solveDc(network, { model }).voltages).every(Number.isFinite)).toBe(true)
    }
  })

  it('is named in the SPICE text, on the nodes that it touches', () => {
    const lines = kind.toSpice(element)
    expect(toSpice(network)).toContain(lines.join('\n'))
    expect(lines.some((line) => line.includes(element.ref))).toBe(true)
    for (const node of kind.nodes(element))
      expect(lines.some((line) => line.split(' ').includes(node))).toBe(true)
  })

  it('has a symbol and passes its own check', () => {
    expect(kind.symbol).toMatch(/^[a-z-]+$/)
    expect(kind.check(element)).toBeNull()
  })

  it('takes another value, or says that it has none', () => {
    if (kind.value(element) === null) expect(() => kind.withValue(element, 2)).toThrow(element.ref)
    else {
      const changed = kind.withValue(element, 2)
      expect(kind.value(changed)).toBe(2)
      expect(kind.value(element)).not.toBe(2)
      expect(() => kind.withValue(element, NaN)).toThrow(element.ref)
    }
  })

  it('refuses a port that it does not have, by name', () => {
    const missing = (['vos', 'value'] as const).find((port) => !kind.ports[port])
    expect(missing).toBeDefined()
    const stamper = {
      model: 'real' as const,
      node: () => -1,
      branch: () => -1,
      add: () => {},
      addSource: () => {},
    }
    expect(() => stampPort(element, missing ?? 'value', stamper)).toThrow(`${element.ref} has no ${missing}`)
  })
})
