import { describe, expect, it } from 'vitest'
import { computeBudget } from '#shared/budget/error-budget.ts'
import { sizeDrive } from '#shared/budget/drive.ts'
import { computeDynamics } from '#shared/budget/dynamics.ts'
import { describeFilter } from '#shared/budget/filter-plan.ts'
import { summariseNoise } from '#shared/budget/noise.ts'
import type { Finding } from '#shared/design/plan.ts'
import { qualityFindings } from '#shared/design/quality-findings.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import { buildConverter, buildDesign, buildSensor } from '#tests/support/designs.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { buildTrial, parseDesign } from '#tests/support/trials.ts'

function found(given: Partial<DesignDocument>, id = 'non-inverting-up') {
  const design = parseDesign(buildDesign(given))
  const { spec } = buildTrial(design, id)
  const noise = summariseNoise(design, spec)
  const dynamics = computeDynamics(design, spec)
  const quality = {
    noise,
    dynamics,
    budget: computeBudget(design, spec, noise),
    filter: describeFilter(design, spec),
    drive: sizeDrive(design, spec, dynamics),
  }
  const findings = qualityFindings(design, quality)
  const one = (code: string): Finding | undefined => findings.find((finding) => finding.code === code)
  return { ...quality, one }
}

const plain = (text: string | undefined): string => (text ?? '').replaceAll('\u00a0', ' ')

describe('a target that is missed', () => {
  const drifting = (more: Partial<DesignDocument> = {}) =>
    found({
      target: { limit: 1e-4, state: 'calibrated' },
      parts: { resistors: { tolerance: 1e-4, drift: 1e-4 }, amplifier: { vos: 0, vosDrift: 0 } },
      ...more,
    })

  it('leads to the field of its largest line and names it with its share', () => {
    const { one, budget } = drifting()
    const largest = budget.lines.reduce((most, line) => (line.share > most.share ? line : most))
    expect(largest.path).toBe('parts.resistors.drift')
    const finding = one('target')
    expect(finding?.path).toBe(largest.path)
    const share = Number(/Largest: (.+), ([\d.]+) %\.$/.exec(plain(finding?.text))?.[2])
    expectClose(share, 100 * largest.share, { relative: 0.05 })
    expect(plain(finding?.text)).toContain(`Largest: ${largest.label}, `)
  })

  it('leads to the target where no field sets the largest line', () => {
    const exact = { tolerance: 0, drift: 0, outputResistance: 0 }
    const { one, budget } = drifting({
      target: { limit: 1e-9, state: 'calibrated' },
      converter: buildConverter({ reference: { voltage: 2.5, ...exact }, noise: 1e-2 }),
      parts: {
        resistors: { tolerance: 0, drift: 0, ageing: 0 },
        amplifier: { vos: 0, vosDrift: 0 },
      },
    })
    const largest = budget.lines.reduce((most, line) => (line.share > most.share ? line : most))
    expect(largest.path).toBeNull()
    expect(one('target')?.path).toBe('target.limit')
    expect(one('target')?.text).toContain(`Largest: ${largest.label}, `)
  })
})

describe('a sample rate', () => {
  const at = (more: Parameters<typeof buildConverter>[0]) =>
    found({ converter: buildConverter(more) }).one('sample-rate')

  it('is over where samples follow faster than one is acquired', () => {
    expect(at({ sampleRate: 1000, acquisitionTime: 1e-3 })).toBeUndefined()
    expect(at({ sampleRate: 1000 })).toBeUndefined()
    const finding = at({ sampleRate: 1000, acquisitionTime: 1.25e-3 })
    expect(finding).toMatchObject({ severity: 'over', path: 'converter.sampleRate' })
    expect(plain(finding?.text)).toBe(
      'At 1 kHz there is 1 ms between samples; acquisition takes 1.25 ms. Sample at 800 Hz or less.',
    )
  })

  it('is that of the modulator where one samples', () => {
    const oversampling = { architecture: 'oversampling', modulatorRate: 256_000, outputRate: 50 } as const
    expect(at({ ...oversampling, acquisitionTime: 1e-5 })?.path).toBe('converter.modulatorRate')
    expect(at({ ...oversampling, acquisitionTime: 1e-6 })).toBeUndefined()
  })
})

describe('the average current of sampling', () => {
  const direct = (reservoir: number, sampleRate: number) =>
    found(
      {
        sensor: buildSensor(0, 5, { sourceResistance: 0, bandwidth: 1000 }),
        converter: buildConverter({
          input: { low: 0, high: 5 },
          guard: { low: 0, high: 0 },
          bits: 16,
          samplingCapacitance: 6e-11,
          acquisitionTime: 1e-6,
          sampleRate,
        }),
        rails: { positive: 6 },
        choose: { arrangement: 'direct', values: { R9: 100, C9: reservoir } },
      },
      'direct',
    )
  const lsb = 5 / 2 ** 16

  it('is told where a reservoir that hardly moves sags by more than the criterion', () => {
    const { one, drive } = direct(1e-5, 1e5)
    expect(drive.state).toBe('clear')
    const finding = one('drive-droop')
    expect(finding).toMatchObject({ severity: 'caution', path: 'choose.drive' })
    expectClose(finding?.numbers.droop ?? NaN, (6e-11 * 5 * 1e5 * 100) / lsb, { relative: 1e-6 })
    expect(plain(finding?.text)).toMatch(/^Sampling draws 30 μA on average, which costs at most 40 LSB/)
    expect(direct(1e-5, 1e3).one('drive-droop')).toBeUndefined()
  })

  it('costs nothing where the pin settles within each sample', () => {
    const { one, drive } = direct(5e-10, 1e5)
    expect(drive.average?.droop).toBeGreaterThan(lsb)
    expect(['clear', 'tight']).toContain(drive.state)
    expect(one('drive-droop')).toBeUndefined()
  })

  it('is told by the drive itself where that does not settle', () => {
    const { one, drive } = direct(1e-7, 1e5)
    expect(drive.state).toBe('over')
    expect(one('drive-droop')).toBeUndefined()
    expect(one('drive')?.text).toContain('on average')
    expect(one('drive')?.text).toContain('The error budget does not hold this.')
  })
})
