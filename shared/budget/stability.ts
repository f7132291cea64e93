import { findCrossover, findCrossoverNear } from '#shared/analysis/stability.ts'
import type { ChainSpec } from '#shared/design/chain.ts'
import { temperatureSpan } from '#shared/design/references.ts'
import type { RoomState, StabilityEntry } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import type { Amplifier, Capacitor, Network } from '#shared/network/types.ts'
import { curesFor } from './cures.ts'
import { plainAmplifiers, responseChain } from './response-chain.ts'

/** Phase margins below which an amplifier is watched and below which it is refused, degrees (engine's rule). */
const TIGHT = 45
const OVER = 30

/**
 * Crossover and phase margin of every amplifier in the real network, with the second pole that its part's phase margin
 * implies, input capacitances, reservoir, and the converter's sampling capacitor through its switch. Worst over the
 * tolerance of the capacitors. The halves of an integrated part are left out: its loops are closed inside it, and its
 * makers answer for them; the macro stands for its bandwidth only.
 */
export function checkStability(design: Design, spec: ChainSpec): StabilityEntry[] {
  const network = withSampling(design, responseChain(design, spec).network)
  return plainAmplifiers(network).map((amplifier) => {
    const margin = findMargin(design, network, amplifier)
    if (!margin)
      return {
        amplifier: amplifier.ref,
        crossover: null,
        phaseMargin: null,
        worst: null,
        state: 'clear',
        cures: [],
      }
    const state: RoomState = margin.worst < OVER ? 'over' : margin.worst < TIGHT ? 'tight' : 'clear'
    return {
      amplifier: amplifier.ref,
      crossover: margin.crossover,
      phaseMargin: margin.phaseMargin,
      worst: margin.worst,
      state,
      cures:
        state === 'clear'
          ? []
          : curesFor(design, network, amplifier, margin.worst, (changed) => {
              const found = findMargin(design, changed, amplifier)
              return found ? found.worst : null
            }),
    }
  })
}

/**
 * The network while the converter samples: its capacitor behind its switch (with `further` ohms in series), none of
 * them a part of its own. Behind the switch the node is `adc_hold`.
 */
export function withSampling(design: Design, network: Network, further = 0): Network {
  const { samplingCapacitance } = design.converter
  const switchResistance = design.converter.switchResistance + further
  if (samplingCapacitance === 0) return network
  const { p, n } = network.output
  const stage = 'converter'
  const inner = switchResistance > 0 ? HOLD : p
  return {
    ...network,
    elements: [
      ...network.elements,
      ...(switchResistance > 0
        ? [
            {
              kind: 'resistor' as const,
              ref: 'RSWITCH',
              a: p,
              b: inner,
              value: switchResistance,
              tolerance: 0,
              drift: 0,
              fixed: true,
              group: null,
              noiseless: true,
              stage,
            },
          ]
        : []),
      {
        kind: 'capacitor' as const,
        ref: 'CHOLD',
        a: inner,
        b: n,
        value: samplingCapacitance,
        tolerance: 0,
        drift: 0,
        fixed: true,
        stage,
      },
    ],
  }
}

/** Node of the sampling capacitor. */
export const HOLD = 'adc_hold'

interface Margin {
  crossover: number
  phaseMargin: number
  worst: number
}

/** Capacitors of which every vertex is looked at; with more, each alone and all together. */
const MOST_CORNERS = 4
/** A capacitor that moves the margin by less than this, degrees, is left out of the vertices. */
const NOTICEABLE = 0.02

function findMargin(design: Design, network: Network, { ref }: Amplifier): Margin | null {
  const nominal = findCrossover(network, ref, { poles: 2 })
  if (!nominal) return null
  let worst = nominal.phaseMargin
  const marginWith = (set: Record<string, number>): number => {
    const found = findCrossoverNear(network, ref, nominal.frequency, { poles: 2, set })
    const margin = found?.phaseMargin ?? nominal.phaseMargin
    worst = Math.min(worst, margin)
    return margin
  }
  const span = temperatureSpan(design)
  const uncertain = network.elements.flatMap((e): Corner[] =>
    e.kind === 'capacitor' && e.tolerance > 0 ? [cornerOf(e, span)] : [],
  )
  // each alone: what does not move this loop by itself stands behind another amplifier, and its corners are no others
  const felt = uncertain.filter((corner) =>
    corner.ends
      .map((value) => Math.abs(marginWith({ [corner.ref]: value }) - nominal.phaseMargin))
      .some((change) => change > NOTICEABLE),
  )
  for (const set of felt.length <= MOST_CORNERS ? vertices(felt) : together(felt)) marginWith(set)
  return { crossover: nominal.frequency, phaseMargin: nominal.phaseMargin, worst }
}

interface Corner {
  ref: string
  ends: [number, number]
}

function cornerOf({ ref, value, tolerance, drift }: Capacitor, span: number): Corner {
  const reach = Math.min(tolerance + drift * span, 0.99)
  return { ref, ends: [value * (1 - reach), value * (1 + reach)] }
}

function vertices(corners: readonly Corner[]): Record<string, number>[] {
  if (corners.length < 2) return []
  let sets: Record<string, number>[] = [{}]
  for (const { ref, ends } of corners)
    sets = sets.flatMap((set) => ends.map((value) => ({ ...set, [ref]: value })))
  return sets
}

const together = (corners: readonly Corner[]): Record<string, number>[] =>
  [0, 1].map((end) => Object.fromEntries(corners.map(({ ref, ends }) => [ref, ends[end as 0 | 1]])))
