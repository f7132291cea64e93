import { describe, expect, it } from 'vitest'
import { integrateNoise, probeNoise } from '#shared/analysis/noise.ts'
import type { Network } from '#shared/network/types.ts'
import { buildAmplifierPart, buildTextbookPart } from '#tests/support/amplifier-part.ts'
import { Bench, sampleNetworks } from '#tests/support/circuits.ts'
import { expectClose } from '#tests/support/expect-close.ts'

const BOLTZMANN = 1.380649e-23
const WARM = 333.15

/** V rms of each origin at the output, by `ref name`. */
function noiseOf(network: Network, from = 0.1): Record<string, number> {
  const probe = probeNoise(network, WARM)
  const { squares } = integrateNoise(probe, { from, least: 1e6 })
  return Object.fromEntries(
    probe.origins.map(({ ref, name }, k) => [`${ref} ${name}`, Math.sqrt(squares[k]!)]),
  )
}

const rms = (found: Record<string, number>): number => Math.hypot(...Object.values(found))

describe('thermal noise', () => {
  it('of a resistor and a capacitor is √(kT/C), whatever the resistor', () => {
    for (const ohms of [1e3, 1e4, 1e7]) {
      const network = new Bench().r('R1', 'adc', '0', ohms).c('C1', 'adc', '0', 1e-9).build()
      expectClose(rms(noiseOf(network, 1e-3)), Math.sqrt((BOLTZMANN * WARM) / 1e-9), { relative: 1e-4 })
    }
  })

  it('of two resistors in parallel is that of one of their parallel value', () => {
    const network = new Bench().r('R1', 'adc', '0', 1e4).r('R2', 'adc', '0', 4e4).build()
    const density = probeNoise(network, WARM).densitiesAt(1e3)
    expectClose(density[0]! + density[1]!, 4 * BOLTZMANN * WARM * 8e3, { relative: 1e-12 })
  })

  it('is made by no capacitor, source or follower of sources', () => {
    const network = new Bench()
      .v('V1', 'in', 1, '0', 1)
      .e('E1', 'x', '0', 'in', '0', 3)
      .i('I1', '0', 'x', 1e-3)
      .r('R1', 'x', 'adc', 1e3)
      .c('C1', 'adc', '0', 1e-9)
      .build()
    expect(probeNoise(network, WARM).origins).toEqual([{ ref: 'R1', name: 'thermal' }])
  })

  it('is left to the figures of a part by a resistor that only models it', () => {
    const bench = new Bench().r('R1', 'adc', '0', 1e3)
    bench.builder.resistor({ ref: 'R2', a: 'adc', b: '0', value: 1e3, stage: 'converter', noiseless: true })
    const density = probeNoise(bench.build(), WARM).densitiesAt(10)
    // R1's current into both
    expectClose(density[0]!, ((4 * BOLTZMANN * WARM) / 1e3) * 500 ** 2, { relative: 1e-12 })
    expect(density).toHaveLength(1)
  })
})

describe('noise of an amplifier', () => {
  const quiet = { en: 0, enCorner: 0, in: 0 }
  const gain = (part: Partial<Parameters<typeof buildTextbookPart>[0]>) =>
    new Bench(buildTextbookPart({ gbw: 1e6, a0: 1e8, ...quiet, ...part }))
      .v('V1', 'source', 0, '0', 1)
      .r('RS', 'source', 'p', 1e3)
      .u('U1', 'p', 'm', 'adc')
      .r('RG', 'm', '0', 1e3)
      .r('RF', 'adc', 'm', 9e3)
      .build()
  // white through one pole at gbw/10, taken from 0.1 Hz
  const bandwidth = (Math.PI / 2) * 1e5

  it('is en times the noise gain over one pole', () => {
    const found = noiseOf(gain({ en: 1e-8 }))['U1 en']!
    expectClose(found, 1e-8 * 10 * Math.sqrt(bandwidth), { relative: 2e-4 })
  })

  it('has its 1/f part added exactly', () => {
    // e²·(fc·ln(fh/fl) + …): of a single pole ∫ df/(f(1 + (f/f0)²)) = ½·ln(1 + (f0/fl)²)
    const corner = 1e4
    const found = noiseOf(gain({ en: 1e-8, enCorner: corner }), 0.01)['U1 en']!
    const square = bandwidth + (corner / 2) * Math.log(1 + (1e5 / 0.01) ** 2)
    expectClose(found, 1e-8 * 10 * Math.sqrt(square), { relative: 2e-4 })
  })

  it('has each current through the impedance at its own pin', () => {
    const found = noiseOf(gain({ in: 1e-12 }))
    expectClose(found['U1 in+']!, 1e-12 * 1e3 * 10 * Math.sqrt(bandwidth), { relative: 2e-4 })
    expectClose(found['U1 in-']!, 1e-12 * 9e3 * Math.sqrt(bandwidth), { relative: 2e-4 })
  })

  it('of each resistor has its own gain to the output', () => {
    const found = noiseOf(gain({}))
    const thermal = (ohms: number, factor: number) =>
      factor * Math.sqrt(4 * BOLTZMANN * WARM * ohms * bandwidth)
    expectClose(found['RS thermal']!, thermal(1e3, 10), { relative: 2e-4 })
    expectClose(found['RG thermal']!, thermal(1e3, 9), { relative: 2e-4 })
    expectClose(found['RF thermal']!, thermal(9e3, 1), { relative: 2e-4 })
  })

  it('names no current where the part has none', () => {
    const probe = probeNoise(gain({ en: 1e-9 }), WARM)
    expect(probe.origins.filter(({ ref }) => ref === 'U1')).toEqual([{ ref: 'U1', name: 'en' }])
  })
})

describe('integrated noise', () => {
  const samples = Object.entries({
    ...sampleNetworks(),
    // rising noise gain that ends in a resonance of quality 250
    peaking: new Bench(buildAmplifierPart({ gbw: 1e7, enCorner: 200 }))
      .i('I1', '0', 'm', 0, 1)
      .c('CD', 'm', '0', 1e-9)
      .r('RF', 'adc', 'm', 1e6)
      .u('U1', '0', 'm', 'adc')
      .build(),
  })

  it.each(samples)('of %s is that of a fine grid', (title, network) => {
    const probe = probeNoise(network, WARM)
    const { from, to, squares } = integrateNoise(probe, { from: 0.1, least: 1e7 })
    const count = title === 'peaking' ? 60_000 : 3000
    const ratio = Math.log(to / from) / count
    let fine = 0
    for (let i = 0; i < count; i++) {
      const f = from * Math.exp((i + 0.5) * ratio)
      fine += f * ratio * probe.densitiesAt(f).reduce((sum, value) => sum + value, 0)
    }
    const whole = squares.reduce((sum, value) => sum + value, 0)
    expectClose(Math.sqrt(whole), Math.sqrt(fine), { relative: 3e-4 })
  })

  it('ends where a decade adds nothing, not before the floor of what follows a low filter', () => {
    const network = new Bench(buildAmplifierPart())
      .v('V1', 'in', 0, '0', 1)
      .r('R1', 'in', 'p', 1e6)
      .c('C1', 'p', '0', 1e-6)
      .u('U1', 'p', 'adc', 'adc')
      .build()
    const { to } = integrateNoise(probeNoise(network, WARM), { from: 0.1, least: 1e7 })
    expect(to).toBeGreaterThanOrEqual(1e8)
    const found = noiseOf(network)
    // the follower's own noise over its own band
    expectClose(found['U1 en']!, 8e-9 * Math.sqrt((Math.PI / 2) * 1e7), { relative: 0.05 })
  })

  it('counts a brick wall where one is given', () => {
    const network = new Bench().r('R1', 'adc', '0', 1e4).build()
    const { squares } = integrateNoise(probeNoise(network, WARM), {
      from: 20,
      least: 1e3,
      weight: (f) => (f <= 2e4 ? 1 : 0),
      breaks: [2e4],
    })
    expectClose(squares[0]!, 4 * BOLTZMANN * WARM * 1e4 * (2e4 - 20), { relative: 1e-6 })
  })
})
