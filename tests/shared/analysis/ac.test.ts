import { describe, expect, it } from 'vitest'
import { computeLoopGain, computeResponse, feedbackIsNegative, solveAc } from '#shared/analysis/ac.ts'
import { solveDc } from '#shared/analysis/dc.ts'
import { magnitude, phase } from '#shared/numerics/complex.ts'
import type { Amplifier, Network } from '#shared/network/types.ts'
import { buildAmplifierPart, buildTextbookPart } from '#tests/support/amplifier-part.ts'
import { Bench, sampleNetworks } from '#tests/support/circuits.ts'
import { expectClose } from '#tests/support/expect-close.ts'

const samples = Object.entries(sampleNetworks())

describe('frequency response', () => {
  it('is that of one pole for a resistor and a capacitor', () => {
    const network = new Bench()
      .v('V1', 'in', 0, '0', 1)
      .r('R1', 'in', 'adc', 1e3)
      .c('C1', 'adc', '0', 1e-6)
      .build()
    const corner = 1 / (2 * Math.PI * 1e-3)
    const { output } = solveAc(network, corner, { model: 'ideal' })
    expectClose(magnitude(output), Math.SQRT1_2, { relative: 1e-12 })
    expectClose(phase(output), -Math.PI / 4, { relative: 1e-12 })
  })

  it('counts currents as at DC', () => {
    const network = new Bench().v('V1', 'adc', 0, '0', 1).c('C1', 'adc', '0', 1e-6).build()
    const current = solveAc(network, 1e3, { model: 'ideal' }).current('V1')
    expectClose(current.im, -2 * Math.PI * 1e-3, { relative: 1e-12 })
  })

  it.each(samples)('of %s at 0 Hz is its change at DC', (_, network) => {
    const source = network.elements.find((element) => 'ac' in element)
    if (!source || !('ac' in source)) throw new Error('no driven source')
    const step = source.ac ?? 0
    const extra = [{ ref: source.ref, port: 'value' as const, amount: step }]
    const change =
      solveDc(network, { model: 'real', extra }).output - solveDc(network, { model: 'real' }).output
    const [response] = computeResponse(network, [0])
    expectClose(response!.re, change, { relative: 1e-7 })
    expect(response!.im).toBe(0)
  })

  it('refuses frequencies that are negative or not finite', () => {
    const network = sampleNetworks().divider!
    for (const frequency of [-1, NaN, Infinity]) {
      expect(() => solveAc(network, frequency, { model: 'real' })).toThrow(RangeError)
    }
  })

  it('names what is not determined at DC behind a capacitor', () => {
    const network = new Bench()
      .v('V1', 'in', 0, '0', 1)
      .c('C1', 'in', 'adc', 1e-9)
      .c('C2', 'adc', '0', 1e-9)
      .build()
    expect(() => solveAc(network, 0, { model: 'real' })).toThrow('adc is not determined at 0 Hz')
    expectClose(solveAc(network, 1, { model: 'real' }).output.re, 0.5, { relative: 1e-12 })
  })
})

describe('loop gain', () => {
  const amplifiers = samples.flatMap(([title, network]) =>
    network.elements
      .filter((element) => element.kind === 'amplifier')
      .map((element) => ({ title: `${element.ref} of ${title}`, network, element })),
  )

  it.each(amplifiers)(
    'of $title is negative feedback, positive with its inputs swapped',
    ({ network, element }) => {
      expect(feedbackIsNegative(network, element.ref)).toBe(true)
      const swapped: Amplifier = { ...element, p: element.m, m: element.p }
      const wrong: Network = {
        ...network,
        elements: network.elements.map((present) => (present === element ? swapped : present)),
      }
      expect(feedbackIsNegative(wrong, element.ref)).toBe(false)
      // the operating point of ideal amplifiers cannot tell the two apart
      expectClose(solveDc(wrong, { model: 'ideal' }).output, solveDc(network, { model: 'ideal' }).output, {
        absolute: 1e-9,
      })
    },
  )

  it('sets the closed-loop error: the gain falls short by 1/(1 + T)', () => {
    const part = buildTextbookPart({ a0: 1e4 })
    const network = new Bench(part)
      .v('V1', 'in', 1)
      .u('U1', 'in', 'm', 'adc')
      .r('R1', 'm', '0', 1e3)
      .r('R2', 'adc', 'm', 9e3)
      .build()
    const loop = computeLoopGain(network, 'U1', 0).re
    expectClose(loop, 1e3, { relative: 1e-6 })
    expectClose(solveDc(network, { model: 'real' }).output, 10 * (1 - 1 / (1 + loop)), { relative: 1e-9 })
  })

  it('falls to one at gain-bandwidth product over noise gain, at −90°', () => {
    const part = buildTextbookPart({ a0: 1e6, gbw: 1e7 })
    const network = new Bench(part)
      .v('V1', 'in', 1)
      .u('U1', 'in', 'm', 'adc')
      .r('R1', 'm', '0', 1e3)
      .r('R2', 'adc', 'm', 9e3)
      .build()
    const loop = computeLoopGain(network, 'U1', 1e6)
    expectClose(magnitude(loop), 1, { relative: 1e-6 })
    expectClose(phase(loop), -Math.PI / 2, { relative: 1e-4 })
  })

  it('leaves 7° of phase margin for 10 MHz and 100 Ω straight into 10 nF, 89° with 100 Ω in series', () => {
    const part = buildTextbookPart({ a0: 1e6, gbw: 1e7, rout: 100 })
    const straight = new Bench(part)
      .v('V1', 'in', 1)
      .u('U1', 'in', 'adc', 'adc')
      .c('CL', 'adc', '0', 1e-8)
      .build()
    const isolated = new Bench(part)
      .v('V1', 'in', 1)
      .u('U1', 'in', 'out', 'out')
      .r('RS', 'out', 'adc', 100)
      .c('CL', 'adc', '0', 1e-8)
      .build()
    expectClose(phaseMargin(straight), 7, { absolute: 0.5 })
    expectClose(phaseMargin(isolated), 89, { absolute: 0.6 })
  })

  it('counts the impedances at the pins and the load', () => {
    const part = buildAmplifierPart({ a0: 1e5, rin: 1e4, rcm: 1e12, rout: 1e3 })
    const network = new Bench(part)
      .u('U1', '0', 'm', 'adc')
      .r('R1', 'm', '0', 1e4)
      .r('R2', 'adc', 'm', 1e4)
      .r('RL', 'adc', '0', 1e3)
      .build()
    // 5 kΩ at the pin, 15 kΩ ∥ 1 kΩ at the output behind 1 kΩ
    const load = (15e3 * 1e3) / 16e3
    expectClose(computeLoopGain(network, 'U1', 0).re, (1e5 * load) / (load + 1e3) / 3, { relative: 1e-6 })
  })

  it('is asked of amplifiers only', () => {
    expect(() => computeLoopGain(sampleNetworks().follower!, 'RL', 0)).toThrow(/RL is no amplifier/)
  })
})

/** Degrees left at the frequency where the loop gain is one. */
function phaseMargin(network: Network): number {
  let [low, high] = [1, 1e9]
  for (let step = 0; step < 100; step++) {
    const middle = Math.sqrt(low * high)
    if (magnitude(computeLoopGain(network, 'U1', middle)) > 1) low = middle
    else high = middle
  }
  return 180 + (phase(computeLoopGain(network, 'U1', low)) * 180) / Math.PI
}
