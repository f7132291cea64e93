import { readFileSync } from 'node:fs'
import { describe, expect, it } from 'vitest'
import { planDesign } from '#shared/design/plan-design.ts'
import { readDesign } from '#shared/design/read.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import { expectClose } from '#tests/support/expect-close.ts'

const read = (name: string) =>
  JSON.parse(readFileSync(`docs/examples/${name}.json`, 'utf8')) as DesignDocument
const velocity = read('flow-velocity')
const level = read('stilling-well-level')

const chosen = (document: DesignDocument) => {
  const plan = planDesign(document)
  const candidate = plan.candidates[plan.chosen ?? -1]
  if (!candidate) throw new Error('nothing was chosen')
  return candidate
}
const codes = (document: DesignDocument) => chosen(document).findings?.map((f) => f.code) ?? []
const converter = (more: Partial<DesignDocument['converter']>): DesignDocument => ({
  ...velocity,
  converter: { ...velocity.converter, ...more },
})

describe('figures that no part has are refused with their path', () => {
  const cases: [string, DesignDocument][] = [
    ['converter.inputResistance', converter({ inputResistance: 1e-9 })],
    ['converter.switchResistance', converter({ switchResistance: 1e-300 })],
    ['converter.multiplexed.resistance', converter({ multiplexed: { channels: 4, resistance: 1e-300 } })],
    ['parts.amplifier.gbw', { ...velocity, parts: { amplifier: { gbw: 1e-300 } } }],
    ['parts.amplifier.cin.common', { ...velocity, parts: { amplifier: { cin: { common: 1 } } } }],
    ['rules.settling', { ...velocity, rules: { settling: 20_000 } }],
    ['calibration.points.1', { ...velocity, calibration: { points: [0, 1e-9] } }],
    ['calibration.points.0', { ...velocity, calibration: { points: [1e6, 2e6] } }],
    ['converter.outputRate', converter({ outputRate: 1e6, modulatorRate: 100 })],
    [
      'converter.modulatorRate',
      converter({ architecture: 'oversampling', digitalFilter: 'sinc3', outputRate: 50 }),
    ],
    [
      'sensor.excitation.same',
      { ...level, rails: { positive: 0, negative: -5 }, shiftReference: { voltage: 2 } },
    ],
  ]
  it.each(cases)('%s', (path, document) => {
    const answer = readDesign(document)
    expect(answer.ok ? [] : answer.faults.map((f) => f.path)).toContain(path)
  })
})

describe('the conditions of a budget', () => {
  it('are those of the working range: an adjustment made elsewhere is no working condition', () => {
    const { budget } = chosen({ ...velocity, temperature: { low: 20, high: 30, calibration: -50 } })
    const line = budget?.lines.find((l) => l.id === 'Rf.temperature')
    const { asBuilt } = budget?.totals ?? {}
    expect(asBuilt?.temperature).toBeGreaterThanOrEqual(20)
    // 25 ppm/K over 5 K as built, 75 K from the adjustment afterwards.
    expectClose((line?.calibrated ?? 0) / (line?.asBuilt ?? 1), 80 / 5, { relative: 0.6 })
    expect(line?.asBuilt).toBeLessThan(3e-4)
  })
})

describe('the signal’s own band', () => {
  it('is told where it is sampled too slowly', () => {
    expect(codes(converter({ sampleRate: 39 }))).toContain('undersampled')
    expect(codes(converter({ sampleRate: 41 }))).not.toContain('undersampled')
  })

  it('is told where a filter takes it away', () => {
    expect(codes({ ...velocity, choose: { filter: { kind: 'rc', corner: 10 } } })).toContain('band-lost')
    expect(codes(velocity)).not.toContain('band-lost')
  })

  it('loses in the digital filter of an oversampling converter, which settles in as many results as orders', () => {
    const slow = { architecture: 'oversampling', modulatorRate: 1e6, digitalFilter: 'sinc3' } as const
    const { dynamics, findings } = chosen(converter({ ...slow, outputRate: 50 }))
    // |sin(πx)/(πx)|³ at x = 20/50, the converter's own averager: 0.4335.
    const x = Math.PI * 0.4
    const analog = 1 / Math.sqrt(1 + (20 / 198.35) ** 2)
    expectClose(1 - (dynamics?.droopAtBandwidth ?? 0), (Math.sin(x) / x) ** 3 * analog, { relative: 1e-3 })
    expect(dynamics?.settling).toBeGreaterThan(3 / 50)
    expect(findings?.some((f) => f.code === 'band-lost' && f.path === 'converter.outputRate')).toBe(true)
  })

  it('says that a digital filter has no effect without oversampling, and what a class 2 ceramic does', () => {
    expect(codes(converter({ digitalFilter: 'sinc3', outputRate: 100 }))).toContain('unused-choice')
    expect(codes({ ...velocity, parts: { capacitors: { dielectric: 'X7R' } } })).toContain(
      'class-2-capacitor',
    )
  })
})

describe('a filter whose allowed parts cannot make it', () => {
  it('is told by how much its sections miss', () => {
    // Unity-gain Sallen–Key sections need C1/C2 of at least 4Q²: equal capacitors give Q = 0.5 at best.
    const found = chosen({
      ...velocity,
      parts: { ...velocity.parts, capacitors: { stock: [1e-6] } },
      choose: { filter: { kind: 'sallen-key', order: 2, corner: 100 } },
    }).findings?.find((f) => f.code === 'filter-values')
    expect(found?.severity).toBe('over')
    expect(found?.numbers.off).toBeGreaterThan(1 - 0.5 / Math.SQRT1_2 - 0.01)
  })
})
