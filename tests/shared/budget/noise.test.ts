import { describe, expect, it } from 'vitest'
import { probeNoise } from '#shared/analysis/noise.ts'
import { toSpice } from '#shared/analysis/spice.ts'
import { digitalFilterOf, summariseNoise } from '#shared/budget/noise.ts'
import { responseChain } from '#shared/budget/response-chain.ts'
import type { NoiseSummary } from '#shared/design/plan.ts'
import type { Design, DesignDocument } from '#shared/design/schema.ts'
import type { Amplifier, Network } from '#shared/network/types.ts'
import cases from '#tests/fixtures/frequency-cases.json' with { type: 'json' }
import { arrangementDesigns, buildConverter, buildDesign, buildSensor } from '#tests/support/designs.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { runNoise } from '#tests/support/ngspice.ts'
import { buildTrial, parseDesign } from '#tests/support/trials.ts'

const BOLTZMANN = 1.380649e-23

function noiseOf(document: DesignDocument, id: string): { design: Design; noise: NoiseSummary } {
  const design = parseDesign({ ...document, choose: { ...document.choose, arrangement: id } })
  return { design, noise: summariseNoise(design, buildTrial(design, id).spec) }
}

const line = (noise: NoiseSummary, id: string): number => noise.lines.find((l) => l.id === id)?.rms ?? 0

const published = (id: string) => {
  const found = cases.find((c) => c.id === id)
  if (!found) throw new Error(`there is no case ${id}`)
  return found
}

describe('the noise of a chain', () => {
  it.each(arrangementDesigns)('of %s adds up, and says what it is made of', (id, document) => {
    const { noise } = noiseOf(document, id)
    const squares = noise.lines.reduce((sum, l) => sum + l.rms ** 2, 0)
    expectClose(noise.rms, Math.sqrt(squares), { relative: 1e-12 })
    expectClose(
      noise.lines.reduce((sum, l) => sum + l.share, 0),
      1,
      { relative: 1e-12 },
    )
    const converter = Math.hypot(line(noise, 'converter'), line(noise, 'quantisation'))
    expectClose(Math.hypot(noise.circuit, converter), noise.rms, { relative: 1e-12 })
    expect(noise.dominant).toBe(noise.lines[0]?.label)
    expect(new Set(noise.lines.map((l) => l.id)).size).toBe(noise.lines.length)
    expect(noise.lines.every((l) => l.rms > 0 && l.label !== '')).toBe(true)
    expectClose(noise.snr, 20 * Math.log10(2 ** noise.effectiveBits * Math.sqrt(1.5)), { absolute: 1e-9 })
    expectClose(2 ** (noise.effectiveBits - noise.noiseFreeBits), 6.6 / Math.sqrt(12), { relative: 1e-9 })
  })

  it('is that of kT/C at the reservoir where there is no amplifier', () => {
    const { design, noise } = noiseOf(
      buildDesign({
        sensor: buildSensor(0.2, 2.2, { bandwidth: 1000 }),
        temperature: { low: 0, high: 85 },
        choose: { values: { R9: 1000, C9: 1e-8 } },
      }),
      'direct',
    )
    expect(design.temperature.high).toBe(85)
    expectClose(noise.temperature, 358.15, { relative: 1e-12 })
    expectClose(noise.circuit, Math.sqrt((BOLTZMANN * 358.15) / 1e-8), { relative: 2e-4 })
    // the source's 100 Ω and the 1 kΩ share it as they share the resistance
    expectClose((line(noise, 'RSOURCE') / line(noise, 'R9')) ** 2, 0.1, { relative: 1e-6 })
  })

  it('starts at the band that the sensor states, or at 0.1 Hz', () => {
    expect(noiseOf(buildDesign(), 'non-inverting-up').noise.from).toBe(0.1)
    const slow = noiseOf(
      buildDesign({ sensor: buildSensor(-0.35, 0.35, { bandLow: 0.001 }) }),
      'non-inverting-up',
    ).noise
    expect(slow.from).toBe(0.001)
    expect(line(slow, 'U1.en')).toBeGreaterThan(
      line(noiseOf(buildDesign(), 'non-inverting-up').noise, 'U1.en'),
    )
  })

  it('of an integrated part is √(enIn² + (enOut/G)²) at its input, with nothing of its inner resistors', () => {
    const [id, document] = arrangementDesigns.find(
      ([name]) => name === 'integrated-instrumentation-grounded',
    )!
    const design = parseDesign(document)
    const { network } = responseChain(design, buildTrial(design, id).spec)
    const probe = probeNoise(network, 300)
    const rg = network.elements.find((e) => e.ref === 'Rg')
    const gain = 1 + design.parts.instrumentation.k / (rg?.kind === 'resistor' ? rg.value : NaN)
    const { enIn, enOut, enCorner } = design.parts.instrumentation
    const density = probe.densitiesAt(1)
    const voltage = probe.origins.reduce((sum, o, k) => sum + (o.name === 'en' ? density[k]! : 0), 0)
    expectClose(Math.sqrt(voltage), gain * Math.hypot(enIn, enOut / gain) * Math.sqrt(1 + enCorner), {
      relative: 1e-4,
    })
    expect(probe.origins.filter(({ ref }) => /^RU1/.test(ref))).toEqual([])
    expect(probe.origins.filter(({ name }) => name === 'in-')).toEqual([])
    const ids = noiseOf(document, id).noise.lines.map((l) => l.id)
    expect(ids).toEqual(expect.arrayContaining(['U1.en', 'U1.in+', 'U1.in-', 'Rg']))
  })
})

describe('the noise of a reference', () => {
  const bridge = (same: boolean): DesignDocument =>
    buildDesign({
      sensor: {
        kind: 'bridge',
        quantity: { name: 'Water level', unit: 'm', low: 0, high: 5 },
        excitation: same ? { same: 'converter' } : { voltage: 4 },
        sensitivity: 0.002,
      },
      converter: buildConverter({
        input: { low: 0, high: 4 },
        guard: { low: 0.1, high: 0.1 },
        reference: { voltage: 4, noise: 1e-4 },
      }),
      shiftReference: { same: 'converter' },
      rails: { positive: 5, negative: -5 },
    })

  it('cancels where one reference feeds bridge, offset and converter', () => {
    const shared = noiseOf(bridge(true), 'three-amplifier').noise
    const apart = noiseOf(bridge(false), 'three-amplifier').noise
    expect(line(apart, 'converterReference')).toBeGreaterThan(5e-5)
    expect(line(shared, 'converterReference')).toBeLessThan(1e-3 * line(apart, 'converterReference'))
  })

  it('scales y where the converter alone uses it', () => {
    const { noise } = noiseOf(
      buildDesign({
        sensor: buildSensor(0.2, 2.2),
        converter: buildConverter({ reference: { voltage: 2.5, noise: 2e-5 } }),
      }),
      'direct',
    )
    expectClose(line(noise, 'converterReference'), (2e-5 * 2.2) / 2.5, { relative: 1e-6 })
  })
})

describe('quantisation', () => {
  const ideal = (bits: number, high: number): DesignDocument =>
    buildDesign({
      sensor: buildSensor(0, high, { sourceResistance: 0 }),
      converter: buildConverter({ input: { low: 0, high }, guard: { low: 0, high: 0 }, bits }),
      rails: { positive: high + 1 },
      choose: { values: { R9: 1, C9: 1e-6 } },
    })

  it(`is one code over √12 (${published('quantisation-10-bit').source})`, () => {
    const { recomputed } = published('quantisation-10-bit')
    const { noise } = noiseOf(ideal(10, 10.24), 'direct')
    expectClose(line(noise, 'quantisation'), recomputed.Eq_V ?? NaN, { relative: 1e-9 })
    expectClose(noise.snr, Number(recomputed.SNR_dB), { absolute: 1e-5 })
  })

  it(`alone leaves 6.02 N + 1.76 dB (${published('ideal-signal-to-noise').source})`, () => {
    const { given, recomputed } = published('ideal-signal-to-noise')
    const bits = given.bits as number[]
    bits.forEach((n, k) => {
      const { noise } = noiseOf(ideal(n, 2.5), 'direct')
      expectClose(noise.snr, (recomputed.SNR_dB as number[])[k]!, { absolute: 2e-4 })
      expectClose(noise.effectiveBits, n, { absolute: 1e-4 })
    })
  })
})

describe('an oversampling converter', () => {
  const document = (digitalFilter: 'none' | 'sinc1' | 'sinc3'): DesignDocument =>
    buildDesign({
      sensor: buildSensor(0.2, 2.2, { sourceResistance: 1e6, bandwidth: 5, bandLow: 0.001 }),
      converter: buildConverter({
        architecture: 'oversampling',
        modulatorRate: 5_120_000,
        outputRate: 50,
        digitalFilter,
      }),
      choose: { values: { R9: 1000, C9: 1e-11 } },
    })

  it('takes only the band of its digital filter', () => {
    const density = 4 * BOLTZMANN * 333.15 * 1e6
    // noise bandwidth of an averager: half its output rate; of order three 11/40
    for (const [kind, share] of [
      ['sinc1', 1 / 2],
      ['sinc3', 11 / 40],
    ] as const) {
      const { noise } = noiseOf(document(kind), 'direct')
      expectClose(line(noise, 'RSOURCE'), Math.sqrt(density * (share * 50 - 0.001)), { relative: 1e-3 })
    }
  })

  it('without one takes all', () => {
    const { design, noise } = noiseOf(document('none'), 'direct')
    expect(digitalFilterOf(design)).toBeNull()
    expectClose(noise.circuit, Math.sqrt((BOLTZMANN * 333.15) / 1e-11), { relative: 2e-3 })
  }, 60_000)
})

/** A source of 1 V²/Hz or 1 A²/Hz times a density: a resistor's noise, and a diode of pure 1/f, as controlled sources. */
function noiseLines({ ref, p, m, macro, part }: Amplifier, kelvin: number): string[] {
  const ohms = 1000
  const unit = Math.sqrt(4 * BOLTZMANN * kelvin * ohms)
  const into = (name: string, node: string, density: number, corner: number): string[] =>
    density === 0 || node === '0'
      ? []
      : [
          `R${ref}${name} ${ref}__w${name} 0 ${ohms}`,
          `G${ref}${name} 0 ${node} ${ref}__w${name} 0 ${density / unit}`,
          `D${ref}${name} ${ref}__f${name} 0 flicker`,
          `V${ref}${name} ${ref}__f${name} 0 DC 0`,
          `F${ref}${name} 0 ${node} V${ref}${name} ${density * Math.sqrt(corner)}`,
        ]
  return [
    ...into('E', `${ref}__a`, part.en, part.enCorner),
    ...into('P', p, part.in, part.inCorner),
    ...(macro ? [] : into('M', m, part.in, part.inCorner)),
  ]
}

function noiseNetlist(network: Network, kelvin: number): string {
  const silent = network.elements.flatMap((e) => (e.kind === 'resistor' && e.noiseless ? [e.ref] : []))
  const source = network.elements.find((e) => 'ac' in e && e.ac)
  return toSpice(
    { ...network, temperature: kelvin - 273.15 },
    {
      extra: [
        ...network.elements.flatMap((e) => (e.kind === 'amplifier' ? noiseLines(e, kelvin) : [])),
        '.model flicker D(KF=1 AF=0)',
      ],
      noiseless: (printed) => printed.startsWith('R_') || silent.includes(printed),
      analysis: { noise: { input: source?.ref ?? '', pointsPerDecade: 60, from: 0.1, to: 1e8 } },
    },
  )
}

describe('ngspice', () => {
  it.each(['non-inverting-up', 'three-amplifier', 'integrated-instrumentation+weighted-difference'])(
    'finds the same spectrum and the same total for %s',
    async (id) => {
      const [, document] = arrangementDesigns.find(([name]) => name === id)!
      const design = parseDesign(document)
      const { spec } = buildTrial(design, id)
      const { network } = responseChain(design, spec)
      const kelvin = design.temperature.high + 273.15
      const { frequency, density } = await runNoise(noiseNetlist(network, kelvin))
      const probe = probeNoise(network, kelvin)
      expect(frequency.length).toBeGreaterThan(500)
      let total = 0
      frequency.forEach((f, k) => {
        const ours = Math.sqrt(probe.densitiesAt(f).reduce((sum, value) => sum + value, 0))
        // leakage that the simulator adds to keep its matrix regular shows once next to nothing is left
        expectClose(ours, density[k]!, { relative: 1e-3, absolute: 1e-13 })
        if (k === 0) return
        const [f0, d0] = [frequency[k - 1]!, density[k - 1]!]
        total += ((f * density[k]! ** 2 + f0 * d0 ** 2) / 2) * Math.log(f / f0)
      })
      const { circuit, lines } = summariseNoise(design, spec)
      const references = lines
        .filter((l) => l.id.endsWith('Reference'))
        .reduce((sum, l) => sum + l.rms ** 2, 0)
      expectClose(Math.sqrt(circuit ** 2 - references), Math.sqrt(total), { relative: 1e-3 })
    },
  )
})
