import { describe, expect, it } from 'vitest'
import { prepareResponse } from '#shared/analysis/ac.ts'
import { toSpice } from '#shared/analysis/spice.ts'
import { computeDynamics } from '#shared/budget/dynamics.ts'
import { responseChain } from '#shared/budget/response-chain.ts'
import type { Dynamics } from '#shared/design/plan.ts'
import type { Design, DesignDocument } from '#shared/design/schema.ts'
import cases from '#tests/fixtures/frequency-cases.json' with { type: 'json' }
import { arrangementDesigns, buildConverter, buildDesign, buildSensor } from '#tests/support/designs.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { runAc, runTran } from '#tests/support/ngspice.ts'
import { buildTrial, parseDesign } from '#tests/support/trials.ts'

function dynamicsOf(document: DesignDocument, id: string): { design: Design; dynamics: Dynamics } {
  const design = parseDesign({ ...document, choose: { ...document.choose, arrangement: id } })
  return { design, dynamics: computeDynamics(design, buildTrial(design, id).spec) }
}

const passive = (more: Partial<DesignDocument> = {}): DesignDocument =>
  buildDesign({
    sensor: buildSensor(0, 2.5, { sourceResistance: 100, bandwidth: 1000 }),
    converter: buildConverter({ guard: { low: 0, high: 0 }, bits: 16 }),
    rails: { positive: 6 },
    choose: { values: { R9: 900, C9: 1e-8 } },
    ...more,
  })

describe('a chain of one pole', () => {
  const corner = 1 / (2 * Math.PI * 1000 * 1e-8)
  const { dynamics } = dynamicsOf(passive(), 'direct')

  it('has its bandwidth at 1/(2πRC), source resistance included', () => {
    expectClose(dynamics.bandwidth ?? NaN, corner, { relative: 1e-6 })
  })

  it('loses amplitude at the signal bandwidth as one pole does', () => {
    expectClose(dynamics.droopAtBandwidth ?? NaN, 1 - 1 / Math.hypot(1, 1000 / corner), { relative: 1e-6 })
  })

  it('settles to half a code after τ·ln(2^17)', () => {
    expectClose(dynamics.settling ?? NaN, 1e-5 * 17 * Math.LN2, { relative: 1e-6 })
    expect(dynamics.overshoot).toBeLessThan(1e-9)
  })

  it('settles later to a closer criterion', () => {
    const closer = dynamicsOf(passive({ rules: { settling: 0.125 } }), 'direct').dynamics
    expectClose(closer.settling ?? NaN, 1e-5 * 19 * Math.LN2, { relative: 1e-6 })
  })

  it('has no amplifier to slew', () => {
    expect(dynamics.fullPower).toBeNull()
    expect(dynamics.amplifiers).toEqual([])
    expect(dynamics.followsSignal).toBe(true)
  })

  it('says nothing of a bandwidth that the design does not state', () => {
    const sensor = buildSensor(0, 2.5, { bandwidth: undefined })
    const { dynamics: silent } = dynamicsOf(passive({ sensor }), 'direct')
    expect(silent.droopAtBandwidth).toBeNull()
    expect(silent.followsSignal).toBe(true)
  })
})

const published = (id: string) => {
  const found = cases.find((c) => c.id === id)
  if (!found) throw new Error(`there is no case ${id}`)
  return found
}

const swinging = (slewRate: number, peak: number, bandwidth: number): DesignDocument =>
  buildDesign({
    sensor: buildSensor(-peak, peak, { sourceResistance: 0, bandwidth }),
    converter: buildConverter({ input: { low: -peak, high: peak }, guard: { low: 0, high: 0 } }),
    rails: { positive: 30, negative: -30 },
    parts: { amplifier: { slewRate, maximumSupply: 80, a0: 1e9 } },
  })

describe('the full-power bandwidth', () => {
  it.each(['full-power-bandwidth-1', 'full-power-bandwidth-2'])('is SR/(2π·Vp): %s', (id) => {
    const { given, expect: printed, tolerance, recomputed } = published(id)
    const { dynamics } = dynamicsOf(swinging(Number(given.SR_V_per_s), Number(given.Vp_V), 10), 'follower')
    expectClose(dynamics.fullPower ?? NaN, Number(recomputed.fmax_Hz), { relative: 1e-6 })
    const { abs } = tolerance.fmax_Hz ?? { abs: 0 }
    expectClose(dynamics.fullPower ?? NaN, Number(printed.fmax_Hz), { absolute: abs })
  })

  it('below the signal bandwidth is told', () => {
    expect(dynamicsOf(swinging(5e5, 12, 6000), 'follower').dynamics.followsSignal).toBe(true)
    expect(dynamicsOf(swinging(5e5, 12, 7000), 'follower').dynamics.followsSignal).toBe(false)
  })

  it('is set by the amplifier that moves, not by one that holds a level', () => {
    for (const [id, document] of arrangementDesigns.filter(([name]) =>
      /^(difference|two-amplifier)$/.test(name),
    )) {
      const { design, dynamics } = dynamicsOf(document, id)
      expectClose(dynamics.fullPower ?? NaN, design.parts.amplifier.slewRate / (Math.PI * 2.3), {
        relative: 0.02,
      })
    }
  })
})

describe('the bandwidth of an amplifier', () => {
  it('is its gain-bandwidth product over its noise gain', () => {
    const document = buildDesign({
      sensor: buildSensor(0.1, 0.4, { sourceResistance: 0 }),
      parts: { amplifier: { gbw: 1e6, cin: { common: 0, differential: 0 }, rout: 0.001 } },
      choose: { values: { Rf: 9000, Rg: 1000 } },
    })
    const [first] = dynamicsOf(document, 'non-inverting').dynamics.amplifiers
    expectClose(first?.bandwidth ?? NaN, 1e5, { relative: 1e-4 })
  })

  it('of an integrated part is the one that its table states at its gain', () => {
    const [id, document] = arrangementDesigns.find(
      ([name]) => name === 'integrated-instrumentation-grounded',
    )!
    const { design, dynamics } = dynamicsOf(document, id)
    const rg = responseChain(design, buildTrial(design, id).spec).network.elements.find((e) => e.ref === 'Rg')
    const gain = 1 + design.parts.instrumentation.k / (rg?.kind === 'resistor' ? rg.value : NaN)
    // 1 MHz at a gain of 1 to 0.1 MHz at 100, straight over the logarithm of the gain, and no less beyond
    const stated = Math.max(1e5, 1e6 - (0.9e6 * Math.log(gain)) / Math.log(100))
    expect(dynamics.amplifiers[0]?.amplifier).toBe('U1')
    expectClose(dynamics.amplifiers[0]?.bandwidth ?? NaN, stated, { relative: 0.01 })
  })
})

describe('slew and bandwidth together', () => {
  const { given, recomputed, source } = published('slew-and-bandwidth-limits')

  it(`limit a gain of ten (${source})`, () => {
    const document = buildDesign({
      sensor: buildSensor(-0.5, 0.5, { sourceResistance: 0 }),
      converter: buildConverter({ input: { low: -5, high: 5 }, guard: { low: 0, high: 0 } }),
      rails: { positive: 13, negative: -13 },
      parts: {
        amplifier: {
          gbw: Number(given.ft_Hz),
          slewRate: Number(given.SR_V_per_s),
          a0: 1e9,
          rout: 0.001,
          cin: { common: 0, differential: 0 },
        },
      },
      choose: { values: { Rf: 9000, Rg: 1000 } },
    })
    const { dynamics } = dynamicsOf(document, 'non-inverting')
    expectClose(dynamics.fullPower ?? NaN, Number(recomputed.fmax_Hz), { relative: 1e-6 })
    expectClose(dynamics.amplifiers[0]?.bandwidth ?? NaN, Number(recomputed.f_useful_Hz), { relative: 1e-4 })
  })
})

describe('every arrangement', () => {
  it.each(arrangementDesigns)('%s moves, follows its signal and comes to rest', (id, document) => {
    const { design, dynamics } = dynamicsOf(document, id)
    const numbers = JSON.stringify(dynamics, (_, value: unknown) => {
      if (typeof value === 'number') expect(Number.isFinite(value)).toBe(true)
      return value
    })
    expect(JSON.parse(numbers)).toEqual(dynamics)
    expect(dynamics.bandwidth).toBeGreaterThan(design.sensor.bandwidth ?? 0)
    expect(dynamics.settling).toBeGreaterThan(1 / (2 * Math.PI * (dynamics.bandwidth ?? NaN)))
    expect(dynamics.overshoot).toBeGreaterThanOrEqual(0)
    expect(dynamics.overshoot).toBeLessThan(0.01)
  })
})

describe('ngspice', () => {
  it.each(['non-inverting-up', 'three-amplifier', 'integrated-instrumentation+weighted-difference'])(
    'has the same response for %s',
    async (id) => {
      const design = parseDesign(arrangementDesigns.find(([name]) => name === id)?.[1])
      const { network } = responseChain(design, buildTrial(design, id).spec)
      const sweep = { pointsPerDecade: 5, from: 0.1, to: 1e7 }
      const { frequency, nodes } = await runAc(toSpice(network, { analysis: { ac: sweep } }))
      const respond = prepareResponse(network)
      expect(frequency).toHaveLength(41)
      frequency.forEach((f, k) => {
        const [ours, spice] = [respond(f), nodes.adc?.[k] ?? { re: NaN, im: NaN }]
        const size = Math.hypot(spice.re, spice.im)
        expectClose(Math.hypot(ours.re - spice.re, ours.im - spice.im), 0, { absolute: 1e-3 * size })
      })
    },
    60_000,
  )

  it('settles when the chain of a slow amplifier does', async () => {
    const design = parseDesign(
      buildDesign({
        sensor: buildSensor(-0.35, 0.35, { sourceResistance: 1000, bandwidth: 1000 }),
        converter: buildConverter({ bits: 12 }),
        parts: { amplifier: { gbw: 2e5 } },
        choose: { arrangement: 'non-inverting-up', values: { R9: 1000, C9: 1e-8 } },
      }),
    )
    const { spec } = buildTrial(design, 'non-inverting-up')
    const { settling, bandwidth } = computeDynamics(design, spec)
    expect(bandwidth).toBeLessThan(1 / (2 * Math.PI * 1e-5))
    const { network } = responseChain(design, spec)
    const until = 2 * (settling ?? NaN)
    const text = toSpice(network)
      .replace(/^VSENSE (\S+ \S+) .*$/m, 'VSENSE $1 PWL(0 -0.35 1n 0.35)')
      .replace(
        /^\.op$/m,
        `.options reltol=1e-7 vntol=1e-9 abstol=1e-15\n.tran ${until / 4000} ${until} 0 ${until / 4000}`,
      )
    const { time, nodes } = await runTran(text)
    const adc = nodes.adc ?? []
    const [from, to] = [adc[0]!, adc.at(-1)!]
    const { input, bits } = design.converter
    const band = (0.5 * (input.high - input.low)) / 2 ** bits
    expect(Math.abs(to - from)).toBeGreaterThan(2)
    const last = adc.findLastIndex((value) => Math.abs(value - to) > band)
    expectClose(time[last]!, settling ?? NaN, { relative: 2e-3 })
  }, 60_000)
})
