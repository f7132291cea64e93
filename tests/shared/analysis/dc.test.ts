import { describe, expect, it } from 'vitest'
import { solveDc } from '#shared/analysis/dc.ts'
import { assembleSystem } from '#shared/analysis/system.ts'
import { CircuitError } from '#shared/network/circuit-error.ts'
import type { Network } from '#shared/network/types.ts'
import { buildAmplifierPart } from '#tests/support/amplifier-part.ts'
import { Bench, sampleNetworks } from '#tests/support/circuits.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { solveExactly } from '#tests/support/solve-exactly.ts'

describe.each(Object.entries(sampleNetworks()))('operating point of %s', (_, network) => {
  it.each(['ideal', 'real'] as const)('agrees with 64 digits to 1e-11 V, %s amplifiers', (model) => {
    const exact = solveExactly(network, model)
    const { nodes } = assembleSystem(network, { model }).index
    const solution = solveDc(network, { model })
    nodes.forEach((node, k) => expectClose(solution.voltage(node), exact[k]!, { absolute: 1e-11 }))
  })

  it('tends to the ideal amplifier as the real one gets better', () => {
    const better = {
      ...network,
      elements: network.elements.map((element) =>
        element.kind === 'amplifier'
          ? { ...element, part: { ...element.part, a0: 1e12, rin: 1e15, rcm: 1e18, rout: 1e-3, ib: 0 } }
          : element,
      ),
    }
    const ideal = solveDc(network, { model: 'ideal' }).output
    expectClose(solveDc(better, { model: 'real' }).output, ideal, { absolute: 1e-8 })
  })
})

describe('operating point', () => {
  const amplifier = sampleNetworks()['non-inverting']!

  it('answers nodes, pairs of nodes, ground and the output', () => {
    const solution = solveDc(amplifier, { model: 'ideal' })
    expectClose(solution.output, 0.2 * 10.1, { relative: 1e-13 })
    expectClose(solution.between('adc', 'fb'), 0.2 * 9.1, { relative: 1e-13 })
    expect(solution.voltage('0')).toBe(0)
    expect(Object.keys(solution.voltages)).toEqual(['sense', 'vref', 'fb', 'adc'])
  })

  it('counts the current of a source from + through it to −, and of an amplifier out of its output', () => {
    const network = new Bench()
      .v('V1', 'in', 2)
      .r('R1', 'in', '0', 1e3)
      .u('U1', 'in', 'adc', 'adc')
      .r('RL', 'adc', '0', 1e3)
      .build()
    const solution = solveDc(network, { model: 'ideal' })
    expectClose(solution.current('V1'), -2e-3, { relative: 1e-13 })
    expectClose(solution.current('U1'), 2e-3, { relative: 1e-13 })
    expect(() => solution.current('R1')).toThrow(CircuitError)
    expect(() => solution.voltage('nowhere')).toThrow('The circuit has no node nowhere')
  })

  it('puts other values in without changing the network', () => {
    const before = solveDc(amplifier, { model: 'ideal' }).output
    expectClose(solveDc(amplifier, { model: 'ideal', set: { RF: 1.9e4, VSENSE: 0.1 } }).output, 2, {
      relative: 1e-13,
    })
    expect(solveDc(amplifier, { model: 'ideal' }).output).toBe(before)
  })

  it('adds to values, also to one that was put in', () => {
    const extra = [{ ref: 'VSENSE', port: 'value' as const, amount: 0.05 }]
    expectClose(solveDc(amplifier, { model: 'ideal', set: { VSENSE: 0.1 }, extra }).output, 0.15 * 10.1, {
      relative: 1e-13,
    })
  })

  it.each(['ideal', 'real'] as const)(
    'carries an offset to the output with the noise gain, %s amplifiers',
    (model) => {
      const nominal = solveDc(amplifier, { model }).output
      const moved = solveDc(amplifier, { model, extra: [{ ref: 'U1', port: 'vos', amount: 1e-3 }] }).output
      expectClose(moved - nominal, 10.1e-3, { relative: 1e-3 })
    },
  )

  it('lets a bias current flow into the pin', () => {
    // 1 µA into the − pin has to come through RF from the output
    const moved = solveDc(amplifier, {
      model: 'ideal',
      extra: [{ ref: 'U1', port: 'ib-', amount: 1e-6 }],
    }).output
    expectClose(moved - solveDc(amplifier, { model: 'ideal' }).output, 9.1e-3, { relative: 1e-9 })
  })

  it('refuses values that no element can have, and elements that are not there', () => {
    expect(() => solveDc(amplifier, { model: 'ideal', set: { RF: 0 } })).toThrow(/^RF is 0 Ω/)
    expect(() => solveDc(amplifier, { model: 'ideal', set: { VSENSE: NaN } })).toThrow(/^VSENSE/)
    expect(() => solveDc(amplifier, { model: 'ideal', set: { U1: 1 } })).toThrow(/^U1 is an amplifier/)
    expect(() => solveDc(amplifier, { model: 'ideal', set: { R99: 1 } })).toThrow(
      'The circuit has no element R99',
    )
    const wrong = [{ ref: 'RF', port: 'vos' as const, amount: 1 }]
    expect(() => solveDc(amplifier, { model: 'ideal', extra: wrong })).toThrow('RF has no vos')
    const noNumber = [{ ref: 'U1', port: 'vos' as const, amount: NaN }]
    expect(() => solveDc(amplifier, { model: 'ideal', extra: noNumber })).toThrow('U1: vos of NaN')
  })
})

describe('a circuit without a single answer', () => {
  const fault = (network: Network, model: 'ideal' | 'real' = 'ideal'): CircuitError => {
    try {
      solveDc(network, { model })
    } catch (error) {
      if (error instanceof CircuitError) return error
    }
    throw new Error('It was solved')
  }

  it('names the node that has no dc path to ground', () => {
    const network = new Bench().v('V1', 'in', 1).c('C1', 'in', 'fb', 1e-9).r('R1', 'fb', 'adc', 1e3).build()
    expect(fault(network).message).toBe('node fb has no dc path to ground')
    expect(fault(network)).toMatchObject({ code: 'no-dc-path', place: 'fb' })
  })

  it('sees a floating source, which only real amplifiers tie to ground', () => {
    const network = new Bench()
      .v('VSENSE', 'a', 0.1, 'b')
      .u('U1', 'a', 'm', 'adc')
      .r('R1', 'm', 'b', 1e3)
      .r('R2', 'adc', 'm', 1e3)
      .build()
    expect(Number.isFinite(solveDc(network, { model: 'real' }).output)).toBe(true)
    const floating = new Bench()
      .v('VSENSE', 'a', 0.1, 'b')
      .u('U1', 'a', 'adc', 'adc')
      .r('RL', 'adc', '0', 1e3)
      .build()
    expect(fault(floating).message).toMatch(/^node [ab] has no dc path to ground$/)
  })

  it('names the output of an ideal amplifier without feedback', () => {
    const network = new Bench().v('V1', 'in', 1).u('U1', 'in', '0', 'adc').r('RL', 'adc', '0', 1e3).build()
    expect(fault(network)).toMatchObject({ code: 'not-determined', place: 'adc' })
  })

  it('names sources that force a voltage in a loop', () => {
    const network = new Bench().v('V1', 'adc', 1).v('V2', 'adc', 2).r('R1', 'adc', '0', 1e3).build()
    expect(fault(network)).toMatchObject({ code: 'source-loop' })
    expect(fault(network).message).toMatch(/V1, V2/)
  })

  it('solves a real amplifier without feedback: its output is the open-loop answer', () => {
    const part = buildAmplifierPart({ a0: 1e5, rout: 0, ib: 0 })
    const network = new Bench(part)
      .v('V1', 'in', 1e-5)
      .u('U1', 'in', '0', 'adc')
      .r('RL', 'adc', '0', 1e3)
      .build()
    expectClose(solveDc(network, { model: 'real' }).output, 1, { relative: 1e-9 })
  })
})
