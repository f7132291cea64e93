import { computeLoopGain, computeResponse, solveAc } from '#shared/analysis/ac.ts'
import { solveDc } from '#shared/analysis/dc.ts'
import { computeSensitivities, findSensitivity } from '#shared/analysis/sensitivity.ts'
import type { Network } from '#shared/network/types.ts'
import type { Complex } from '#shared/numerics/complex.ts'
import { magnitude, phase } from '#shared/numerics/complex.ts'
import { buildTextbookPart } from '#tests/support/amplifier-part.ts'
import { Bench } from '#tests/support/circuits.ts'
import {
  difference,
  follower,
  nonInverting,
  offsetUp,
  summing,
  threeAmplifiers,
  twoAmplifiers,
} from '#tests/support/topologies.ts'

/** What a published case gives: its keys are read where they are used. */
export interface Figures {
  /** The number under a key. */
  one(key: string): number
  /** The numbers under a key. */
  many(key: string): number[]
}

/** Figures that the network answers for a case, under the case's own keys. */
export type Circuit = (given: Figures, recomputed: Figures) => Record<string, number | number[]>

const TIMELESS = 1e12

/** The circuits of the cases, each built and asked through the public analyses alone. */
export const circuits: Record<string, Circuit> = {
  'offset-up-from-spans': (given, found) =>
    line(
      offsetUp(
        given.one('R1_ohm'),
        found.one('R2_ideal_ohm'),
        given.one('RG_ohm'),
        found.one('RF_ideal_ohm'),
        given.one('vref_V'),
      ),
    ),
  'offset-up-standard-values': (given) => {
    const network = offsetUp(
      given.one('R1_ohm'),
      given.one('R2_ohm'),
      given.one('RG_ohm'),
      given.one('RF_ohm'),
      given.one('vref_V'),
    )
    return { ...line(network), vout_V: given.many('vin_V').map((value) => ideal(network, { VSENSE: value })) }
  },
  'offset-down-standard-values': (given) => {
    const network = new Bench()
      .v('VSENSE', 'sense', 0)
      .v('VREF', 'vref', given.one('vref_V'))
      .r('R1', 'vref', 'x', given.one('R1_ohm'))
      .r('R2', 'x', '0', given.one('R2_ohm'))
      .r('RG', 'x', 'm', given.one('RG_ohm'))
      .r('RF', 'adc', 'm', given.one('RF_ohm'))
      .u('U1', 'sense', 'm', 'adc')
      .build()
    return { ...line(network), vout_V: given.many('vin_V').map((value) => ideal(network, { VSENSE: value })) }
  },
  'inverting-offset-up-from-spans': (given, found) =>
    line(
      new Bench()
        .v('VSENSE', 'sense', 0)
        .v('VREF', 'vref', given.one('vref_V'))
        .r('RG', 'sense', 'm', given.one('RG_ohm'))
        .r('RF', 'adc', 'm', found.one('RF_ideal_ohm'))
        .r('R2', 'vref', 'p', found.one('R2_ideal_ohm'))
        .r('R1', 'p', '0', given.one('R1_ohm'))
        .u('U1', 'p', 'm', 'adc')
        .build(),
    ),
  'inverting-offset-down': (given, found) => {
    const network = summing(
      ['VSENSE', 'VREF'],
      [given.one('RG1_ohm'), found.one('RG2_ohm')],
      found.one('RF_ohm'),
      [0, given.one('vref_V')],
    )
    const ends = [given.one('vin_lo_V'), given.one('vin_hi_V')]
    return { ...line(network), vout_V: ends.map((value) => ideal(network, { VSENSE: value })) }
  },
  'thermistor-divider-and-offset-stage': (given, found) => {
    const supply = given.one('vdd_V')
    const divider = new Bench()
      .v('VDD', 'vdd', supply)
      .r('R1', 'vdd', 'adc', 1e4)
      .r('RSENSE', 'adc', '0', 1e4)
      .build()
    const stage = new Bench()
      .v('VSENSE', 'sense', 0)
      .v('VDD', 'vdd', supply)
      .r('R2', 'm', '0', found.one('R2_ideal_ohm'))
      .r('R4', 'vdd', 'm', found.one('R4_ideal_ohm'))
      .r('R3', 'adc', 'm', given.one('R3_ohm'))
      .u('U1', 'sense', 'm', 'adc')
      .build()
    return {
      vin_V: ['Rptc_0C_ohm', 'Rptc_50C_ohm'].map((key) => ideal(divider, { RSENSE: given.one(key) })),
      gain_ideal: line(stage).m,
    }
  },
  'inverting-sum-offset': (given, found) => ({
    vout_at_v1_0p1_V: ideal(
      summing(['V1', 'V2'], [given.one('R1_ohm'), found.one('R2_ohm')], found.one('RF_ohm'), [
        0.1,
        given.one('v_offset_source_V'),
      ]),
    ),
  }),
  'bipolar-span-from-unipolar': (given) => {
    // the ratios that bring the printed ends about, read back from the network's own gain and offset
    const feedback = 12e3
    const network = new Bench()
      .v('VSENSE', 'sense', 0)
      .v('VREF', 'vref', given.one('vref_V'))
      .r('RG1', 'm', '0', feedback / 3)
      .r('RG2', 'm', 'vref', feedback / 4)
      .r('RF', 'adc', 'm', feedback)
      .u('U1', 'sense', 'm', 'adc')
      .build()
    const toReference = -ideal(network) / given.one('vref_V')
    return { RFB_over_RG2: toReference, RFB_over_RG1: line(network).m - 1 - toReference }
  },
  'gain-against-open-loop-gain': (given) => ({
    vout_V: given.many('open_loop_gain').map((a0) => {
      const network = nonInverting(given.one('R1_ohm'), given.one('R2_ohm'), buildTextbookPart({ a0 }))
      return real(network, { VSENSE: given.one('vin_V') })
    }),
  }),
  'non-inverting-input-and-output-resistance': (given) => {
    const part = buildTextbookPart({
      a0: given.one('a'),
      rin: given.one('rd_ohm'),
      rout: given.one('ro_ohm'),
    })
    const network = nonInverting(given.one('R1_ohm'), given.one('R2_ohm'), part)
    const driven = solveDc(network, { model: 'real', set: { VSENSE: 1 } })
    return { A: driven.output, Ri_ohm: -1 / driven.current('VSENSE'), Ro_ohm: real(network, { ITEST: 1 }) }
  },
  'inverting-gain-1-resistances': invertingResistances,
  'inverting-gain-1000-resistances': invertingResistances,
  'summing-loaded-loop-gain': (given) => {
    const part = buildTextbookPart({
      a0: given.one('a'),
      rin: given.one('rd_ohm'),
      rout: given.one('ro_ohm'),
    })
    const inputs = given.many('R_in_ohm')
    const sources = inputs.map((_, k) => `V${k + 1}`)
    const network = summing(
      sources,
      inputs,
      given.one('RF_ohm'),
      inputs.map(() => 0),
      part,
      given.one('RL_ohm'),
    )
    const loop = computeLoopGain(network, 'U1', 0).re
    return { T: loop, beta: loop / given.one('a'), gains: sources.map((ref) => real(network, { [ref]: 1 })) }
  },
  desensitivity: (given) => ({
    dA_over_A_pct: given.many('beta').map((beta) => {
      const part = buildTextbookPart({ a0: given.one('a') })
      const network = beta === 1 ? follower(part) : nonInverting(1e3, 1e3 / beta - 1e3, part)
      return given.one('da_over_a_pct') / (1 + computeLoopGain(network, 'U1', 0).re)
    }),
  }),
  'bandwidth-traded-for-gain': (given) => {
    const a0 = given.one('Aol')
    const part = buildTextbookPart({ a0, gbw: a0 * given.one('f2_ol_Hz') })
    const network = nonInverting(1e3, 1e3 / given.one('beta') - 1e3, part)
    return {
      A: real(network, { VSENSE: 1 }),
      sacrifice: 1 + computeLoopGain(network, 'U1', 0).re,
      f2_Hz: corner(network),
    }
  },
  'gain-bandwidth-product': () => {
    const part = (gbw: number) => buildTextbookPart({ a0: TIMELESS, gbw })
    const inverting = summing(['VSENSE'], [500], 20e3, [1], part(50e3 * 41))
    const stages = [
      nonInverting(1e3, 7e3, part(1e6)),
      summing(['VSENSE'], [1e3], 2e3, [1], part(1e6)),
      nonInverting(1e3, 3e3, part(1e6)),
    ]
    return {
      f2_Hz: corner(nonInverting(1e3, 9e3, part(1e6))),
      noise_gain: TIMELESS / computeLoopGain(inverting, 'U1', 0).re,
      funity_Hz: corner(inverting) * 41,
      stage_f2_Hz: stages.map(corner),
      gain_total: stages.reduce((product, stage) => product * ideal(stage, { VSENSE: 1 }), 1),
    }
  },
  'two-stage-bandwidth': (given) => {
    const part = buildTextbookPart({ a0: TIMELESS, gbw: given.one('ft_Hz') })
    const gain = 10 ** (given.one('gain_dB') / 40)
    const single = nonInverting(1e3, 1e3 * (gain ** 2 - 1), part)
    const each = nonInverting(1e3, 1e3 * (gain - 1), part)
    const both = new Bench(part)
      .v('VSENSE', 'sense', 1, '0', 1)
      .u('U1', 'sense', 'm1', 'o1')
      .r('R1', 'm1', '0', 1e3)
      .r('R2', 'o1', 'm1', 1e3 * (gain - 1))
      .u('U2', 'o1', 'm2', 'adc')
      .r('R3', 'm2', '0', 1e3)
      .r('R4', 'adc', 'm2', 1e3 * (gain - 1))
      .build()
    return {
      fB_single_Hz: corner(single),
      A_each: real(each, { VSENSE: 1 }),
      fB_each_Hz: corner(each),
      fB_total_Hz: corner(both),
    }
  },
  'one-pole-magnitude-and-phase-error': (given) => {
    const network = follower(buildTextbookPart({ a0: TIMELESS, gbw: given.one('fB_Hz') }))
    const turn = (given.one('phase_error_deg') * Math.PI) / 180
    return {
      f_mag_Hz: frequencyWhere(network, (h) => magnitude(h) < 1 - given.one('mag_error')),
      f_phase_Hz: frequencyWhere(network, (h) => -phase(h) > turn),
    }
  },
  'output-impedance-over-frequency': (given) => {
    const part = buildTextbookPart({
      a0: given.one('a0'),
      gbw: given.one('ft_Hz'),
      rin: given.one('rd_ohm'),
      rout: given.one('ro_ohm'),
    })
    const network = nonInverting(given.one('R1_ohm'), given.one('R2_ohm'), part, 1)
    const impedance = (frequency: number) => magnitude(solveAc(network, frequency, { model: 'real' }).output)
    return {
      Rs_ohm: real(network, { ITEST: 1 }),
      Zout_1kHz_ohm: impedance(1e3),
      Zout_100kHz_ohm: impedance(1e5),
    }
  },
  'difference-mismatched-outputs': (given) => {
    const network = difference(['R1_ohm', 'R2_ohm', 'R3_ohm', 'R4_ohm'].map((key) => given.one(key)))
    const [first, second] = [ideal(network, { V1: 1, V2: 0 }), ideal(network, { V1: 0, V2: 1 })]
    return {
      vout_V: pairs.map(([v1, v2]) => ideal(network, { V1: v1, V2: v2 })),
      A1: -first,
      A2: second,
      Acm: first + second,
    }
  },
  'difference-cmrr-1-percent': (given) => ({
    CMRR_exact_corners_dB: worstRejection(given.one('G'), given.one('tolerance')),
  }),
  'difference-cmrr-table': (given) => ({
    CMRR_dB: given.many('tolerance').map((tolerance) => worstRejection(given.one('G'), tolerance)),
  }),
  'difference-cmrr-one-resistor': (given) => ({
    CMRR_dB: rejection([
      1e4,
      1e4 * given.one('G') * (1 + given.one('one_resistor_mismatch')),
      1e4,
      1e4 * given.one('G'),
    ]),
  }),
  'two-amplifier-gain-and-inner-node': (given) => {
    const [small, large] = [given.one('R_small_ohm'), given.one('R_large_ohm')]
    const withRg = twoAmplifiers(small, large, given.one('Rg_ohm'))
    const without = twoAmplifiers(small, large, null)
    const at = (network: Network, common: number, difference: number) =>
      solveDc(network, { model: 'ideal', set: { VP: common + difference / 2, VM: common - difference / 2 } })
    return {
      gain: at(withRg, 0, 1).output,
      gain_no_Rg: at(without, 0, 1).output,
      outA1_V_vcm10_vdm1_G10: at(withRg, 10, -1).voltage('o1'),
      outA1_V_vcm10_vdm2_noRg: at(without, 10, -2).voltage('o1'),
    }
  },
  'three-amplifier-inner-nodes': (given) => {
    const network = threeAmplifiers(
      given.one('R_ohm'),
      given.one('Rg_ohm'),
      given.one('Ri_ohm'),
      given.one('Rf_ohm'),
    )
    const ends = { VP: given.one('vin_plus_V'), VM: given.one('vin_minus_V') }
    const driven = solveDc(network, { model: 'ideal', set: ends })
    const common = given.one('vcm_test_V')
    const shared = { VP: common, VM: common }
    const amount = 10 ** (-given.one('CMRR_dB') / 20)
    const withError = (x: number) =>
      solveDc(network, {
        model: 'ideal',
        set: shared,
        extra: [{ ref: 'U1', port: 'cmrr', amount: x, reference: 0 }],
      })
    // the case's figure is to first order in 1/CMRR
    const rejected = (withError(amount).output - withError(-amount).output) / 2
    return {
      va_V: driven.voltage('o2'),
      vb_V: driven.voltage('o1'),
      vout_V: driven.output,
      gain: driven.output / (ends.VP - ends.VM),
      va_for_cm_V: solveDc(network, { model: 'ideal', set: shared }).voltage('o1'),
      vout_cm_V: rejected,
    }
  },
  'in-amp-gain-resistor-1': (given) => {
    const gain = (rg: number) =>
      ideal(threeAmplifiers(given.one('R_internal_ohm') / 2, rg, 1e4, 1e4), { VP: 0.5, VM: -0.5 })
    const wanted = given.one('G_target')
    // the gain resistor that the network itself needs, its gain being 1 + k/Rg
    return { gain: gain(given.one('Rg_ohm')), Rg_for_G10_ohm: (gain(1) - 1) / (wanted - 1) }
  },
  'in-amp-variable-gain': (given) => {
    const gain = (pot: number) => {
      const second = given.one('second_stage_gain')
      return ideal(threeAmplifiers(given.one('R3_ohm'), given.one('R4_ohm') + pot, 1e4, 1e4 * second), {
        VP: 0.5,
        VM: -0.5,
      })
    }
    return { gain_min: gain(given.one('pot_ohm')), gain_max: gain(0) }
  },
  'error-injection': (given) => {
    const network = offsetUp(1e4, 1.8e5, 1e4, 2.7e4, 5)
    const set = { VSENSE: given.one('vin_V') }
    const nominal = ideal(network, set)
    const change = (port: 'vos' | 'ib+' | 'ib-' | 'cmrr', amount: number) => {
      const extra = [{ ref: 'U1', port, amount, reference: given.one('vcm_reference_V') }]
      return solveDc(network, { model: 'ideal', set, extra }).output - nominal
    }
    const supply = given.one('dv_supply_V') * 10 ** (-given.one('PSRR_dB') / 20)
    // the case's figure is to first order in 1/CMRR: the slope at zero, by the difference of the two signs
    const x = 10 ** (-given.one('CMRR_dB') / 20)
    const changes = {
      d_vos_V: change('vos', given.one('vos_V')),
      d_ibp_V: change('ib+', given.one('ib_plus_into_pin_A')),
      d_ibm_V: change('ib-', given.one('ib_minus_into_pin_A')),
      d_cmrr_V: ((change('cmrr', x / 100) - change('cmrr', -x / 100)) / 2) * 100,
      d_psrr_V: change('vos', supply),
    }
    const sum = Object.values(changes).reduce((total, value) => total + value, 0)
    return { vout_V: nominal, ...changes, sum_signed_V: sum }
  },
  'adjoint-sensitivity': (given) => {
    const network = offsetUp(1e4, 1.8e5, 1e4, 2.7e4, 5, given.one('vin_V'))
    const found = computeSensitivities(network, { model: 'ideal' })
    const { output } = solveDc(network, { model: 'ideal' })
    const relative = (ref: string, value: number) => (findSensitivity(found, ref) * value) / output
    return {
      S_R1: relative('R1', 1e4),
      S_R2: relative('R2', 1.8e5),
      S_RG: relative('RG', 1e4),
      S_RF: relative('RF', 2.7e4),
    }
  },
  'low-pass-feedthrough': (given) => {
    const lowPass = (rout: number) =>
      new Bench(buildTextbookPart({ a0: given.one('A0'), gbw: given.one('GBW_Hz'), rout }))
        .v('VSENSE', 'sense', 0, '0', 1)
        .r('R1', 'sense', 'a', given.one('R1_ohm'))
        .r('R2', 'a', 'b', given.one('R2_ohm'))
        .c('C1', 'a', 'adc', given.one('C1_fb_F'))
        .c('C2', 'b', '0', given.one('C2_gnd_F'))
        .u('U1', 'b', 'adc', 'adc')
        .build()
    const decibels = (network: Network) =>
      computeResponse(network, given.many('f_Hz')).map((h) => 20 * Math.log10(magnitude(h)))
    return { H_dB: decibels(lowPass(given.one('Ro_ohm'))), H_Ro0_dB: decibels(lowPass(0)) }
  },
}

const pairs = [
  [-0.1, 0.1],
  [4.9, 5.1],
  [9.9, 10.1],
] as const

const ideal = (network: Network, set: Record<string, number> = {}) =>
  solveDc(network, { model: 'ideal', set }).output
const real = (network: Network, set: Record<string, number> = {}) =>
  solveDc(network, { model: 'real', set }).output

/** Gain and offset from two points of the sensor's source. */
function line(network: Network): { m: number; b_V: number } {
  const b = ideal(network, { VSENSE: 0 })
  return { m: ideal(network, { VSENSE: 1 }) - b, b_V: b }
}

function invertingResistances(given: Figures): Record<string, number> {
  const part = buildTextbookPart({ a0: given.one('a'), rout: given.one('ro_ohm') })
  const network = summing(['VSENSE'], [given.one('R1_ohm')], given.one('R2_ohm'), [0], part)
  const node = new Bench(part)
    .i('ITEST', '0', 'adc', 1)
    .r('R2', 'out', 'adc', given.one('R2_ohm'))
    .u('U1', '0', 'adc', 'out')
    .build()
  return { A: real(network, { VSENSE: 1 }), Rn_ohm: real(node), Ro_ohm: real(network, { ITEST: 1 }) }
}

/** Differential over common-mode gain, dB. */
function rejection(resistors: number[]): number {
  const network = difference(resistors)
  const differential = ideal(network, { V1: -0.5, V2: 0.5 })
  return 20 * Math.log10(Math.abs(differential / ideal(network, { V1: 1, V2: 1 })))
}

/** Least rejection over the 16 corners of four resistors; corners without any common-mode gain are infinite. */
function worstRejection(gain: number, tolerance: number): number {
  const nominal = [1e4, 1e4 * gain, 1e4, 1e4 * gain]
  let worst = Infinity
  for (let corner = 0; corner < 16; corner++) {
    worst = Math.min(
      worst,
      rejection(nominal.map((value, k) => value * (1 + ((corner >> k) & 1 ? 1 : -1) * tolerance))),
    )
  }
  return worst
}

/** Frequency at which the response to the sensor falls to 1/√2 of its value at DC. */
function corner(network: Network): number {
  const [start] = computeResponse(network, [0])
  const limit = start ? magnitude(start) / Math.SQRT2 : 0
  return frequencyWhere(network, (h) => magnitude(h) < limit)
}

/** Lowest frequency at which a response that changes steadily meets a condition, by halving decades. */
function frequencyWhere(network: Network, met: (h: Complex) => boolean): number {
  let [low, high] = [1e-3, 1e12]
  for (let step = 0; step < 200; step++) {
    const middle = Math.sqrt(low * high)
    if (met(solveAc(network, middle, { model: 'real' }).output)) high = middle
    else low = middle
  }
  return high
}
