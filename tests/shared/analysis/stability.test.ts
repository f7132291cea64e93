import { describe, expect, it } from 'vitest'
import { computeLoopGain, prepareResponse } from '#shared/analysis/ac.ts'
import { toSpice } from '#shared/analysis/spice.ts'
import { findCrossover, findCrossoverNear } from '#shared/analysis/stability.ts'
import { secondPole } from '#shared/network/elements/amplifier.ts'
import type { Amplifier, Network } from '#shared/network/types.ts'
import { magnitude, phase } from '#shared/numerics/complex.ts'
import cases from '#tests/fixtures/frequency-cases.json' with { type: 'json' }
import { buildAmplifierPart, buildTextbookPart } from '#tests/support/amplifier-part.ts'
import { Bench, sampleNetworks } from '#tests/support/circuits.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { runAc } from '#tests/support/ngspice.ts'

const degrees = 180 / Math.PI

/** Root of a falling function on a log axis, by halving: the tests' own solver. */
function solve(f: (x: number) => number): number {
  let [low, high] = [1, 1e12]
  for (let i = 0; i < 200; i++) {
    const middle = Math.sqrt(low * high)
    if (f(middle) > 0) low = middle
    else high = middle
  }
  return low
}

const bare = (phaseMargin: number, a0 = 1e6): Network =>
  new Bench(buildTextbookPart({ gbw: 1e7, a0, phaseMargin }))
    .v('V1', 'p', 0, '0', 1)
    .u('U1', 'p', 'adc', 'adc')
    .r('RL', 'adc', '0', 1e4)
    .build()

describe('the second pole', () => {
  it.each([10, 30, 45, 60, 75, 89])('gives a bare amplifier its margin of %d°', (margin) => {
    for (const a0 of [1e3, 1e4, 1e8]) {
      const found = findCrossover(bare(margin, a0), 'U1', { poles: 2 })
      expectClose(found?.phaseMargin ?? NaN, margin, { absolute: 1e-6 })
    }
  })

  it('lies at gbw·sin·tan of the margin for a large gain', () => {
    const margin = 60 / degrees
    const part = buildTextbookPart({ gbw: 1e7, a0: 1e9, phaseMargin: 60 })
    expectClose(secondPole(part), 1e7 * Math.sin(margin) * Math.tan(margin), { relative: 1e-7 })
  })

  it('equals the first where two poles cannot leave as little as the margin', () => {
    // cos of the least margin is 1 − 2/a0: 11.5° for a gain of 100
    const part = buildTextbookPart({ gbw: 1e7, a0: 100, phaseMargin: 5 })
    expectClose(secondPole(part), 1e7 / 100, { relative: 1e-9 })
  })

  it('is far away for a margin of a right angle', () => {
    expect(secondPole(buildTextbookPart({ gbw: 1e7, a0: 1e6, phaseMargin: 90 }))).toBeGreaterThan(1e12)
  })

  it('is in no analysis that does not ask for it', () => {
    const network = bare(45)
    expectClose(phase(computeLoopGain(network, 'U1', 1e7)) * degrees, -90, { absolute: 1e-3 })
    expectClose(findCrossover(network, 'U1')?.phaseMargin ?? NaN, 90, { absolute: 1e-3 })
  })
})

describe('a capacitive load', () => {
  const loaded = (series: number): Network => {
    const part = buildTextbookPart({ gbw: 1e7, a0: 1e6, rout: 100, phaseMargin: 90 })
    const bench = new Bench(part).v('V1', 'p', 0, '0', 1).u('U1', 'p', 'out', 'out')
    return (series > 0 ? bench.r('R9', 'out', 'adc', series) : bench.v('VX', 'out', 0, 'adc'))
      .c('C9', 'adc', '0', 1e-8)
      .build()
  }

  it('of 10 nF straight at 100 Ω leaves a 10 MHz amplifier 7°', () => {
    const pole = 1 / (2 * Math.PI * 100 * 1e-8)
    const crossing = solve((f) => 1e7 / f / Math.hypot(1, f / pole) - 1)
    const found = findCrossover(loaded(0), 'U1', { poles: 2 })
    expectClose(found?.frequency ?? NaN, crossing, { relative: 1e-6 })
    expectClose(found?.phaseMargin ?? NaN, 90 - Math.atan(crossing / pole) * degrees, { absolute: 1e-3 })
    expect(Math.round(found?.phaseMargin ?? NaN)).toBe(7)
  })

  it('of 10 nF behind 100 Ω leaves it 89°', () => {
    expect(Math.round(findCrossover(loaded(100), 'U1', { poles: 2 })?.phaseMargin ?? NaN)).toBe(89)
  })
})

describe('capacitance at the − pin', () => {
  const inverting = (capacitance: number, feedback = 0): Network => {
    const bench = new Bench(buildTextbookPart({ gbw: 1e7, a0: 1e7, phaseMargin: 90 }))
      .v('V1', 'in', 0, '0', 1)
      .r('R1', 'in', 'm', 1e5)
      .r('RF', 'adc', 'm', 2e5)
      .c('CIN', 'm', '0', capacitance)
      .u('U1', '0', 'm', 'adc')
    return (feedback > 0 ? bench.c('CF', 'adc', 'm', feedback) : bench).build()
  }

  it('takes atan(fx/fz) from the margin', () => {
    const zero = 1 / (2 * Math.PI * (1e5 / 1.5) * 1e-11)
    const crossing = solve((f) => 1e7 / 3 / f / Math.hypot(1, f / zero) - 1)
    const found = findCrossover(inverting(1e-11), 'U1', { poles: 2 })
    expectClose(found?.frequency ?? NaN, crossing, { relative: 1e-6 })
    expectClose(found?.phaseMargin ?? NaN, 90 - Math.atan(crossing / zero) * degrees, { absolute: 1e-3 })
  })

  it('is compensated exactly by Cf = Cin·R1/RF', () => {
    const found = findCrossover(inverting(1e-11, 5e-12), 'U1', { poles: 2 })
    expectClose(found?.phaseMargin ?? NaN, 90, { absolute: 1e-3 })
    expectClose(found?.frequency ?? NaN, 1e7 / 3, { relative: 1e-5 })
  })

  it('is found again from close by, and from too far away', () => {
    const network = inverting(1e-11)
    const whole = findCrossover(network, 'U1', { poles: 2 })
    for (const near of [1e6, 1.2e6, 4])
      expectClose(
        findCrossoverNear(network, 'U1', near, { poles: 2 })?.phaseMargin ?? NaN,
        whole?.phaseMargin ?? 0,
        {
          absolute: 1e-6,
        },
      )
    const set = { CIN: 2e-11 }
    expectClose(
      findCrossoverNear(network, 'U1', whole?.frequency ?? 1, { poles: 2, set })?.phaseMargin ?? NaN,
      findCrossover(inverting(2e-11), 'U1', { poles: 2 })?.phaseMargin ?? 0,
      { absolute: 1e-6 },
    )
  })
})

describe('a load inside the loop', () => {
  const found = cases.find((c) => c.id === 'capacitive-load-compensated')
  const given: Record<string, unknown> = found?.given ?? {}
  const recomputed: Record<string, unknown> = found?.recomputed ?? {}
  const part = buildTextbookPart({
    gbw: Number(given.GBP_Hz),
    rout: Number(given.ro_ohm),
    a0: 1e6,
    phaseMargin: 90,
  })
  const inverting = (series: number, feedback: number): Network =>
    new Bench(part)
      .v('V1', 'in', 0, '0', 1)
      .r('R1', 'in', 'm', Number(given.R1_ohm))
      .r('R2', 'adc', 'm', Number(given.R2_ohm))
      .r('RS', 'out', 'adc', series)
      .c('CL', 'adc', '0', Number(given.CL_F))
      .c('CF', 'out', 'm', feedback)
      .u('U1', '0', 'm', 'out')
      .build()

  it(`is compensated by a resistor and a capacitor (${found?.source})`, () => {
    const plain = findCrossover(inverting(1e-3, 1e-18), 'U1', { poles: 2 })
    expect(plain?.phaseMargin).toBeLessThan(30)
    const cured = inverting(Number(recomputed.Rs_ohm), Number(recomputed.Cf_F))
    expect(findCrossover(cured, 'U1', { poles: 2 })?.phaseMargin).toBeGreaterThan(75)
    // the book's corner is that of the first pole alone, 1/(2π·R2·Cf): far below it the lag is that pole's, and that
    // of the amplifier at a noise gain of three
    const respond = prepareResponse(cured)
    const [corner, low] = [Number(recomputed.f3dB_Hz), Number(recomputed.f3dB_Hz) / 100]
    const lag = phase(respond(0)) - phase(respond(low))
    expectClose(Math.abs(lag), Math.atan(low / corner) + (3 * low) / part.gbw, { relative: 0.01 })
  })
})

describe('a loop', () => {
  it('that has less than one everywhere has no crossover', () => {
    const network = new Bench(buildTextbookPart({ a0: 20 }))
      .v('V1', 'p', 0, '0', 1)
      .u('U1', 'p', 'm', 'adc')
      .r('RF', 'adc', 'm', 1e6)
      .r('RG', 'm', '0', 1e4)
      .build()
    expect(findCrossover(network, 'U1', { poles: 2 })).toBeNull()
  })

  it('that turns past half a turn has a negative margin', () => {
    // output resistance into its load, feedback resistance into the − pin: three poles below the crossover
    const part = buildTextbookPart({ gbw: 1e8, rout: 100, phaseMargin: 90 })
    const network = new Bench(part)
      .v('V1', 'p', 0, '0', 1)
      .u('U1', 'p', 'm', 'adc')
      .r('RF', 'adc', 'm', 1e5)
      .r('RG', 'm', '0', 1e5)
      .c('CL', 'adc', '0', 1e-8)
      .c('CIN', 'm', '0', 1e-11)
      .build()
    expect(findCrossover(network, 'U1', { poles: 2 })?.phaseMargin).toBeLessThan(-5)
  })
})

/** The netlist with an amplifier's controlled source replaced by a test source of 1 V; all other sources quiet. */
function openedNetlist(network: Network, { ref, part, out }: Amplifier, sweep: [number, number]): string {
  const source = part.rout > 0 ? `${ref}__o` : out
  return toSpice(network, { analysis: { ac: { pointsPerDecade: 4, from: sweep[0], to: sweep[1] } } })
    .replace(new RegExp(`^E_${ref} .*$`, 'm'), `VTEST ${source} 0 DC 0 AC 1`)
    .replace(/^((?!VTEST)[VI]\w+ .*) AC [\d.e+-]+$/gm, '$1')
}

describe('the loop opened in ngspice', () => {
  const capacitive = new Bench(buildAmplifierPart({ phaseMargin: 55 }))
    .v('VSENSE', 'sense', 0, '0', 1)
    .r('RS', 'sense', 'p', 1e3)
    .u('U1', 'p', 'm', 'out')
    .r('RF', 'out', 'm', 1e5)
    .r('RG', 'm', '0', 1e4)
    .r('R9', 'out', 'adc', 10)
    .c('C9', 'adc', '0', 1e-8)
    .build()
  const networks: [string, Network][] = [
    ['a gain stage into a reservoir', capacitive],
    ['three amplifiers', sampleNetworks()['three amplifiers']!],
  ]

  it.each(networks)('of %s is ours', async (_, network) => {
    for (const amplifier of network.elements.filter((e) => e.kind === 'amplifier')) {
      const { ref, part } = amplifier
      const { frequency, nodes } = await runAc(openedNetlist(network, amplifier, [10, 1e8]))
      const radians = part.phaseMargin / degrees
      const second = part.gbw * Math.sin(radians) * Math.tan(radians)
      const inner = nodes[`${ref.toLowerCase()}__a`] ?? []
      expect(inner).toHaveLength(frequency.length)
      frequency.forEach((f, k) => {
        // T is minus what comes back at the amplifier's inner node, seen through the second pole
        const back = inner[k]!
        const spice = { re: -back.re, im: -back.im }
        const ours = computeLoopGain(network, ref, f, { poles: 2 })
        expectClose(magnitude(ours), magnitude(spice) / Math.hypot(1, f / second), { relative: 1e-4 })
        const turn = (phase(ours) - phase(spice) + Math.atan(f / second)) * degrees
        expectClose(Math.abs(((turn + 540) % 360) - 180), 0, { absolute: 0.01 })
      })
    }
  })
})
