import type { ComplexVector } from './complex-lu.ts'
import { factorComplexLu, solveComplexLu } from './complex-lu.ts'
import { factorLu, solveLu } from './lu.ts'

/*
 * exp(−t·W⁻¹) applied to a vector, for a real matrix W that may be singular (directions without memory) and stiff. One
 * step is the rational approximation of exp by 2 over 3 with which the Radau IIA method advances: exact to the fifth
 * order, and 0 for what is infinitely fast. Longer steps by squaring, E → E², on D = E − I, so that what is slow keeps
 * all its digits. In partial fractions, with p the poles of R(z) = Σ c/(z − p):
 *
 *   D = Σ (c/p)·(I + p·W/h)⁻¹
 *
 * Sources: Hairer and Wanner, Solving Ordinary Differential Equations II, IV.5 and IV.8; Higham, Functions of Matrices,
 * chapter 10 (scaling and squaring).
 */

/** Poles of R: roots of 1 − 3z/5 + 3z²/20 − z³/60. */
const REAL_POLE = 3.637834252744496
const PAIR = { re: 2.681082873627752, im: 3.0504301992474105 }

export interface ExponentialSteps {
  size: number
  /** Time of the shortest step; the others are 2, 4, 8 … times as long. */
  shortest: number
  /** Advances the vector by shortest·2^level. */
  advance(vector: Float64Array, level: number): Float64Array
}

/** Prepares steps for W (size × size, row-major). Steps much shorter than the fastest motion of interest are exact. */
export function prepareExponential(matrix: Float64Array, size: number, shortest: number): ExponentialSteps {
  const levels = [firstStep(matrix, size, shortest)]
  const at = (level: number): Float64Array => {
    for (let k = levels.length; k <= level; k++) levels.push(doubled(levels[k - 1]!, size))
    return levels[level]!
  }
  return {
    size,
    shortest,
    advance(vector, level) {
      const d = at(level)
      const next = vector.slice()
      for (let i = 0; i < size; i++) {
        let sum = 0
        for (let j = 0; j < size; j++) sum += d[i * size + j]! * vector[j]!
        next[i]! += sum
      }
      return next
    },
  }
}

/** c/p with c = P(p)/Q′(p), P = 1 + 2z/5 + z²/20. */
function weightOf(re: number, im: number): { re: number; im: number } {
  const square = { re: re * re - im * im, im: 2 * re * im }
  const top = { re: 1 + 0.4 * re + 0.05 * square.re, im: 0.4 * im + 0.05 * square.im }
  const slope = { re: -0.6 + 0.3 * re - 0.05 * square.re, im: 0.3 * im - 0.05 * square.im }
  const bottom = { re: slope.re * re - slope.im * im, im: slope.re * im + slope.im * re }
  const size = bottom.re ** 2 + bottom.im ** 2
  return {
    re: (top.re * bottom.re + top.im * bottom.im) / size,
    im: (top.im * bottom.re - top.re * bottom.im) / size,
  }
}

function firstStep(matrix: Float64Array, size: number, step: number): Float64Array {
  const shifted = (factor: number): Float64Array => matrix.map((value) => (factor * value) / step)
  const withUnit = (a: Float64Array): Float64Array => {
    for (let i = 0; i < size; i++) a[i * size + i]! += 1
    return a
  }
  const real = factorLu(withUnit(shifted(REAL_POLE)), size)
  const pair: ComplexVector = { re: withUnit(shifted(PAIR.re)), im: shifted(PAIR.im) }
  const complex = factorComplexLu(pair, size)
  const [one, two] = [weightOf(REAL_POLE, 0).re, weightOf(PAIR.re, PAIR.im)]
  const d = new Float64Array(size * size)
  for (let j = 0; j < size; j++) {
    const unit = new Float64Array(size)
    unit[j] = 1
    const x = solveLu(real, unit)
    const z = solveComplexLu(complex, { re: unit, im: new Float64Array(size) })
    // a pole and its conjugate: twice the real part
    for (let i = 0; i < size; i++) d[i * size + j] = one * x[i]! + 2 * (two.re * z.re[i]! - two.im * z.im[i]!)
  }
  return d
}

/** (I + D)² − I = 2D + D². */
function doubled(d: Float64Array, size: number): Float64Array {
  const next = d.map((value) => 2 * value)
  for (let i = 0; i < size; i++)
    for (let k = 0; k < size; k++) {
      const factor = d[i * size + k]!
      if (factor === 0) continue
      for (let j = 0; j < size; j++) next[i * size + j]! += factor * d[k * size + j]!
    }
  return next
}
