import type { Network } from '#shared/network/types.ts'
import { magnitude, phase } from '#shared/numerics/complex.ts'
import type { Complex } from '#shared/numerics/complex.ts'
import type { LoopOptions } from './ac.ts'
import { openLoop } from './ac.ts'

/** Where the loop of an amplifier last has a gain of one. */
export interface Crossover {
  /** Hz */
  frequency: number
  /** Degrees. Negative: the loop turns further than half a turn, and oscillates. */
  phaseMargin: number
}

const POINTS_PER_DECADE = 8
/** Lowest frequency at which a loop of one is looked for, Hz. */
const LOWEST = 1e-2
const DEGREES = 180 / Math.PI

/**
 * Highest frequency at which |T| = 1, and the phase margin there; null where the loop gain is below one at every
 * frequency. Looked for downward from 100 times the gain-bandwidth product, where no amplifier has gain left.
 */
export function findCrossover(network: Network, ref: string, options: LoopOptions = {}): Crossover | null {
  const loop = openLoop(network, ref, options)
  const size = (frequency: number) => magnitude(loop(frequency))
  const ratio = 10 ** (1 / POINTS_PER_DECADE)
  let high = startOf(network, ref)
  let above = size(high)
  if (above >= 1) return null
  while (high > LOWEST) {
    const low = high / ratio
    const below = size(low)
    if (below >= 1) return refine(loop, { low, high, below, above })
    high = low
    above = below
  }
  return null
}

/**
 * The same near a frequency at which it is known for nearly the same values: tolerances move it by little. Falls back
 * on the whole search.
 */
export function findCrossoverNear(
  network: Network,
  ref: string,
  near: number,
  options: LoopOptions = {},
): Crossover | null {
  const loop = openLoop(network, ref, options)
  const [low, high] = [near / 1.5, near * 1.5]
  const [below, above] = [magnitude(loop(low)), magnitude(loop(high))]
  if (below >= 1 && above < 1) return refine(loop, { low, high, below, above })
  return findCrossover(network, ref, options)
}

function startOf(network: Network, ref: string): number {
  const element = network.elements.find((e) => e.ref === ref)
  return 100 * (element?.kind === 'amplifier' ? element.part.gbw : 1e7)
}

interface Bracket {
  low: number
  high: number
  /** |T| at the two, ≥ 1 and < 1. */
  below: number
  above: number
}

/** False position on ln|T| over ln f, which is nearly straight (Illinois variant, so that both ends move). */
function refine(loop: (frequency: number) => Complex, bracket: Bracket): Crossover {
  let [x0, x1] = [Math.log(bracket.low), Math.log(bracket.high)]
  let [y0, y1] = [Math.log(bracket.below), Math.log(bracket.above)]
  let side = 0
  let gain = loop(bracket.low)
  let at = x0
  for (let turn = 0; turn < 40; turn++) {
    at = y0 === y1 ? x0 : (x0 * y1 - x1 * y0) / (y1 - y0)
    gain = loop(Math.exp(at))
    const y = Math.log(magnitude(gain))
    if (Math.abs(y) < 1e-9 || x1 - x0 < 1e-12) break
    if (y > 0) {
      x0 = at
      y0 = y
      if (side === 1) y1 /= 2
      side = 1
    } else {
      x1 = at
      y1 = y
      if (side === -1) y0 /= 2
      side = -1
    }
  }
  return { frequency: Math.exp(at), phaseMargin: marginOf(gain) }
}

/** A loop that turns past half a turn reads as a lead; more than a right angle of lead is taken for such a lag. */
function marginOf(gain: Complex): number {
  const turned = phase(gain) * DEGREES
  return turned > 90 ? turned - 180 : 180 + turned
}
