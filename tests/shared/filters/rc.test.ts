import { describe, expect, it } from 'vitest'
import { attenuationDb, settlingTime, sizeFilter } from '#shared/filters/rc.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import { buildConverter, buildDesign, buildSensor } from '#tests/support/designs.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { planChosen } from '#tests/support/plans.ts'
import { parseDesign } from '#tests/support/trials.ts'

const size = (given: Partial<DesignDocument>) => sizeFilter(parseDesign(buildDesign(given)))

describe('a first-order filter', () => {
  it('has its corner at ten times the signal bandwidth where none is asked for, to the nearest of the series', () => {
    const filter = size({ sensor: buildSensor(0, 1, { bandwidth: 20 }) })
    expect(filter.wantedCorner).toBe(200)
    expectClose(filter.corner, 200, { relative: 0.01 })
    expectClose(filter.corner, 1 / (2 * Math.PI * filter.resistance * filter.capacitance), {
      relative: 1e-12,
    })
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
    expectClose(size({ choose: { filter: { kind: 'rc', corner: 1234 } } }).corner, 1234, { relative: 0.01 })
  })

  it('keeps its capacitor at least twenty times the sampling capacitor', () => {
    const filter = size({
      sensor: buildSensor(0, 1, { bandwidth: 1e5 }),
      converter: buildConverter({ samplingCapacitance: 1e-10 }),
    })
    expect(filter.capacitance).toBeGreaterThanOrEqual(2e-9)
  })

  it('takes its values from stock where there is one', () => {
    const filter = size({
      parts: { resistors: { stock: [100, 820, 10000] }, capacitors: { stock: [1e-8, 2.2e-6] } },
    })
    // 200 Hz ask for 0.8 µF beside 1 kΩ, then for 362 Ω: by ratio these are nearest.
    expect([filter.resistance, filter.capacitance]).toEqual([820, 2.2e-6])
  })
})

describe('settling through one pole', () => {
  const filter = {
    kind: 'rc' as const,
    resistance: 1000,
    capacitance: 1e-9,
    corner: 159155,
    wantedCorner: 0,
    wantedResistance: 0,
  }

  it.each([
    [16, 0.5, 17 * Math.LN2],
    [12, 0.25, 14 * Math.LN2],
    [14, 1, 14 * Math.LN2],
  ])('takes ln(m·2^N) time constants: %i bits to %f LSB', (bits, criterion, constants) => {
    expectClose(settlingTime(filter, bits, criterion), constants * 1e-6, { relative: 1e-12 })
  })

  it('counts the source and its leads where nothing stands between', () => {
    const chosen = planChosen(
      buildDesign({
        sensor: buildSensor(0.2, 2.2, { sourceResistance: 300, leadResistance: 200 }),
        choose: { arrangement: 'direct', drive: { resistance: 500, capacitance: 1e-8 } },
      }),
    )
    expectClose(chosen.filter.settling, 1000 * 1e-8 * 15 * Math.LN2, { relative: 1e-9 })
    expectClose(chosen.filter.droopAtBandwidth ?? NaN, 10 * Math.log10(1 + (20 * 2 * Math.PI * 1e-5) ** 2), {
      relative: 1e-6,
    })
  })
})

describe('attenuation of one pole', () => {
  const at = (frequency: number) =>
    attenuationDb(
      { kind: 'rc', resistance: 1, capacitance: 1, corner: 100, wantedCorner: 100, wantedResistance: 1 },
      frequency,
    )

  it('is 3.01 dB at the corner, 20.04 dB a decade above and 0.0432 dB a decade below', () => {
    expectClose(at(100), 3.0103, { relative: 1e-4 })
    expectClose(at(1000), 20.0432, { relative: 1e-5 })
    expectClose(at(10), 0.0432, { relative: 1e-3 })
  })
})
