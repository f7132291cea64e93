import { describe, expect, it } from 'vitest'
import { computeDynamics } from '#shared/budget/dynamics.ts'
import { sizeDrive } from '#shared/budget/drive.ts'
import type { Drive } from '#shared/design/plan.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import cases from '#tests/fixtures/frequency-cases.json' with { type: 'json' }
import { buildConverter, buildDesign, buildSensor } from '#tests/support/designs.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { buildTrial, parseDesign } from '#tests/support/trials.ts'

type Converter = Parameters<typeof buildConverter>[0]

function driveOf(document: DesignDocument, id = 'direct'): Drive {
  const design = parseDesign({ ...document, choose: { ...document.choose, arrangement: id } })
  const { spec } = buildTrial(design, id)
  return sizeDrive(design, spec, computeDynamics(design, spec))
}

/** A stiff 0 to 5 V source into the converter behind R9 and C9. */
const direct = (resistance: number, converter: Converter, reservoir = 1.2e-9): DesignDocument =>
  buildDesign({
    sensor: buildSensor(0, 5, { sourceResistance: 0, bandwidth: 1000 }),
    converter: buildConverter({
      input: { low: 0, high: 5 },
      guard: { low: 0, high: 0 },
      bits: 16,
      samplingCapacitance: 6e-11,
      acquisitionTime: 1e-6,
      sampleRate: 1e5,
      ...converter,
    }),
    rails: { positive: 6 },
    choose: { values: { R9: resistance, C9: reservoir } },
  })

const published = cases.find((c) => c.id === 'kick-settling')
const lsb = 5 / 2 ** 16

describe(`the kick of a sampling capacitor (${published?.source})`, () => {
  const recomputed: Record<string, unknown> = published?.recomputed ?? {}
  const limit = Number(recomputed.R_max_ohm)
  const drive = driveOf(direct(limit, {}))

  it('starts at what the two capacitors share', () => {
    expectClose(drive.kick, Number(recomputed.initial_error_V), { relative: 1e-9 })
  })

  it('is settled to half a code at the end of the acquisition with the largest resistor', () => {
    expectClose((drive.settled ?? NaN) * lsb, Number(recomputed.error_at_tacq_V), { relative: 1e-4 })
    expectClose(drive.needed ?? NaN, 1e-6, { relative: 1e-5 })
  })

  it('is met below that resistor and not above', () => {
    expect(driveOf(direct(0.7 * limit, {})).state).toBe('clear')
    expect(driveOf(direct(0.95 * limit, {})).state).toBe('tight')
    const above = driveOf(direct(1.05 * limit, {}))
    expect(above.state).toBe('over')
    expect(above.text).toMatch(/there are 1.μs/)
  })

  it('says that the budget does not hold what is left, where anything is', () => {
    const words = 'The error budget does not hold this.'
    const above = driveOf(direct(1.05 * limit, {}))
    expect(above.settled).toBeGreaterThan(above.criterion)
    expect(above.text).toContain(words)
    expect(driveOf(direct(0.95 * limit, {})).text).not.toContain(words)
  })

  it('is judged at one, a half and a quarter code, each a halving later', () => {
    expect(drive.criteria.map((c) => c.criterion)).toEqual([1, 0.5, 0.25])
    const [one, half, quarter] = drive.criteria.map((c) => c.needed ?? NaN)
    const halving = limit * 1.26e-9 * Math.LN2
    expectClose(half! - one!, halving, { relative: 1e-5 })
    expectClose(quarter! - half!, halving, { relative: 1e-5 })
    expect(drive.criteria[0]?.met).toBe(true)
    expect(drive.criteria[2]?.met).toBe(false)
  })

  it('draws its charge at every sample, across the series resistance', () => {
    expectClose(drive.average?.current ?? NaN, 6e-11 * 5 * 1e5, { relative: 1e-12 })
    expectClose(drive.average?.droop ?? NaN, 3e-5 * limit, { relative: 1e-6 })
  })
})

describe('a source without a buffer', () => {
  it('may have t/(Csh·n) less the switch', () => {
    const { largestSource } = driveOf(direct(100, { switchResistance: 200 }))
    expectClose(largestSource ?? NaN, 1e-6 / (6e-11 * 17 * Math.LN2) - 200, { relative: 1e-9 })
  })
})

describe('a switch', () => {
  it('slows the sampled voltage, not only the pin', () => {
    // a reservoir so large that it does not move: what is left is the switch and the capacitor
    const drive = driveOf(direct(1, { switchResistance: 1000 }, 1e-2))
    expectClose(drive.needed ?? NaN, 1000 * 6e-11 * 17 * Math.LN2, { relative: 1e-3 })
  })
})

describe('a large reservoir', () => {
  it('that moves by less than the criterion needs no time', () => {
    const drive = driveOf(direct(1000, {}, 1e-5))
    expect(drive.kick / lsb).toBeLessThan(0.5)
    expect(drive.needed).toBe(0)
    expect(drive.state).toBe('clear')
    expect(drive.text).toContain('stays within 0.5 LSB')
    // it still has to be recharged: the droop is told
    expect(drive.text).toContain('calibration of the span')
  })
})

describe('a multiplexed converter', () => {
  const bipolar = (multiplexed: NonNullable<Converter>['multiplexed']): DesignDocument => ({
    ...direct(50, {}),
    sensor: buildSensor(-5, 5, { sourceResistance: 0, bandwidth: 1000 }),
    converter: buildConverter({
      input: { low: -5, high: 5 },
      guard: { low: 0, high: 0 },
      bits: 16,
      samplingCapacitance: 6e-11,
      acquisitionTime: 2e-6,
      ...(multiplexed ? { multiplexed } : {}),
    }),
    rails: { positive: 6, negative: -6 },
  })

  it('brings the channel before at the other end of the range', () => {
    const own = driveOf(bipolar(undefined))
    const found = driveOf(bipolar({ channels: 8, resistance: 0 }))
    expect(own.multiplexed).toBeNull()
    expect(found.multiplexed?.channels).toBe(8)
    expect(found.multiplexed?.step).toBe(10)
    // twice the step of a discharged capacitor: one halving more
    expectClose((found.multiplexed?.needed ?? NaN) - (own.needed ?? NaN), 50 * 1.26e-9 * Math.LN2, {
      relative: 1e-4,
    })
    expect(found.multiplexed?.met).toBe(true)
  })

  it('is slowed by the multiplexer and judged by it', () => {
    const found = driveOf(bipolar({ channels: 8, resistance: 5000 }))
    expect(found.multiplexed?.needed).toBeGreaterThan(5000 * 5.7e-11 * 17 * Math.LN2)
    expect(found.multiplexed?.met).toBe(false)
    expect(found.state).toBe('over')
    expect(found.text).toContain('channel before')
  })
})

describe('the amplifier before the converter', () => {
  const behind = (gbw: number): Drive =>
    driveOf(
      {
        ...direct(20, {}),
        sensor: buildSensor(0.1, 4.9, { sourceResistance: 0, bandwidth: 1000 }),
        parts: { amplifier: { gbw, rout: 50 } },
      },
      'follower',
    )

  it('recovers with its own bandwidth: a slow one takes longer', () => {
    const [slow, fast] = [behind(1e6).needed ?? NaN, behind(1e8).needed ?? NaN]
    expect(slow).toBeGreaterThan(2 * fast)
    expectClose(fast, 20 * 1.26e-9 * 8.739, { relative: 0.25 })
  })
})

describe('what the design does not state', () => {
  it('leaves the drive unknown without a sampling capacitance', () => {
    const drive = driveOf(direct(100, { samplingCapacitance: 0 }))
    expect(drive.state).toBe('unknown')
    expect(drive.kick).toBe(0)
    expect(drive.text).toContain('no sampling capacitance')
  })

  it('leaves the verdict open without an acquisition time', () => {
    const { acquisitionTime: _, ...rest } = direct(100, {}).converter
    const drive = driveOf({ ...direct(100, {}), converter: rest })
    expect(drive.available).toBeNull()
    expect(drive.settled).toBeNull()
    expect(drive.state).toBe('unknown')
    expect(drive.needed).toBeGreaterThan(0)
    expect(drive.criteria.every((c) => c.met === null)).toBe(true)
  })
})
