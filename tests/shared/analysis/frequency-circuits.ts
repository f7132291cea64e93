import { prepareResponse } from '#shared/analysis/ac.ts'
import { integrateNoise, probeNoise } from '#shared/analysis/noise.ts'
import { findBandwidth } from '#shared/budget/dynamics.ts'
import {
  acquisitionTime,
  chargeShare,
  largestSource,
  timeConstants,
  timeConstantsForBits,
} from '#shared/converters/drive.ts'
import type { Network } from '#shared/network/types.ts'
import { magnitude } from '#shared/numerics/complex.ts'
import { buildTextbookPart } from '#tests/support/amplifier-part.ts'
import { Bench } from '#tests/support/circuits.ts'
import type { Circuit } from './worked-circuits.ts'

const sum = (values: Iterable<number>): number => [...values].reduce((total, value) => total + value, 0)

const bandwidthOf = (network: Network): number => {
  const respond = prepareResponse(network)
  return findBandwidth((frequency) => magnitude(respond(frequency))) ?? NaN
}

/** The published cases about frequency, time and drive, each asked through the public functions alone. */
export const frequencyCircuits: Record<string, Circuit> = {
  'thermal-noise-table': (given) => ({
    en_V_rtHz: given.many('R_ohm').map((ohms) => {
      const network = new Bench().r('R1', 'adc', '0', ohms).build()
      return Math.sqrt(sum(probeNoise(network, given.one('T_K')).densitiesAt(1e3)))
    }),
  }),

  'thermal-noise-in-a-band': (given) => {
    const ohms = given.one('R_ohm')
    const probe = probeNoise(new Bench().r('R1', 'adc', '0', ohms).build(), given.one('T_K'))
    const [from, to] = [given.one('f_lo_Hz'), given.one('f_hi_Hz')]
    const found = integrateNoise(probe, {
      from,
      least: from,
      weight: (frequency) => (frequency <= to ? 1 : 0),
      breaks: [to],
    })
    const density = Math.sqrt(sum(probe.densitiesAt(1e3)))
    return { eR_V_rtHz: density, iR_A_rtHz: density / ohms, ER_V: Math.sqrt(sum(found.squares)) }
  },

  'gain-100-noise': (given) => {
    const part = buildTextbookPart({
      gbw: given.one('funity_Hz'),
      a0: 1e9,
      en: given.one('en_V_rtHz'),
      enCorner: 0,
      in: given.one('in_A_rtHz'),
    })
    const network = new Bench(part)
      .v('VS', 'source', 0, '0', 1)
      .r('RS', 'source', 'p', given.one('Rs_ohm'))
      .u('U1', 'p', 'm', 'adc')
      .r('RI', 'm', '0', given.one('Ri_ohm'))
      .r('RF', 'adc', 'm', given.one('Rf_ohm'))
      .build()
    const output = Math.sqrt(sum(probeNoise(network, given.one('T_K')).densitiesAt(1)))
    return { e_total_uncorrelated_V_rtHz: output / magnitude(prepareResponse(network)(1)) }
  },

  'noise-bandwidth-of-equal-poles': (given) => ({
    enbw_over_f3dB: given.many('poles').map((count) => {
      const bench = new Bench()
        .v('VS', 'quiet', 0, '0', 1)
        .r('RN', 'quiet', 'n', 1e4)
        .e('E0', 'b0', '0', 'n', '0', 1)
      for (let k = 1; k <= count; k++) {
        bench.builder.resistor({
          ref: `R${k}`,
          a: `b${k - 1}`,
          b: `x${k}`,
          value: 1e3,
          stage: 'S1',
          noiseless: true,
        })
        bench.c(`C${k}`, `x${k}`, '0', 1e-6).e(`E${k}`, `b${k}`, '0', `x${k}`, '0', 1)
      }
      const network = bench.r('RL', 'n', '0', 1e12).build(`b${count}`)
      const probe = probeNoise(network, 300)
      const { squares, from } = integrateNoise(probe, { from: 1e-3, least: 1e4 })
      const density = sum(probe.densitiesAt(from))
      return sum(squares) / density / bandwidthOf(network)
    }),
  }),

  'photodiode-noise-gain': (given) => {
    const network = photodiode(given)
    const probe = probeNoise(network, given.one('T_K'))
    const { squares } = integrateNoise(probe, { from: 0.01, least: 1e8 })
    const of = (ref: string, name: string) =>
      Math.sqrt(squares[probe.origins.findIndex((o) => o.ref === ref && o.name === name)] ?? NaN)
    return {
      adjoint_total_V: Math.sqrt(sum(squares)),
      adjoint_en_V: of('U1', 'en'),
      adjoint_R2_V: of('R2', 'thermal'),
    }
  },

  'transimpedance-maximally-flat': (given) => {
    const part = buildTextbookPart({ gbw: 50e6, a0: 1e7 })
    const network = new Bench(part)
      .i('ISENSE', '0', 'm', 0, 1e-6)
      .c('CIN', 'm', '0', given.one('C_total_F'))
      .r('RF', 'adc', 'm', given.one('RF_ohm'))
      .c('CF', 'adc', 'm', given.one('CF_printed_F'))
      .u('U1', '0', 'm', 'adc')
      .build()
    return { f3dB_Hz: bandwidthOf(network) }
  },

  'time-constants-one-code': (given) => ({
    n_tau: given.many('bits').map((bits) => timeConstantsForBits(bits, 1)),
  }),

  'time-constants-half-code': (given) => ({
    n_tau: given.many('bits').map((bits) => timeConstantsForBits(bits, 0.5)),
  }),

  'acquisition-time-1': (given) => ({ t_c_s: acquisition(given) }),
  'acquisition-time-2': (given) => ({ t_c_s: acquisition(given) }),
  'acquisition-time-3': (given) => ({ t_c_s: acquisition(given) }),

  'largest-source-resistance': (given) => ({
    R_s_max_ohm: given
      .many('NSH')
      .map((cycles) =>
        largestSource(
          cycles / given.one('f_adc_Hz'),
          given.one('R_adc_ohm'),
          given.one('C_adc_F'),
          timeConstantsForBits(given.one('bits'), 1),
        ),
      ),
  }),

  'reservoir-of-twenty': (given) => {
    const [sampling, bits] = [given.one('C_sh_F'), given.one('bits')]
    const share = chargeShare(sampling, 20 * sampling)
    return {
      droop_fraction: share,
      n_tau_needed_half_lsb: timeConstants(2 ** (bits + 1) * share),
      n_tau_without_bucket: timeConstantsForBits(bits, 0.5),
    }
  },

  'kick-settling': (given) => {
    const [sampling, reservoir] = [given.one('C_sh_F'), given.one('C_filt_F')]
    const share = chargeShare(sampling, reservoir)
    const constants = timeConstants(2 ** (given.one('bits') + 1) * share)
    return {
      initial_error_V: given.one('v_step_V') * share,
      n_tau: constants,
      R_max_ohm: given.one('t_acq_s') / constants / (sampling + reservoir),
    }
  },
}

/** These makers settle to 1 in 2047: half a code of 10 bits, less one. */
const acquisition = (given: { one(key: string): number }): number =>
  acquisitionTime(
    given.one('Rs_ohm') + given.one('Ric_ohm'),
    given.one('Rss_ohm'),
    given.one('C_hold_F'),
    timeConstants(2047),
  )

function photodiode(given: { one(key: string): number }): Network {
  const part = buildTextbookPart({
    gbw: given.one('ft_Hz'),
    a0: 1e7,
    en: given.one('enw_V_rtHz'),
    enCorner: given.one('fce_Hz'),
    // shot noise of the bias current
    in: Math.sqrt(2 * 1.602176634e-19 * given.one('IB_A')),
    inCorner: 0,
  })
  return new Bench(part)
    .i('ISENSE', '0', 'm', 0, 1e-9)
    .r('R1', 'm', '0', given.one('R1_ohm'))
    .c('C1', 'm', '0', given.one('C1_F'))
    .r('R2', 'adc', 'm', given.one('R2_ohm'))
    .c('C2', 'adc', 'm', given.one('C2_F'))
    .u('U1', '0', 'm', 'adc')
    .build()
}
