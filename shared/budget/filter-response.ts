import { computeResponse, solveAc } from '#shared/analysis/ac.ts'
import type { Chain, ChainSpec } from '#shared/design/chain.ts'
import type { Design } from '#shared/design/schema.ts'
import { isFilterStage, type SectionSpec } from '#shared/filters/filter-spec.ts'
import type { Network } from '#shared/network/types.ts'
import { divideComplex, magnitude } from '#shared/numerics/complex.ts'
import { findCrossing } from '#shared/numerics/crossing.ts'
import { responseChain } from './response-chain.ts'

/** Gains below this are rounding, and none is 0. */
const FAINTEST = 1e-30
/** Highest frequency looked at, decades above 1 Hz. */
const HIGHEST = 10

/**
 * The filter by itself out of the chain's own network, real amplifiers, from the output of the last stage (or, where no
 * amplifier stands before it, from the sensor) to the converter's pin. The stages' own bandwidth is not in it.
 */
export interface FilterResponseOf {
  network: Network
  /** |H| relative to 0 Hz. */
  gain(frequency: number): number
  gains(frequencies: readonly number[]): number[]
}

export function filterResponse(design: Design, spec: ChainSpec): FilterResponseOf {
  const chain = responseChain(design, spec)
  const network = filterNetwork(chain, spec)
  const [atZero] = computeResponse(network, [0])
  const still = atZero ? magnitude(atZero) : 1
  const gains = (frequencies: readonly number[]) =>
    computeResponse(network, frequencies).map((h) => Math.max(magnitude(h) / still, FAINTEST))
  return { network, gains, gain: (frequency) => gains([frequency])[0] ?? 0 }
}

function filterNetwork(chain: Chain, spec: ChainSpec): Network {
  const { network, following } = chain
  // Wires alone before it: the source stands in series with the filter and stays.
  if (spec.stages.every(({ arrangement }) => arrangement.amplifiers === 0)) return network
  const input = following[0]?.node ?? network.output.p
  const kept = network.elements.filter(
    ({ stage }) => isFilterStage(stage) || stage === 'converter' || stage === 'supply',
  )
  return {
    ...network,
    elements: [
      ...kept,
      { kind: 'voltage-source', ref: 'VFILTER', p: input, n: '0', value: 0, ac: 1, stage: 'source' },
    ],
  }
}

/** Steps per decade in which a fall of the gain is looked for: poles of Q 5 are about a third of a decade wide. */
const STEPS = 8

/** Lowest frequency (Hz) from `from` up at which the gain has fallen to `level`; null where it does not. */
export function frequencyAt(gain: (frequency: number) => number, level: number, from: number): number | null {
  const over = (decades: number) => Math.log(Math.max(gain(10 ** decades), 1e-300) / level)
  let low = Math.log10(from)
  let atLow = over(low)
  if (atLow <= 0) return from
  for (let high = low + 1 / STEPS; high <= HIGHEST; high += 1 / STEPS) {
    const atHigh = over(high)
    if (atHigh <= 0) return 10 ** findCrossing(over, low, high, atLow, atHigh)
    ;[low, atLow] = [high, atHigh]
  }
  return null
}

/** The −3 dB corner (Hz), looked for from well below the one wanted; 0 where there is none. */
export function cornerNear(gain: (frequency: number) => number, wanted: number): number {
  const near = frequencyAt(gain, Math.SQRT1_2, wanted / 4)
  return (near === wanted / 4 ? frequencyAt(gain, Math.SQRT1_2, wanted / 1e4) : near) ?? 0
}

/**
 * f0 and Q of a section as its own response shows them: f0 where the output lags the input by 90° (more than at 0 Hz),
 * Q the gain there. Null where it does not come to that within a factor of 5 of what is wanted.
 */
export function readSection(
  network: Network,
  section: SectionSpec,
  input: string,
): { f0: number; q: number } | null {
  const ratio = (frequency: number) => {
    const solution = solveAc(network, frequency, { model: 'real' })
    return divideComplex(solution.voltage(section.ref), solution.voltage(input))
  }
  const still = ratio(0)
  const at = (frequency: number) => divideComplex(ratio(frequency), still)
  const { f0 } = section.wanted
  const real = (frequency: number) => at(frequency).re
  let low = f0 / 5
  let high = low
  let [atLow, atHigh] = [0, 1]
  while (high <= 5 * f0 && (atHigh = real(high)) > 0) {
    ;[low, atLow] = [high, atHigh]
    high *= 1.5
  }
  if (atHigh > 0 || high === low) return null
  const found = findCrossing(real, low, high, atLow, atHigh)
  return { f0: found, q: magnitude(at(found)) }
}
