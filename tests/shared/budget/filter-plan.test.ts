import { describe, expect, it } from 'vitest'
import { solveAc } from '#shared/analysis/ac.ts'
import { describeFilter } from '#shared/budget/filter-plan.ts'
import { filterBand } from '#shared/budget/filter-band.ts'
import { responseChain } from '#shared/budget/response-chain.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import { filterFindings } from '#shared/filters/findings.ts'
import { toDb } from '#shared/filters/prototypes.ts'
import { divideComplex, magnitude } from '#shared/numerics/complex.ts'
import { buildConverter, buildDesign, buildDifferentialSensor, buildSensor } from '#tests/support/designs.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { filterCase } from '#tests/support/filter-cases.ts'
import { createRandom } from '#tests/support/random.ts'
import { buildTrial, parseDesign } from '#tests/support/trials.ts'

function described(given: Partial<DesignDocument>, id = 'non-inverting-up') {
  const design = parseDesign(buildDesign(given))
  const { spec } = buildTrial(design, id)
  return { design, spec, filter: describeFilter(design, spec) }
}

const active = (
  kind: 'sallen-key' | 'multiple-feedback',
  order: number,
  corner: number,
  more: object = {},
) => ({
  filter: { kind, order, corner },
  ...more,
})

describe('a filter of one pole', () => {
  const { filter, spec } = described({})

  it('has the corner and attenuation of its two parts', () => {
    const { resistance, capacitance } = spec.filter.drive
    const corner = 1 / (2 * Math.PI * resistance * capacitance)
    expectClose(filter.corner, corner, { relative: 1e-8 })
    const at = (f: number) => 10 * Math.log10(1 + (f / corner) ** 2)
    expectClose(filter.droopAtBandwidth ?? NaN, at(20), { relative: 1e-6 })
    expectClose(filter.alias?.reached ?? NaN, at(980), { relative: 1e-6 })
    expectClose(filter.atHalfSampleRate ?? NaN, at(500), { relative: 1e-6 })
    expect(filter.floor).toBeNull()
  })

  describe('and the rate at which it would reach the attenuation', () => {
    const needed = filter.corner * Math.sqrt(10 ** ((filter.alias?.wanted ?? NaN) / 10) - 1) + 20
    const at = (sampleRate: number, acquisitionTime?: number) =>
      described({
        converter: buildConverter({
          sampleRate,
          ...(acquisitionTime === undefined ? {} : { acquisitionTime }),
        }),
      })
    const rateAt = (...given: Parameters<typeof at>) => at(...given).filter.alias?.rateFor

    it('names it up to a hundred times the present one', () => {
      expectClose(rateAt(needed / 99) ?? NaN, needed, { relative: 1e-6 })
      expect(rateAt(needed / 101)).toBeNull()
    })

    it('names none at which the converter could not acquire', () => {
      expectClose(rateAt(needed / 20, 0.999 / needed) ?? NaN, needed, { relative: 1e-6 })
      expect(rateAt(needed / 20, 1.001 / needed)).toBeNull()
    })

    it('speaks of poles alone where there is none', () => {
      const words = (acquisitionTime: number) => {
        const found = at(needed / 20, acquisitionTime)
        return filterFindings(found.design, found.filter)[0]
      }
      expect(words(0.999 / needed)?.text).toContain('The filter as it is would reach it at')
      expect(words(1.001 / needed)?.text).toMatch(
        /poles \((Butterworth|Chebyshev|Bessel)\) would reach it\.$/,
      )
      expect(words(1.001 / needed)?.numbers.rateFor).toBeUndefined()
    })
  })

  it('has its band from the extremes of both parts over temperature', () => {
    const part = (tolerance: number, drift: number) => tolerance + drift * 35
    const [r, c] = [part(0.001, 2.5e-5), part(0.05, 3e-5)]
    expectClose(filter.band.corner.low, filter.corner / ((1 + r) * (1 + c)), { relative: 1e-6 })
    expectClose(filter.band.corner.high, filter.corner / ((1 - r) * (1 - c)), { relative: 1e-6 })
  })

  it('counts the source and its leads where nothing stands between', () => {
    const { filter: direct } = described(
      {
        sensor: buildSensor(0.2, 2.2, { sourceResistance: 300, leadResistance: 200 }),
        choose: { arrangement: 'direct', drive: { resistance: 500, capacitance: 1e-8 } },
      },
      'direct',
    )
    expectClose(direct.corner, 1 / (2 * Math.PI * 1000 * 1e-8), { relative: 1e-8 })
    expectClose(direct.droopAtBandwidth ?? NaN, 10 * Math.log10(1 + (20 * 2 * Math.PI * 1e-5) ** 2), {
      relative: 1e-6,
    })
  })
})

describe('the stop band of a sallen-key section', () => {
  const { given, givenList, printed, exact, exactList } = filterCase('sallen-key-stop-band-floor')
  const values = {
    R21: given('R1_ohm'),
    R22: given('R2_ohm'),
    C21: given('C1_fb_F'),
    C22: given('C2_gnd_F'),
    // Far away: what R9 and C9 do is no part of the case.
    R9: 0.01,
    C9: 1e-15,
  }
  const part = { a0: given('A0'), gbw: given('GBW_Hz'), rout: given('Ro_ohm') }
  const amplifier = { ...part, rin: 1e15, rcm: 1e15, cin: { common: 0, differential: 0 } }
  const { filter, spec, design } = described({
    parts: { amplifier },
    choose: active('sallen-key', 2, 1e4, { values }),
  })
  const { network } = responseChain(design, spec)
  const gain = (f: number) => {
    const solution = solveAc(network, f, { model: 'real' })
    return magnitude(divideComplex(solution.voltage('F1'), solution.voltage('S1')))
  }

  it('comes back to the output resistance over R1, as derived', () => {
    givenList('f_Hz').forEach((f, i) => {
      expectClose(-toDb(gain(f)), exactList('H_dB')[i] ?? NaN, { absolute: 0.001 })
    })
    expectClose(-(filter.floor?.attenuation ?? NaN), printed('floor_dB'), { absolute: 0.3 })
    expectClose(-(filter.floor?.attenuation ?? NaN), exact('asymptote_dB'), { absolute: 0.15 })
  })

  it('asks for a faster amplifier where 100·Q·f0 exceeds what it has', () => {
    const codes = (gbw: number) => {
      const slow = described({
        parts: { amplifier: { ...amplifier, gbw } },
        choose: active('sallen-key', 2, 1e4, { values }),
      })
      return filterFindings(slow.design, slow.filter)
        .filter(({ code }) => code === 'filter-gbw')
        .map(({ numbers }) => numbers.needed)
    }
    expect(codes(2e6)).toEqual([])
    const [needed] = codes(5e5)
    expectClose(needed ?? NaN, 100 * Math.SQRT1_2 * 1e4, { relative: 1e-6 })
  })
})

describe.each([
  ['sallen-key', 4],
  ['multiple-feedback', 4],
  ['sallen-key', 5],
] as const)('a %s filter of order %i in a chain', (kind, order) => {
  const { filter, spec, design } = described({ choose: active(kind, order, 500) })

  it('has f0 and Q in the network near those of its values with a fast amplifier', () => {
    expect(filter.sections.length).toBe(Math.ceil(order / 2))
    for (const { values, real, wanted } of filter.sections) {
      expectClose(values.f0, wanted.f0, { relative: 0.012 })
      if (wanted.q === null) continue
      expectClose(real?.f0 ?? NaN, values.f0, { relative: 2e-3 })
      expectClose(real?.q ?? NaN, values.q ?? NaN, { relative: 2e-3 })
    }
  })

  it('has its corner where the chain itself is 3 dB down behind the last stage', () => {
    const { network } = responseChain(design, spec)
    const gain = (f: number) => {
      const solution = solveAc(network, f, { model: 'real' })
      return magnitude(divideComplex(solution.voltage('adc'), solution.voltage('S1')))
    }
    expectClose(gain(filter.corner) / gain(0), Math.SQRT1_2, { relative: 1e-6 })
    expectClose(filter.corner, 500, { relative: 0.02 })
    expectClose(filter.alias?.reached ?? NaN, toDb(gain(980) / gain(0)), { absolute: 1e-4 })
  })

  it('keeps the responses of drawn boards inside its band', () => {
    const band = filterBand(design, spec.filter, 0)
    const { network } = responseChain(design, spec)
    const random = createRandom(order)
    const parts = network.elements.filter(
      (e) => (e.kind === 'resistor' || e.kind === 'capacitor') && /^F\d|^filter/.test(e.stage),
    )
    for (let board = 0; board < 40; board++) {
      const set = Object.fromEntries(
        parts.flatMap((e) => {
          if (e.kind !== 'resistor' && e.kind !== 'capacitor') return []
          const limit = e.tolerance + e.drift * 35
          const corner = board % 2 === 0 ? (random() < 0.5 ? -1 : 1) : 2 * random() - 1
          return [[e.ref, e.value * (1 + limit * corner)]]
        }),
      )
      for (const f of [20, 300, 980, 3000]) {
        const solution = (at: number) => solveAc(network, at, { model: 'ideal', set })
        const gain = (at: number) =>
          magnitude(divideComplex(solution(at).voltage('adc'), solution(at).voltage('S1')))
        const { low, high } = band.gain(f)
        const own = gain(f) / gain(0)
        expect(own).toBeGreaterThanOrEqual(low * (1 - 1e-6))
        expect(own).toBeLessThanOrEqual(high * (1 + 1e-6))
      }
    }
  })
})

describe('an attenuation that is not reached', () => {
  it('is over where it is asked for, a caution where it is the default', () => {
    const asked = described({ rules: { aliasAttenuation: 200 } })
    expect(asked.filter.alias?.state).toBe('over')
    const [finding] = filterFindings(asked.design, asked.filter)
    expect([finding?.code, finding?.severity]).toEqual(['alias-short', 'over'])
    // Six poles at their own corner: (10^20 − 1)^(1/12) times that.
    const corner = 20 / (1 / 0.997 ** 2 - 1) ** (1 / 12)
    expectClose(finding?.numbers.sixAt ?? NaN, corner * (10 ** 20 - 1) ** (1 / 12) + 20, { relative: 1e-6 })
    const slow = described({
      rules: { aliasAttenuation: 200 },
      converter: buildConverter({ acquisitionTime: 0.9 / 1000 }),
    })
    const [bound] = filterFindings(slow.design, slow.filter)
    expect(bound?.numbers.sixAt).toBeUndefined()
    expect(bound?.text).toMatch(/do not reach it at this rate\.$/)
    const plain = described({})
    expect(plain.filter.alias?.state).toBe('tight')
    expect(filterFindings(plain.design, plain.filter)[0]?.severity).toBe('caution')
  })

  it('is reached by the filter that the plan makes for it', () => {
    for (const aliasAttenuation of [20, 40, 60, 84]) {
      const { filter, design } = described({ rules: { aliasAttenuation } })
      expect(filter.alias?.state).toBe('clear')
      expect(filterFindings(design, filter).filter(({ code }) => code === 'alias-short')).toEqual([])
      // Half a per cent of amplitude at the signal bandwidth; of one pole the nearest standard values may add a little.
      expect(Math.abs(filter.droopAtBandwidth ?? NaN)).toBeLessThan(
        toDb(filter.kind === 'rc' ? 0.9948 : 0.995),
      )
    }
  })

  it('names the order that each response would need', () => {
    const { filter } = described({ rules: { aliasAttenuation: 60 } })
    const order = filter.alias?.orders.butterworth ?? NaN
    const at = (n: number) => {
      const corner = 20 / (1 / 0.997 ** 2 - 1) ** (1 / (2 * n))
      return 10 * Math.log10(1 + (980 / corner) ** (2 * n))
    }
    expect(at(order)).toBeGreaterThanOrEqual(60)
    expect(at(order - 1)).toBeLessThan(60)
  })
})

describe('an oversampling converter', () => {
  const converter = buildConverter({
    architecture: 'oversampling',
    modulatorRate: 256_000,
    digitalFilter: 'sinc3',
    outputRate: 50,
  })
  const { filter } = described({ converter, sensor: buildSensor(-0.35, 0.35, { bandwidth: 5 }) })

  it('needs the filter at the modulator’s rate only', () => {
    expect(filter.alias?.frequency).toBe(255_995)
  })

  it('has the droop and the mains rejection of its digital filter, the least within 1 % of the mains', () => {
    const ratio = 256_000 / 50
    const at = (f: number) =>
      -60 * Math.log10(Math.abs(Math.sin((Math.PI * f) / 50) / (ratio * Math.sin((Math.PI * f) / 256_000))))
    expectClose(filter.digital?.droop ?? NaN, at(5), { relative: 1e-9 })
    const [fifty, sixty] = filter.digital?.mains ?? []
    expectClose(fifty?.rejection ?? NaN, Math.min(at(49.5), at(50.5)), { relative: 1e-9 })
    expectClose(sixty?.rejection ?? NaN, Math.min(at(59.4), at(60), at(60.6)), { relative: 1e-9 })
    expect(fifty?.rejection).toBeGreaterThan(100)
  })
})

describe('mains on both legs', () => {
  const rails = { positive: 5, negative: -5, tolerance: 0.02 }
  const sensor = buildDifferentialSensor(-0.02, 0.03, { low: 2.3, high: 2.7 })

  it('becomes signal through unequal legs and the capacitance behind them', () => {
    const { filter } = described(
      {
        rails,
        sensor: { ...sensor, sourceResistance: 1000, sourceMismatch: 0.1, capacitance: 1e-7 },
        choose: { filter: { kind: 'none' } },
      },
      'integrated-instrumentation',
    )
    const [fifty] = filter.mains ?? []
    expect(fifty?.imbalance).toBeCloseTo(100, 6)
    // Two low-passes of 950 and 1050 Ω with 100 nF: their difference, and the loss of the signal in their mean.
    const leg = (r: number) => {
      const x = 2 * Math.PI * 50 * r * 1e-7
      return divideComplex({ re: 1, im: 0 }, { re: 1, im: x })
    }
    const [a, b] = [leg(950), leg(1050)]
    expectClose(fifty?.rejection ?? NaN, -20 * Math.log10(Math.hypot(a.re - b.re, a.im - b.im)), {
      absolute: 0.05,
    })
  })

  it('does next to nothing with equal legs', () => {
    const { filter } = described(
      { rails, sensor: { ...sensor, sourceResistance: 1000, capacitance: 1e-7 } },
      'integrated-instrumentation',
    )
    for (const { rejection } of filter.mains ?? []) expect(rejection).toBeGreaterThan(140)
  })

  it('is no matter for a single-ended source', () => {
    expect(described({}).filter.mains).toBeNull()
  })
})
