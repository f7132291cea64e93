import { GROUND } from '#shared/network/types.ts'
import type { Network } from '#shared/network/types.ts'
import { prepareExponential } from '#shared/numerics/exponential-steps.ts'
import type { Lu } from '#shared/numerics/lu.ts'
import { factorLu, solveLu } from '#shared/numerics/lu.ts'
import type { System, ValueSet } from './system.ts'
import { assembleSystem, explainSingular, findNode, outputVector } from './system.ts'

/*
 * Time response with all poles of the network (real amplifiers). With (G + s·C)·x = b a step of b gives
 *
 *   x(t) = x∞ − exp(−t·W⁻¹)·x∞,   W = G⁻¹·C,   x∞ = G⁻¹·b
 *
 * Only unknowns that C touches have a memory; they and the output are kept, since the rest follows from them.
 */

/** Answer of the output to a step of the sources' `ac` amplitudes from 0 at t = 0. */
export interface StepResponse {
  /** Where it ends, V. */
  final: number
  /** Output − final at a time, s. V. */
  errorAt(time: number): number
  /** The same at `count` times evenly through an octave, from start to twice start, both included. */
  errorsOver(octave: number, count: number): { time: number; error: number }[]
  /** Start of octave 0, s. Octave k starts 2^k times later. */
  first: number
}

/** Points by which each octave of time is sampled; a power of two. */
const PER_OCTAVE = 64

export interface MotionOptions {
  /** A frequency, Hz, that the motion is known to be slow against: what is 500 times faster is not resolved. */
  pace: number
  set?: ValueSet
}

/**
 * Prepares the step response. Errors are right to 1e-9 of the step from a hundredth of 1/pace on (tests against closed
 * forms); that is below half a code of 28 bits.
 */
export function prepareStep(network: Network, options: MotionOptions): StepResponse {
  const { system, lu } = prepareSystem(network, options)
  return moveFrom(system, lu, {
    start: solveLu(lu, system.ac),
    pick: outputVector(system.index, network.output),
    pace: options.pace,
  })
}

/**
 * How a node comes back to rest (`final` 0) after a charge is put on it at t = 0: `volts` on the capacitance that the
 * network has from it to ground. The sources stand still.
 */
export function prepareRecovery(
  network: Network,
  node: string,
  volts: number,
  options: MotionOptions,
): StepResponse {
  const { system, lu } = prepareSystem(network, options)
  const start = new Float64Array(system.index.size)
  start[findNode(system.index, node)] = volts
  const motion = moveFrom(system, lu, {
    start,
    pick: outputVector(system.index, { p: node, n: GROUND }),
    pace: options.pace,
  })
  return { ...motion, final: 0 }
}

function prepareSystem(network: Network, { set }: MotionOptions): { system: System; lu: Lu } {
  const system = assembleSystem(network, { model: 'real', set })
  const lu = factorLu(system.constant, system.index.size)
  if (lu.sign === 0) throw explainSingular(network, 'real', lu)
  return { system, lu }
}

interface Motion {
  /** Distance of every unknown from its end at t = 0. */
  start: Float64Array
  pick: Float64Array
  pace: number
}

function moveFrom({ index, reactive }: System, lu: Lu, { start: all, pick, pace }: Motion): StepResponse {
  const { size } = index
  const column = (j: number) => Float64Array.from({ length: size }, (_, i) => reactive[i * size + j]!)
  const kept = [...pick.keys()].filter((j) => pick[j] !== 0 || column(j).some((value) => value !== 0))
  const memory = new Float64Array(kept.length ** 2)
  kept.forEach((j, to) => {
    const response = solveLu(lu, column(j))
    kept.forEach((i, from) => {
      memory[from * kept.length + to] = response[i]!
    })
  })
  const shortest = 1e-4 / (2 * Math.PI * pace)
  const steps = prepareExponential(memory, kept.length, shortest)
  const start = Float64Array.from(kept, (i) => all[i]!)
  const weights = kept.map((i) => pick[i]!)
  const read = (state: Float64Array) => -weights.reduce((sum, weight, i) => sum + weight * state[i]!, 0)
  const known = new Map<string, { time: number; error: number }[]>()
  const stateAt = (count: number): Float64Array => {
    let state: Float64Array = start
    for (let level = 0, left = count; left > 0; level++, left = Math.floor(left / 2))
      if (left % 2 === 1) state = steps.advance(state, level)
    return state
  }
  return {
    final: -read(start),
    first: PER_OCTAVE * shortest,
    errorAt(time) {
      const count = Math.floor(time / shortest)
      return read(advancePart(stateAt(count), time / shortest - count, (state) => steps.advance(state, 0)))
    },
    errorsOver(octave, count) {
      const key = `${octave} ${count}`
      const before = known.get(key)
      if (before) return before
      const level = octave + Math.log2(PER_OCTAVE / count)
      const begin = shortest * PER_OCTAVE * 2 ** octave
      let state = steps.advance(start, octave + Math.log2(PER_OCTAVE))
      const found = Array.from({ length: count + 1 }, (_, k) => {
        if (k > 0) state = steps.advance(state, level)
        return { time: begin * (1 + k / count), error: read(state) }
      })
      known.set(key, found)
      return found
    },
  }
}

/**
 * Part of the shortest step: E^θ = (I + D)^θ by its binomial series to the third power. D is of the order of 1e-4 for
 * what moves at the pace of the response, and of what is faster nothing is left after a step.
 */
function advancePart(
  state: Float64Array,
  share: number,
  advance: (state: Float64Array) => Float64Array,
): Float64Array {
  const change = (from: Float64Array) => advance(from).map((value, i) => value - from[i]!)
  const one = change(state)
  const two = change(one)
  const three = change(two)
  const [a, b, c] = [share, (share * (share - 1)) / 2, (share * (share - 1) * (share - 2)) / 6]
  return state.map((value, i) => value + a * one[i]! + b * two[i]! + c * three[i]!)
}

/** Octaves beyond which nothing is waited for: 2^46 times the start, hours even for the fastest chain. */
const LAST_OCTAVE = 46
/** Octaves that must stay inside the band before it counts as settled for good. */
const QUIET = 3

/**
 * Time, s, after which the output stays within ± `band` (V) of its end; null where it never does: the network does not
 * come to rest.
 */
export function findSettling(step: StepResponse, band: number): number | null {
  const leaves = (octave: number) =>
    step.errorsOver(octave, PER_OCTAVE).findLastIndex(({ error }) => !(Math.abs(error) <= band))
  let calm = 0
  let last = -1
  for (let octave = 0; octave < LAST_OCTAVE && calm < QUIET; octave++) {
    const inside = step.errorsOver(octave, PER_OCTAVE / 4).every(({ error }) => Math.abs(error) <= band)
    calm = inside ? calm + 1 : 0
    last = octave
  }
  if (calm < QUIET) return null
  for (let octave = last; octave >= 0; octave--) {
    const at = leaves(octave)
    if (at < 0) continue
    const width = (step.first * 2 ** octave) / PER_OCTAVE
    return refine(step, band, step.first * 2 ** octave + at * width, width)
  }
  return refine(step, band, 0, step.first)
}

/** Halves the interval in which the output enters the band for the last time. */
function refine(step: StepResponse, band: number, from: number, width: number): number {
  let outside = from
  for (let half = width / 2; half > from * 1e-9 && half > step.first * 1e-6; half /= 2)
    if (Math.abs(step.errorAt(outside + half)) > band) outside += half
  return outside
}

/** Largest excursion past the end of the step, as a fraction of it; 0 for none. */
export function findOvershoot(step: StepResponse, until: number): number {
  let most = 0
  for (let octave = 0; octave < LAST_OCTAVE && step.first * 2 ** octave < until; octave++)
    for (const { error } of step.errorsOver(octave, PER_OCTAVE)) most = Math.max(most, error / step.final)
  return most
}
