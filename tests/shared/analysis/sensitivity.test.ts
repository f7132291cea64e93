import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { solveAc } from '#shared/analysis/ac.ts'
import { solveDc } from '#shared/analysis/dc.ts'
import {
  computeAcSensitivities,
  computeSensitivities,
  findSensitivity,
} from '#shared/analysis/sensitivity.ts'
import type { PortName } from '#shared/network/elements/element-kind.ts'
import { kindOf } from '#shared/network/elements/index.ts'
import type { Network } from '#shared/network/types.ts'
import { magnitude, subtractComplex } from '#shared/numerics/complex.ts'
import { sampleNetworks } from '#tests/support/circuits.ts'
import { expectClose } from '#tests/support/expect-close.ts'

const samples = sampleNetworks()

/** One of the sample networks, each resistor and capacitor multiplied by its own factor. */
const anyNetwork = fc
  .record({
    title: fc.constantFrom(...Object.keys(samples)),
    factors: fc.array(fc.double({ min: 0.3, max: 3, noNaN: true }), { minLength: 12, maxLength: 12 }),
  })
  .map(({ title, factors }) => scale(samples[title]!, factors))

function scale(network: Network, factors: number[]): Network {
  let used = 0
  const elements = network.elements.map((element) =>
    element.kind === 'resistor' || element.kind === 'capacitor'
      ? { ...element, value: element.value * factors[used++ % factors.length]! }
      : element,
  )
  return { ...network, elements }
}

const sizeOf = (network: Network, ref: string): number => {
  const element = network.elements.find((candidate) => candidate.ref === ref)!
  return Math.abs(kindOf(element).value(element) ?? 0)
}

/** Small enough for the first order: 1e-6 A, and of 1/a0 what leaves a loop gain of some thousands. */
const steps: Partial<Record<PortName, number>> = { 'ib+': 1e-6, 'ib-': 1e-6, loopGain: 1e-6 }

describe('sensitivities at DC', () => {
  it.each(['ideal', 'real'] as const)('equal central differences at every port, %s amplifiers', (model) => {
    fc.assert(
      fc.property(anyNetwork, (network) => {
        const references = Object.fromEntries(network.elements.map(({ ref }) => [ref, 0.4]))
        for (const { ref, port, derivative } of computeSensitivities(network, { model, references })) {
          const step = port === 'value' ? 1e-4 * (sizeOf(network, ref) || 1) : (steps[port] ?? 1e-4)
          const at = (amount: number) =>
            solveDc(network, { model, extra: [{ ref, port, amount, reference: 0.4 }] }).output
          const difference = (at(step) - at(-step)) / (2 * step)
          // third-order terms and rounding of the difference
          expectClose(derivative, difference, { relative: 2e-5, absolute: 1e-10 / step })
        }
      }),
      { numRuns: 60 },
    )
  })

  it('sum to zero over the resistors, each relative, where the transfer has no dimension', () => {
    fc.assert(
      fc.property(anyNetwork, (network) => {
        fc.pre(!network.elements.some(({ kind }) => kind === 'current-source'))
        const found = computeSensitivities(network, { model: 'ideal' })
        const terms = network.elements
          .filter(({ kind }) => kind === 'resistor')
          .map(({ ref }) => findSensitivity(found, ref) * sizeOf(network, ref))
        const sum = terms.reduce((total, term) => total + term, 0)
        expectClose(sum, 0, {
          absolute: 1e-12 * (1 + terms.reduce((total, term) => total + Math.abs(term), 0)),
        })
      }),
    )
  })

  it('can be taken at any other node', () => {
    const network = samples['three amplifiers']!
    const found = computeSensitivities(network, { model: 'ideal', output: { p: 'o1', n: 'o2' } })
    expectClose(findSensitivity(found, 'VSENSE'), 1 + 2e4 / 402, { relative: 1e-9 })
    expectClose(findSensitivity(found, 'VCM'), 0, { absolute: 1e-9 })
  })

  it('take the part’s own common mode of reference, then the middle of its supplies', () => {
    const network = samples.follower!
    const driven: Network = {
      ...network,
      elements: [
        ...network.elements,
        { kind: 'voltage-source', ref: 'VPOS', p: 'vpos', n: '0', value: 5, stage: 'source' },
        { kind: 'voltage-source', ref: 'VNEG', p: 'vneg', n: '0', value: -1, stage: 'source' },
      ],
    }
    const cmrr = findSensitivity(computeSensitivities(driven, { model: 'ideal' }), 'U1', 'cmrr')
    expectClose(Math.abs(cmrr), Math.abs(1.3 - 2), { relative: 1e-12 })
  })

  it('refuse a port that is not there', () => {
    const found = computeSensitivities(samples.divider!, { model: 'ideal' })
    expect(() => findSensitivity(found, 'R1', 'vos')).toThrow('There is no sensitivity to R1 vos')
  })
})

describe('sensitivities at a frequency', () => {
  it('equal central differences for every resistor and capacitor', () => {
    fc.assert(
      fc.property(anyNetwork, fc.double({ min: 1, max: 5, noNaN: true }), (network, decade) => {
        const frequency = 10 ** decade
        const found = computeAcSensitivities(network, frequency, { model: 'real' })
        for (const { kind, ref } of network.elements) {
          if (kind !== 'resistor' && kind !== 'capacitor') continue
          const value = sizeOf(network, ref)
          const step = 1e-4 * value
          const at = (amount: number) =>
            solveAc(network, frequency, { model: 'real', set: { [ref]: value + amount } }).output
          const [high, low] = [at(step), at(-step)]
          const derivative = findSensitivity(found, ref)
          const error = subtractComplex(subtractComplex(high, low), {
            re: derivative.re * 2 * step,
            im: derivative.im * 2 * step,
          })
          expectClose(magnitude(error), 0, {
            absolute: 1e-10 + 1e-6 * magnitude(subtractComplex(high, low)) + 1e-9 * magnitude(high),
          })
        }
      }),
      { numRuns: 60 },
    )
  })

  it('sum alike over resistors and capacitors: impedance scaling changes nothing', () => {
    const network = samples['second-order low-pass']!
    const found = computeAcSensitivities(network, 1e4, { model: 'ideal' })
    const sum = (kind: string) =>
      network.elements
        .filter((element) => element.kind === kind)
        .reduce((total, { ref }) => total + findSensitivity(found, ref).re * sizeOf(network, ref), 0)
    expectClose(sum('resistor'), sum('capacitor'), { relative: 1e-9 })
    expect(Math.abs(sum('resistor'))).toBeGreaterThan(1e-3)
  })
})
