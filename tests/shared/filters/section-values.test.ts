import { describe, expect, it } from 'vitest'
import { prototypeSections, sectionGain } from '#shared/filters/prototypes.ts'
import {
  sectionOf,
  toleranceError,
  wantedResistors,
  type SectionValues,
} from '#shared/filters/section-values.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { filterCase } from '#tests/support/filter-cases.ts'

const resistors = (f0: number, q: number, C1: number, C2: number): Record<string, number> =>
  wantedResistors('sallen-key', { f0, q }, { R1: 2, R2: 1, C1, C2 }) ?? {}

describe('a sallen-key section of unity gain', () => {
  it('has the resistors of the worked example with Q = 2', () => {
    const { given, printed, exact } = filterCase('sallen-key-unity-gain-q-2')
    const found = resistors(given('f0_Hz'), given('Q'), given('C1_fb_F'), given('C2_gnd_F'))
    expectClose(found.R1 ?? NaN, exact('R1_ohm'), { relative: 1e-6 })
    expectClose(found.R2 ?? NaN, exact('R2_ohm'), { relative: 1e-6 })
    expectClose(found.R1 ?? NaN, printed('R1_ohm'), { absolute: 1 })
    expectClose(found.R2 ?? NaN, printed('R2_ohm'), { absolute: 1 })
  })

  it('has the f0 and Q of the printed values of a Chebyshev example, and its formula’s resistors', () => {
    const { given, printed, exact } = filterCase('sallen-key-chebyshev-values')
    const [C1, C2] = [given('C_fb_F'), given('C_gnd_F')]
    const real = sectionOf({ R1: given('R1_printed_ohm'), R2: given('R2_printed_ohm'), C1, C2 })
    expectClose(real.f0, exact('f0_Hz'), { relative: 1e-6 })
    expectClose(real.q, exact('Q'), { relative: 1e-6 })
    expectClose(real.f0, printed('f0_Hz'), { relative: 0.005 })
    expectClose(real.q, printed('Q'), { relative: 0.01 })
    const found = resistors(exact('f0_target_Hz'), exact('Q_target'), C1, C2)
    expectClose(found.R2 ?? NaN, exact('R1_ohm'), { relative: 1e-5 })
    expectClose(found.R1 ?? NaN, exact('R2_ohm'), { relative: 1e-5 })
    const least = exact('C_fb_min_F') / C2
    expectClose(4 * exact('Q_target') ** 2, least, { relative: 1e-6 })
  })

  it('has the resistors of a fifth-order Butterworth example', () => {
    const { given, givenList, exact, exactList } = filterCase('sallen-key-butterworth-5-values')
    const corner = given('fc_Hz')
    prototypeSections('butterworth', 5).forEach(({ f0, q }, i) => {
      const pair = exactList(`stage${i + 1}_R_ohm`)
      const capacitors = givenList(`stage${i + 1}_C_F`)
      if (q === null) {
        expectClose(1 / (2 * Math.PI * f0 * corner * given('C1_first_F')), exact('R1_first_ohm'), {
          relative: 1e-6,
        })
        return
      }
      const found = resistors(f0 * corner, q, capacitors[1] ?? NaN, capacitors[0] ?? NaN)
      // The example's coefficients have four digits.
      expectClose(found.R2 ?? NaN, pair[0] ?? NaN, { relative: 3e-4 })
      expectClose(found.R1 ?? NaN, pair[1] ?? NaN, { relative: 3e-4 })
    })
  })

  it('has the corner and Q of a data sheet’s active filter', () => {
    const { given, printed, exact } = filterCase('sallen-key-equal-resistors')
    const real = sectionOf({
      R1: given('R1_ohm'),
      R2: given('R2_ohm'),
      C1: given('C1_fb_F'),
      C2: given('C2_gnd_F'),
    })
    expectClose(real.f0, exact('fc_Hz'), { relative: 1e-6 })
    expectClose(real.q, exact('Q'), { relative: 1e-9 })
    expectClose(real.f0, printed('fc_Hz'), { absolute: 6000 })
    expectClose(real.q, printed('Q'), { absolute: 0.0005 })
  })

  it('lets an octave above f0 through as a worked example says', () => {
    const { given, printed, exact, allowance } = filterCase('sallen-key-response-at-an-octave')
    const [C1, C2] = [given('C1_fb_F'), given('C2_gnd_F')]
    const R = exact('R_ohm')
    expectClose(R, printed('R_ohm'), allowance('R_ohm'))
    const { f0, q } = sectionOf({ R1: R, R2: R, C1, C2 })
    expectClose(f0, given('f0_Hz'), { relative: 1e-8 })
    const volts = given('vin_peak_V') * sectionGain(f0, q, given('f_test_Hz'))
    // The recomputed figure has an amplifier of finite gain in it.
    expectClose(volts, exact('vout_peak_V'), { relative: 1e-3 })
    expectClose(volts, printed('vout_peak_V'), allowance('vout_peak_V'))
  })

  it('moves Q with R1 and C1 as the worked sensitivities say', () => {
    const { printed } = filterCase('sallen-key-sensitivities')
    const { exact } = filterCase('sallen-key-unity-gain-q-2')
    const values = { R1: exact('R1_ohm'), R2: exact('R2_ohm'), C1: 2e-8, C2: 1e-9 }
    const slope = (name: keyof SectionValues) => {
      const h = 1e-6
      const at = (x: number) => sectionOf({ ...values, [name]: values[name as 'R1'] * x }).q
      return Math.log(at(1 + h) / at(1 - h)) / (2 * h)
    }
    expectClose(slope('R1'), printed('unity_S_R1'), { absolute: 0.005 })
    expectClose(slope('C1'), printed('unity_S_C1'), { absolute: 0.001 })
  })
})

describe('a multiple-feedback section', () => {
  const values = { R1: 12000, R2: 8200, R3: 12000, C1: 2.2e-8, C2: 2.2e-9 }

  it('has the f0 and Q of its transfer function', () => {
    const { R1, R2, R3, C1, C2 } = values
    // H = −(R3/R1)/(1 + s·C2·(R2 + R3 + R2·R3/R1) + s²·R2·R3·C1·C2), nodal analysis of the circuit.
    const [a, b] = [C2 * (R2 + R3 + (R2 * R3) / R1), R2 * R3 * C1 * C2]
    const found = sectionOf(values)
    expectClose(found.f0, 1 / (2 * Math.PI * Math.sqrt(b)), { relative: 1e-12 })
    expectClose(found.q, Math.sqrt(b) / a, { relative: 1e-12 })
  })

  it.each([
    ['sallen-key', { R1: 5600, R2: 3300, C1: 4.7e-8, C2: 1e-8 }],
    ['sallen-key', { R1: 3300, R2: 5600, C1: 4.7e-8, C2: 1e-8 }],
    ['multiple-feedback', values],
    ['multiple-feedback', { ...values, R2: 1500 }],
    ['multiple-feedback', { ...values, R3: 33000, C1: 1e-7 }],
  ] as const)('gives the resistors of a %s section back from its f0 and Q', (kind, given) => {
    const found = wantedResistors(kind, sectionOf(given), given) ?? {}
    const names = Object.keys(given).filter((name) => name.startsWith('R'))
    expect(Object.keys(found).sort()).toEqual(names.sort())
    for (const name of names)
      expectClose(found[name] ?? NaN, given[name as keyof typeof given] ?? NaN, { relative: 1e-9 })
  })

  it('has no resistors where C1/C2 is below 4·Q²·(1 + |H0|)', () => {
    const q = 1
    const at = (ratio: number) =>
      wantedResistors(
        'multiple-feedback',
        { f0: 1000, q },
        { R1: 1, R2: 1, R3: 1, C1: ratio * 1e-9, C2: 1e-9 },
      )
    expect(at(7.99)).toBeNull()
    expect(at(8.01)).not.toBeNull()
  })
})

describe('what tolerances do', () => {
  it('to f0 is the tolerance of the resistors and that of the capacitors', () => {
    // f0 goes with −½ of each of two resistors and two capacitors; at equal resistors Q moves with the capacitors alone.
    const equal = { R1: 1e4, R2: 1e4, C1: 2e-9, C2: 1e-9 }
    expectClose(toleranceError(equal, { resistor: 0.01, capacitor: 0.05 }), 0.06, { relative: 1e-6 })
    expectClose(toleranceError(equal, { resistor: 0, capacitor: 0.05 }), 0.05, { relative: 1e-6 })
  })
})
