import { describe, expect, it } from 'vitest'
import { filterOf } from '#shared/design/filter-of.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import { sectionValues } from '#shared/filters/filter-spec.ts'
import { cornerFor, prototypeSections, sectionsGain, toDb } from '#shared/filters/prototypes.ts'
import { sectionOf } from '#shared/filters/section-values.ts'
import { aliasAttenuation, aliasFrequency } from '#shared/filters/wish.ts'
import { buildConverter, buildDesign, buildSensor } from '#tests/support/designs.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { filterCase } from '#tests/support/filter-cases.ts'
import { parseDesign } from '#tests/support/trials.ts'

const size = (given: Partial<DesignDocument>) => filterOf(parseDesign(buildDesign(given)))
const active = (filter: NonNullable<NonNullable<DesignDocument['choose']>['filter']>, more: object = {}) =>
  size({ choose: { filter, ...more } })

describe('a filter of one pole', () => {
  it('has its corner at ten times the signal bandwidth where none is asked for, to the nearest of the series', () => {
    const { wantedCorner, drive } = size({ sensor: buildSensor(0, 1, { bandwidth: 20 }) })
    expect(wantedCorner).toBe(200)
    expectClose(drive.corner, 200, { relative: 0.01 })
    expectClose(drive.corner, 1 / (2 * Math.PI * drive.resistance * drive.capacitance), { relative: 1e-12 })
  })

  it('has its corner at half the sample rate where no bandwidth is given', () => {
    const sensor = buildSensor(0, 1)
    delete sensor.bandwidth
    expect(size({ sensor, converter: buildConverter({ sampleRate: 5000 }) }).wantedCorner).toBe(2500)
  })

  it('is absent where there is neither, nor a wish', () => {
    const sensor = buildSensor(0, 1)
    delete sensor.bandwidth
    const converter = buildConverter()
    delete converter.sampleRate
    expect(size({ sensor, converter }).kind).toBe('none')
  })

  it('takes the corner that is asked for', () => {
    expectClose(active({ kind: 'rc', corner: 1234 }).drive.corner, 1234, { relative: 0.01 })
  })

  it('keeps its capacitor at least twenty times the sampling capacitor', () => {
    const { drive } = size({
      sensor: buildSensor(0, 1, { bandwidth: 1e5 }),
      converter: buildConverter({ samplingCapacitance: 1e-10 }),
    })
    expect(drive.capacitance).toBeGreaterThanOrEqual(2e-9)
  })

  it('takes its values from stock where there is one', () => {
    const { drive } = size({
      parts: { resistors: { stock: [100, 820, 10000] }, capacitors: { stock: [1e-8, 2.2e-6] } },
    })
    // 200 Hz ask for 0.8 µF beside 1 kΩ, then for 362 Ω: by ratio these are nearest.
    expect([drive.resistance, drive.capacitance]).toEqual([820, 2.2e-6])
  })

  it.each(['sallen-key', 'multiple-feedback'] as const)(
    'needs no amplifier as a %s filter of order 1',
    (kind) => {
      const filter = active({ kind, order: 1, corner: 300 })
      expect([filter.kind, filter.sections.length]).toEqual(['rc', 0])
    },
  )
})

describe('a filter of several poles', () => {
  it.each([
    [2, 1, false],
    [3, 1, true],
    [4, 2, false],
    [5, 2, true],
    [6, 3, false],
  ])('of order %i has %i sections, and R9 with C9 as a pole where it is odd', (order, sections, isPole) => {
    const filter = active({ kind: 'sallen-key', order, corner: 300 })
    expect(filter.sections.length).toBe(sections)
    expect(filter.drive.isPole).toBe(isPole)
    if (isPole) expectClose(filter.drive.corner, 300, { relative: 0.01 })
    else expect(filter.drive.corner).toBeGreaterThan(3000)
  })

  it('has Butterworth sections about an order of two where nothing else is said', () => {
    const filter = active({ kind: 'sallen-key', corner: 300 })
    expect([filter.response, filter.order]).toEqual(['butterworth', 2])
  })

  it('has its corner where amplitudes up to the signal bandwidth keep within 0.3 %', () => {
    const { wantedCorner } = active({ kind: 'sallen-key', order: 2 })
    // (20 Hz/fc)⁴ = 1/0.997² − 1
    expectClose(wantedCorner, 20 / (1 / 0.997 ** 2 - 1) ** 0.25, { relative: 1e-6 })
  })

  it.each(['sallen-key', 'multiple-feedback'] as const)(
    'comes within 1 %% of f0 and Q with %s sections',
    (kind) => {
      for (const response of ['butterworth', 'bessel', 'chebyshev'] as const) {
        const { sections } = active({ kind, response, order: 6, corner: 2000 })
        const wanted = prototypeSections(response, 6)
        sections.forEach((section, i) => {
          expectClose(section.wanted.f0, 2000 * (wanted[i]?.f0 ?? 0), { relative: 1e-12 })
          const real = sectionOf(sectionValues(section))
          expectClose(real.f0, section.wanted.f0, { relative: 0.01 })
          expectClose(real.q, section.wanted.q, { relative: 0.01 })
          expect(section.error).toBeGreaterThanOrEqual(section.optimum)
        })
      }
    },
  )

  it('numbers its parts by section and obeys those that are fixed', () => {
    const values = { R21: 12_000, C31: 4.7e-8, R9: 220, C9: 1e-9 }
    const filter = active({ kind: 'sallen-key', order: 4, corner: 1000 }, { values })
    expect(Object.keys(filter.sections[0]?.parts ?? {})).toEqual(['R21', 'R22', 'C21', 'C22'])
    expect(filter.sections[0]?.parts.R21).toBe(12_000)
    expect(filter.sections[1]?.parts.C31).toBe(4.7e-8)
    expect([filter.drive.resistance, filter.drive.capacitance]).toEqual([220, 1e-9])
  })

  it('lets the outer resistors of a multiple-feedback section be alike, unless both are fixed', () => {
    const of = (values: Record<string, number>) =>
      active({ kind: 'multiple-feedback', corner: 1000 }, { values }).sections[0]?.parts
    expect(of({ R21: 12_000 })).toMatchObject({ R21: 12_000, R23: 12_000 })
    expect(of({ R23: 15_000 })).toMatchObject({ R21: 15_000, R23: 15_000 })
    expect(of({ R21: 10_000, R23: 30_000 })).toMatchObject({ R21: 10_000, R23: 30_000 })
  })

  it('is refused in class 2 ceramics, where one pole is not', () => {
    const parts = { capacitors: { dielectric: 'X7R' as const } }
    const choose = { filter: { kind: 'sallen-key' as const, corner: 1000 } }
    expect(size({ parts, choose }).refusals.map(({ code }) => code)).toEqual(['filter-class-2'])
    expect(size({ parts }).refusals).toEqual([])
  })

  it('is refused where no value of the windows reaches its corner', () => {
    const reasons = active({ kind: 'sallen-key', corner: 0.001 }).refusals
    expect(reasons.map(({ code }) => code)).toEqual(['filter-values'])
    expect(reasons[0]?.text).toMatch(/section 1 of the filter its 1\smHz/)
  })
})

describe('the level of sections that invert', () => {
  const inverting = (given: Partial<DesignDocument>) =>
    size({ choose: { filter: { kind: 'multiple-feedback', corner: 1000 } }, ...given })

  it('is the middle of the converter’s range from a divider of the reference', () => {
    const { level, dc } = inverting({ converter: buildConverter({ input: { low: 0, high: 2 } }) })
    expect(level?.kind).toBe('divider')
    if (level?.kind === 'divider')
      expectClose((2.5 * level.lower) / (level.upper + level.lower), 1, { relative: 2e-4 })
    expect(dc.gain).toBe(-1)
    expectClose(dc.offset, 2, { relative: 2e-4 })
  })

  it('is ground or the reference itself where that is the middle', () => {
    const rails = { positive: 5, negative: -5 }
    const about = (low: number, high: number) =>
      inverting({ rails, converter: buildConverter({ input: { low, high } }) }).level?.kind
    expect(about(-2, 2)).toBe('ground')
    expect(about(0, 5)).toBe('reference')
  })

  it('is refused with a sentence without a reference, or beyond it', () => {
    const bare = buildConverter()
    delete bare.reference
    const [none] = inverting({ converter: bare }).refusals
    expect(none?.text).toMatch(
      /^Inverting filter sections need a level of 1.25\sV: give the converter a reference, or a shift reference/,
    )
    const [beyond] = inverting({ converter: buildConverter({ input: { low: 2, high: 4 } }) }).refusals
    expect(beyond?.code).toBe('filter-level')
    expect(beyond?.text).toMatch(/more than 0\sV and less than the 2.5\sV/)
  })

  it('obeys its fixed parts', () => {
    const choose = {
      filter: { kind: 'multiple-feedback' as const, corner: 1000 },
      values: { R10: 22_000, R11: 18_000, C10: 2.2e-8 },
    }
    expect(size({ choose }).level).toEqual({ kind: 'divider', upper: 22_000, lower: 18_000, bypass: 2.2e-8 })
  })
})

describe('the order', () => {
  const stated = (aliasAttenuation: number, more: Partial<DesignDocument> = {}) =>
    buildDesign({ rules: { aliasAttenuation }, ...more })

  it('is one pole where that reaches the attenuation that is asked for', () => {
    // 980 Hz over 200 Hz: 13.98 dB
    expect(filterOf(parseDesign(stated(13))).kind).toBe('rc')
  })

  it.each([
    [40, 2],
    [60, 3],
    [84, 4],
  ])(
    'for %i dB is the lowest with which a Butterworth response reaches it and keeps the signal',
    (wanted, least) => {
      const design = parseDesign(stated(wanted))
      const filter = filterOf(design)
      expect(filter.kind).toBe('sallen-key')
      const at = (order: number) => {
        const corner = 20 / (1 / 0.997 ** 2 - 1) ** (1 / (2 * order))
        return 10 * Math.log10(1 + (980 / corner) ** (2 * order))
      }
      expect(at(filter.order)).toBeGreaterThanOrEqual(wanted)
      // One decibel to spare for standard values.
      expect(at(filter.order - 1)).toBeLessThan(wanted + 1)
      expect(filter.order).toBe(least)
    },
  )

  it('that a choice leaves open follows the attenuation', () => {
    const choose = { filter: { kind: 'multiple-feedback' as const, response: 'bessel' as const } }
    const { order } = filterOf(parseDesign(stated(36, { choose })))
    const at = (n: number) =>
      toDb(sectionsGain(prototypeSections('bessel', n), 980 / cornerFor('bessel', n, 20, 0.003)))
    expect(at(order)).toBeGreaterThanOrEqual(37)
    expect(at(order - 1)).toBeLessThan(37)
  })

  it('is six where six poles are too few', () => {
    expect(filterOf(parseDesign(stated(200))).order).toBe(6)
  })

  it('for one decibel at the corner and forty an octave above is the published one, which is beyond six', () => {
    const { given, printed } = filterCase('butterworth-order-from-attenuation')
    const [edge, stop, wanted] = [given('fc_Hz'), given('fs_Hz'), given('Amin_dB')]
    // The pass band's edge, one decibel down, in terms of the corner: (10^0.1 − 1)^(1/2n).
    const cornerOf = (order: number) => edge / (10 ** (given('Amax_dB') / 10) - 1) ** (1 / (2 * order))
    const reached = (order: number) => 10 * Math.log10(1 + (stop / cornerOf(order)) ** (2 * order))
    expect(reached(printed('n'))).toBeGreaterThanOrEqual(wanted)
    expect(reached(printed('n') - 1)).toBeLessThan(wanted)
    for (const order of [2, 4, 6]) {
      const ours = toDb(sectionsGain(prototypeSections('butterworth', order), stop / cornerOf(order)))
      expectClose(ours, reached(order), { relative: 1e-9 })
      expect(ours).toBeLessThan(wanted)
    }
  })
})

describe('what folds into the band', () => {
  it('is the sample rate less the signal bandwidth, wanted down by 20·log10(2^N)', () => {
    const design = parseDesign(buildDesign())
    expect(aliasFrequency(design)).toBe(980)
    expectClose(aliasAttenuation(design), 14 * 20 * Math.log10(2), { relative: 1e-12 })
  })

  it('is at the modulator’s rate in an oversampling converter', () => {
    const converter = buildConverter({ architecture: 'oversampling', modulatorRate: 512_000 })
    expect(aliasFrequency(parseDesign(buildDesign({ converter })))).toBe(511_980)
  })

  it('has no frequency where the signal reaches half the rate', () => {
    expect(
      aliasFrequency(parseDesign(buildDesign({ sensor: buildSensor(0, 1, { bandwidth: 500 }) }))),
    ).toBeNull()
  })
})
