import { describe, expect, it } from 'vitest'
import type { DesignDocument } from '#shared/design/schema.ts'
import cases from '#tests/fixtures/error-cases.json' with { type: 'json' }
import { budgetOf, exact, faultless, noiseOf, type Budgeted } from '#tests/support/budgets.ts'
import { buildDesign } from '#tests/support/designs.ts'
import { expectClose } from '#tests/support/expect-close.ts'

/*
 * Published error budgets and tolerance examples (fixture, each with its source), computed as designs: a network with the
 * published values, the published limits in its parts, and the lines read off. An integrated part's rejection is told at
 * its + input, half the signal above the common mode.
 */

const caseOf = (id: string) => {
  const found = cases.find((entry) => entry.id === id)
  if (!found) throw new Error(`there is no case ${id}`)
  const record = (value: object) => value as Record<string, number | number[] | undefined>
  const [given, computed, printed] = [found.given, found.recomputed, found.expect].map(record)
  const one = (from: typeof given, key: string): number => {
    const value = from?.[key]
    return Array.isArray(value) ? (value[0] ?? NaN) : (value ?? NaN)
  }
  return {
    given: (key: string) => one(given, key),
    computed: (key: string) => one(computed, key),
    printed: (key: string) => one(printed, key),
    list: (key: string) => given?.[key] as number[],
    many: (key: string) => computed?.[key] as number[],
  }
}

const decibels = (ratio: number): number => -20 * Math.log10(ratio)
const still = { low: 25, high: 25, calibration: 25 }
const wide = { input: { low: -12, high: 12 }, bits: 30, guard: { low: 0, high: 0 } }

/** A signal into an integrated amplifier with its (−) input at the common mode. */
const integrated = (
  fullScale: number,
  common: number,
  leg: number,
  more: Partial<DesignDocument>,
): DesignDocument =>
  buildDesign({
    sensor: {
      kind: 'voltage',
      quantity: { name: 'Load', unit: 'kg', low: 0, high: 100 },
      output: { low: 0, high: fullScale },
      wiring: 'differential',
      commonMode: { low: common, high: common },
      sourceResistance: leg,
    },
    converter: wide,
    rails: { positive: 15, negative: -15 },
    temperature: still,
    ...more,
  })

/** Line at full scale as parts per million of full scale; the gain scales both. */
const ppm = ({ budget, line }: Budgeted, id: string): number =>
  (line(id).asBuilt / (budget.perQuantity * 100)) * 1e6

describe('budgets of an integrated amplifier', () => {
  it('has the published lines of a bridge, and their linear sum', () => {
    const { given, computed, printed } = caseOf('in-amp-bridge-budget')
    const HALF_SIGNAL = 1 + given('v_fs_in_V') / 2 / given('vcm_V')
    const rg = given('Rg_ohm')
    const sigma = given('noise_pp_V') / 6.6
    const found = budgetOf(
      integrated(given('v_fs_in_V'), given('vcm_V'), given('R_bridge_ohm'), {
        parts: {
          resistors: exact,
          instrumentation: {
            k: rg * (given('gain') - 1),
            vosIn: given('vos_total_V'),
            vosOut: 0,
            ib: 0,
            ios: given('ios_A'),
            gainError: given('gain_error'),
            nonlinearity: given('nonlinearity'),
            cmrr: [[1, given('CMR_dB')]],
            psrr: [[1, 200]],
            rin: 1e14,
            vosInDrift: 0,
            vosOutDrift: 0,
            gainDrift: 0,
          },
        },
        choose: { values: { Rg: rg }, filter: { kind: 'none' } },
      }),
      'integrated-instrumentation-grounded',
      noiseOf(sigma * given('gain')),
    )
    const lines = { vos: 'U1.vos', ios: 'U1.ios', gain: 'U1.gain', nonlin: 'U1.nonlinearity', cmr: 'U1.cmrr' }
    for (const [name, id] of Object.entries(lines)) {
      const half = id === 'U1.cmrr' ? HALF_SIGNAL : 1
      expectClose(ppm(found, id), computed(`${name}_ppm`) * half, { relative: 1e-4 })
      expectClose(ppm(found, id), printed(`${name}_ppm`) * half, { absolute: 0.15 })
    }
    // Published noise is from peak to peak, ours is to either side.
    expectClose(2 * ppm(found, 'noise'), computed('noise_ppm'), { relative: 1e-4 })
    const sum = Object.values(lines).reduce((total, id) => total + ppm(found, id), 2 * ppm(found, 'noise'))
    expectClose(sum, computed('total_ppm'), { absolute: 0.6 })
    expectClose(sum, printed('total_ppm'), { absolute: 1 })
    const worst = (found.budget.totals.asBuilt.worst / (found.budget.perQuantity * 100)) * 1e6
    expectClose(worst, computed('total_ppm') - computed('noise_ppm') / 2, { absolute: 0.6 })
  })

  it('has the published lines over temperature', () => {
    const { given, computed, printed } = caseOf('in-amp-budget-with-drift')
    const rg = 499
    const found = budgetOf(
      integrated(given('v_fs_in_V'), given('vcm_V'), given('R_eff_ohm'), {
        temperature: { low: 25, high: 25 + given('dT_K'), calibration: 25 },
        parts: {
          resistors: exact,
          instrumentation: {
            k: rg * (given('gain') - 1),
            vosIn: given('vosi_V'),
            vosOut: given('voso_V'),
            vosInDrift: given('vosi_drift_V_K'),
            vosOutDrift: given('voso_drift_V_K'),
            ib: 0,
            ios: given('ios_A'),
            gainError: 0,
            gainDrift: given('gain_drift_ppm_K') * 1e-6,
            nonlinearity: given('nonlin_ppm') * 1e-6,
            cmrr: [[1, given('CMR_dB')]],
            psrr: [[1, 200]],
            rin: 1e14,
          },
        },
        choose: { values: { Rg: rg }, filter: { kind: 'none' } },
      }),
      'integrated-instrumentation-grounded',
    )
    const sums: [string, string[]][] = [
      ['U1.vos', ['vosi_ppm', 'voso_ppm']],
      ['U1.vosDrift', ['vosi_drift_ppm', 'voso_drift_ppm']],
      ['U1.ios', ['ios_ppm']],
      ['U1.cmrr', ['cmr_ppm']],
      ['U1.gainDrift', ['gain_drift_ppm']],
      ['U1.nonlinearity', ['nonlin_ppm']],
    ]
    for (const [id, keys] of sums) {
      const half = id === 'U1.cmrr' ? 1 + given('v_fs_in_V') / 2 / given('vcm_V') : 1
      const expected = keys.reduce((total, key) => total + computed(key), 0) * half
      expectClose(ppm(found, id), expected, { relative: 1e-4 })
    }
    const total = (found.budget.totals.asBuilt.worst / (found.budget.perQuantity * 100)) * 1e6
    expectClose(total, printed('grand_total_ppm') - printed('noise_ppm'), { absolute: 3 })
  })

  it('has the published root of the sum of squares of three terms', () => {
    const { given, computed, printed } = caseOf('rss-of-three-terms')
    const rg = 499
    const { budget } = budgetOf(
      integrated(given('v_sense_V'), 0, 0, {
        parts: {
          resistors: exact,
          instrumentation: {
            k: rg * 99,
            vosIn: given('vos_V'),
            vosOut: 0,
            vosInDrift: 0,
            vosOutDrift: 0,
            ib: 0,
            ios: 0,
            gainError: given('gain_error'),
            gainDrift: 0,
            nonlinearity: given('nonlinearity'),
            cmrr: [[1, 200]],
            psrr: [[1, 200]],
            rin: 1e14,
          },
        },
        choose: { values: { Rg: rg }, filter: { kind: 'none' } },
      }),
      'integrated-instrumentation-grounded',
    )
    const share = budget.totals.asBuilt.rss / (budget.perQuantity * 100)
    expectClose(share, computed('total'), { relative: 1e-4 })
    expectClose(share, printed('total'), { absolute: 5e-5 })
  })
})

describe('budgets of an operational amplifier', () => {
  it('has the published equivalent input offsets, worst case and root of squares', () => {
    const { given, computed, list, printed } = caseOf('input-offset-equivalents')
    const build = (which: 0 | 1) =>
      budgetOf(
        buildDesign({
          sensor: {
            kind: 'voltage',
            quantity: { name: 'Level', unit: 'm', low: 0, high: 1 },
            output: { low: 0, high: given('vp_V') },
          },
          converter: wide,
          rails: {
            positive: given('supply_V'),
            negative: -given('supply_V'),
            tolerance: given('supply_tol'),
          },
          temperature: { low: 25, high: list('T_C')[1], calibration: 25 },
          parts: {
            resistors: exact,
            amplifier: {
              ...faultless,
              vosDrift: given('TCVos_V_K'),
              cmrr: list('CMRR_dB_typ_min')[which],
              psrr: list('PSRR_dB_typ_min')[which],
              a0: list('a_typ_min')[which],
              rout: 1e-3,
            },
          },
          choose: { values: { Rg: 1000, Rf: 4000 }, filter: { kind: 'none' } },
        }),
        'non-inverting',
      )
    const gain = given('vo_V') / given('vp_V')
    // Against its own output of 5 V; the finite gain takes 0.05 % of every line.
    const worst = build(1).budget.totals.asBuilt.worst / gain
    expectClose(worst, computed('worst_V'), { relative: 2e-3 })
    expectClose(worst, printed('worst_V'), { absolute: 2e-6 })
    const rss = build(0).budget.totals.asBuilt.rss / gain
    expectClose(rss, computed('rss_V'), { relative: 1e-3 })
    expectClose(rss, printed('rss_V'), { absolute: 6e-7 })
  })

  /** An inverting stage with the published resistors and the source at ground. */
  const inverting = (rg: number, rf: number, low: number, more: Partial<DesignDocument>) =>
    budgetOf(
      buildDesign({
        sensor: {
          kind: 'voltage',
          quantity: { name: 'Level', unit: 'm', low: 0, high: 1 },
          output: { low, high: 0 },
        },
        converter: wide,
        rails: { positive: 15, negative: -15 },
        temperature: still,
        choose: { values: { Rg: rg, Rf: rf }, filter: { kind: 'none' } },
        ...more,
      }),
      'inverting',
    )

  it('has the published offset of a bias current', () => {
    const { given, many } = caseOf('bias-current-offset')
    const { line } = inverting(given('R1_ohm'), given('R2_ohm'), -0.05, {
      parts: {
        resistors: exact,
        amplifier: { ...faultless, ib: given('IB_A'), ibDoubling: 0 },
      },
    })
    expectClose(line('U1.ib').asBuilt, many('Eo_V')[0] ?? NaN, { relative: 1e-5 })
  })

  it('has the published ripple at its output', () => {
    const { given, list, many } = caseOf('supply-ripple')
    for (const [k, inverse] of list('psrr_inv_V_V').entries()) {
      const { line } = inverting(given('R1_ohm'), given('R2_ohm'), -0.005, {
        rails: { positive: 15, negative: -15, ripple: given('ripple_pp_V') / 2 },
        parts: { resistors: exact, amplifier: { ...faultless, psrr: decibels(inverse) } },
      })
      expectClose(line('U1.ripple').asBuilt, many('vo_pp_V')[k] ?? NaN, { relative: 1e-4 })
    }
  })
})

describe('tolerances', () => {
  const single = (id: string, high: number, values: Record<string, number>, tolerance: number) =>
    budgetOf(
      buildDesign({
        sensor: {
          kind: 'voltage',
          quantity: { name: 'Level', unit: 'm', low: 0, high: 1 },
          output: { low: 0, high },
        },
        converter: wide,
        rails: { positive: 15, negative: -15 },
        temperature: still,
        parts: { resistors: { tolerance, drift: 0 }, amplifier: faultless },
        target: { limit: 0.01, state: 'asBuilt' },
        choose: { values, filter: { kind: 'none' } },
      }),
      id,
    )

  it('of a divider of equal resistors are the published ones', () => {
    const { given, computed } = caseOf('divider-of-equals')
    const { budget, line } = single('attenuator', 10, { R1: 10000, R2: 10000 }, given('tolerance'))
    const half = 5
    const lines = [line('R1.initial'), line('R2.initial')]
    expectClose(lines.reduce((sum, l) => sum + l.asBuilt, 0) / half, computed('worst_rel'), {
      relative: 1e-5,
    })
    const sigma = Math.hypot(...lines.map((l) => l.standard)) / half
    expectClose(sigma, computed('sigma_rel_uniform_linear'), { relative: 1e-5 })
    expectClose(sigma, computed('sigma_rel_uniform'), { relative: 5e-3 })
    expect(budget.totals.asBuilt.worst / half).toBeLessThan(1.001 * computed('worst_rel'))
  })

  it('of a gain of ten are the published ones, to first order', () => {
    const { given, computed } = caseOf('gain-of-ten')
    const { line } = single(
      'non-inverting',
      0.5,
      { Rg: given('R1_ohm'), Rf: given('R2_ohm') },
      given('tolerance'),
    )
    const lines = [line('Rg.initial'), line('Rf.initial')]
    const sigma = Math.hypot(...lines.map((l) => l.standard)) / 5
    expectClose(sigma, computed('sigma_linear'), { relative: 1e-5 })
    expectClose(sigma, computed('sigma_rel_uniform'), { relative: 5e-3 })
    const worst = lines.reduce((sum, l) => sum + l.asBuilt, 0) / 5
    // The true corners lie to either side of the first order.
    expect(worst).toBeLessThan(computed('worst_rel_hi'))
    expect(worst).toBeGreaterThan(-computed('worst_rel_lo'))
  })
})
