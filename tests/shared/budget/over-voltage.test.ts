import { describe, expect, it } from 'vitest'
import { buildConverter, buildDesign, buildSensor } from '#tests/support/designs.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { planChosen } from '#tests/support/plans.ts'

const converter = (more = {}) =>
  buildConverter({ absolute: { low: -0.3, high: 3.6, clampCurrent: 0.005 }, supply: 3.3, ...more })

describe('over-voltage at the converter pin', () => {
  const design = (resistance: number) =>
    buildDesign({
      converter: converter(),
      rails: { positive: 5, negative: -5, tolerance: 0.02, ripple: 0.1 },
      choose: { arrangement: 'non-inverting-up', drive: { resistance, capacitance: 1e-7 } },
    })
  const { overVoltage, findings } = planChosen(design(1000))
  const entry = (words: RegExp) => overVoltage.find((e) => words.test(e.case))

  it('is the rail at its upper limit, less the absolute maximum, through the series resistor', () => {
    const top = 5 * 1.02 + 0.1
    expectClose(entry(/^Last amplifier at the positive rail/)?.pinVolts.high ?? NaN, top, { relative: 1e-9 })
    expectClose(entry(/^Last amplifier at the positive rail/)?.clampCurrent ?? NaN, (top - 3.6) / 1000, {
      relative: 1e-9,
    })
  })

  it('is as bad at the negative rail', () => {
    const negative = entry(/negative rail/)
    expectClose(negative?.pinVolts.low ?? NaN, -5.2, { relative: 1e-9 })
    expectClose(negative?.clampCurrent ?? NaN, (5.2 - 0.3) / 1000, { relative: 1e-9 })
    expect(negative?.state).toBe('tight')
  })

  it('is worst with the converter’s supply off: the pin may then rise 0.3 V only', () => {
    const off = entry(/supply off/)
    expectClose(off?.allowed.high ?? NaN, 0.3, { absolute: 1e-12 })
    expectClose(off?.clampCurrent ?? NaN, (5.2 - 0.3) / 1000, { relative: 1e-9 })
  })

  it('is a caution while the clamp carries it, and over where it cannot', () => {
    expect(findings.filter((f) => f.code === 'clamp-current').every((f) => f.severity === 'caution')).toBe(
      true,
    )
    const small = planChosen(design(100))
    expect(small.overVoltage.map((e) => e.state)).toContain('over')
    const finding = small.findings.find((f) => f.code === 'over-voltage')
    expect([finding?.severity, finding?.path]).toEqual(['over', 'converter.absolute'])
    expect(finding?.text).toMatch(/Raise the series resistor/)
  })

  it('has no current to tell where nothing limits it', () => {
    const bare = planChosen({
      ...design(100),
      choose: { arrangement: 'non-inverting-up', filter: { kind: 'none' } },
    })
    const worst = bare.overVoltage.find((e) => e.state === 'over')
    expect(worst?.clampCurrent).toBeNull()
    expect(bare.findings.find((f) => f.code === 'over-voltage')?.text).toMatch(/Add a series resistor/)
  })

  it('is what miswiring brings where no amplifier stands between', () => {
    const direct = planChosen(
      buildDesign({
        sensor: buildSensor(0.2, 2.2, { fault: { low: -30, high: 24 } }),
        converter: converter(),
        choose: { arrangement: 'direct', drive: { resistance: 10000, capacitance: 1e-8 } },
      }),
    )
    const currents = direct.overVoltage.map((e) => e.clampCurrent ?? NaN)
    expectClose(Math.max(...currents), (30 - 0.3) / 10000, { relative: 1e-9 })
    expectClose(Math.min(...currents), (24 - 3.6) / 10000, { relative: 1e-9 })
  })

  it('is not computed without absolute limits', () => {
    const chosen = planChosen(buildDesign({ choose: { arrangement: 'non-inverting-up' } }))
    expect(chosen.overVoltage).toEqual([])
  })
})
