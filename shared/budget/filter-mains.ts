import { solveAc } from '#shared/analysis/ac.ts'
import { solveDc } from '#shared/analysis/dc.ts'
import type { ChainSpec } from '#shared/design/chain.ts'
import type { FilterPlan } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import type { Network, NetworkElement, Resistor } from '#shared/network/types.ts'
import { magnitude } from '#shared/numerics/complex.ts'
import { sincMagnitude } from '#shared/numerics/sinc.ts'
import { digitalFilterOf } from './noise.ts'
import { responseChain } from './response-chain.ts'

/** Hz */
export const MAINS = [50, 60] as const
/** The mains keep their frequency within this fraction. */
const MAINS_DEVIATION = 0.01
/** What no filter exceeds on a board; a null of the response is deeper only on paper, dB. */
const DEEPEST = 300

/** Droop at the signal bandwidth and mains rejection of the converter's digital filter; null where it has none. */
export function digitalPart(design: Design): FilterPlan['digital'] {
  const sinc = digitalFilterOf(design)
  if (!sinc || sinc.modulatorRate === null) return null
  const { bandwidth } = design.sensor
  const decibels = (f: number) => Math.min(-20 * Math.log10(sincMagnitude(sinc, f)), DEEPEST)
  return {
    kind: design.converter.digitalFilter,
    modulatorRate: sinc.modulatorRate,
    outputRate: sinc.outputRate,
    droop: bandwidth === undefined ? null : decibels(bandwidth),
    // The least over what the mains frequency may be: a null is narrow.
    mains: MAINS.map((frequency) => ({
      frequency,
      rejection: Math.min(
        ...[1 - MAINS_DEVIATION, 1, 1 + MAINS_DEVIATION].map((ratio) => decibels(ratio * frequency)),
      ),
    })),
  }
}

/**
 * Mains on both legs of a differential source: what the imbalance of the legs (source and lead resistance, the
 * capacitance of the source) turns into signal, through the network at 50 and 60 Hz. `imbalance` is the difference of
 * the two legs, Ω; `rejection` the differential gain over what common mode gives, dB; `error` V of y for the common mode
 * that the design states, taken as mains. Null where the source has no common mode of its own.
 */
export function mainsPickup(design: Design, spec: ChainSpec): FilterPlan['mains'] {
  const chain = responseChain(design, spec)
  const { sensor } = design
  const source = chain.network.elements.find((e) => e.ref === 'VCM')
  const legs = ['RSOURCEP', 'RSOURCEN'].map((ref) => chain.network.elements.find((e) => e.ref === ref))
  if (source?.kind !== 'voltage-source' || sensor.kind !== 'voltage') return null
  const resistors = legs.flatMap((e) => (e?.kind === 'resistor' ? [e] : []))
  const imbalance = resistors.reduce((sum, r) => sum + r.value * r.tolerance, 0)
  const range = sensor.commonMode ?? { low: 0, high: 0 }
  const amplitude = (range.high - range.low) / 2
  const gain = differentialGain(design, spec)
  return MAINS.map((frequency) => {
    const worst = Math.max(
      ...[1, -1].map((sign) => {
        const network = withImbalance(chain.network, resistors, sign, sensor.capacitance)
        return magnitude(solveAc(network, frequency, { model: 'real' }).output)
      }),
    )
    return {
      frequency,
      imbalance,
      rejection: Math.min(20 * Math.log10(gain / Math.max(worst, 1e-300)), DEEPEST),
      error: worst * amplitude,
    }
  })
}

function differentialGain(design: Design, spec: ChainSpec): number {
  const { network } = responseChain(design, spec)
  const set = (value: number) => solveDc(network, { model: 'real', set: { VSENSE: value } }).output
  return Math.abs(set(1e-3) - set(0)) / 1e-3
}

/** Common mode in place of the signal, one leg's resistance up and the other's down, the source's capacitance on each. */
function withImbalance(
  network: Network,
  legs: readonly Resistor[],
  sign: number,
  capacitance: number,
): Network {
  const elements = network.elements.map((e): NetworkElement => {
    if (e.kind === 'voltage-source' && e.ref === 'VCM') return { ...e, ac: 1 }
    if (e.kind === 'voltage-source' && e.ref === 'VSENSE') return { ...e, ac: 0 }
    const leg = legs.indexOf(e as Resistor)
    if (leg < 0 || e.kind !== 'resistor') return e
    return { ...e, value: e.value * (1 + (leg === 0 ? sign : -sign) * e.tolerance) }
  })
  const loads = legs.flatMap((leg, i): NetworkElement[] =>
    capacitance > 0
      ? [
          {
            kind: 'capacitor',
            ref: `CSOURCE${i}`,
            a: leg.b,
            b: '0',
            value: capacitance,
            tolerance: 0,
            drift: 0,
            fixed: true,
            stage: 'source',
          },
        ]
      : [],
  )
  return { ...network, elements: [...elements, ...loads] }
}
