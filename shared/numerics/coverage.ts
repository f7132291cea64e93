/**
 * Coverage of a sum of independent, symmetric quantities about zero (JCGM 101, 5 and 7): rectangular ones and normal
 * ones cut at a limit. Both have bounded support, so that the density of the sum on [−L, L] is a cosine series with the
 * characteristic function at kπ/L as coefficients, exactly; the probability of |X| ≤ x follows term by term:
 *
 *   P(x) = x/L + 2·Σ φ(kπ/L)·sin(kπx/L)/(kπ)
 */

/** A rectangular quantity of half-width `half`, or a normal one of `deviation` cut at `cut` deviations (Infinity: not). */
export type Spread =
  { kind: 'rectangular'; half: number } | { kind: 'normal'; deviation: number; cut: number }

/** Largest value that a quantity takes; for an uncut normal 9 deviations, beyond which 2e-19 lies. */
const reachOf = (s: Spread): number =>
  s.kind === 'rectangular' ? s.half : s.deviation * Math.min(s.cut, UNCUT)

const UNCUT = 9

/** Standard deviation: half/√3, or that of the normal with what lies outside its cut left out. */
export function deviationOf(s: Spread): number {
  return s.kind === 'rectangular' ? s.half / Math.sqrt(3) : s.deviation * cutFactor(s.cut)
}

/** Standard deviation of a standard normal cut at ±c: √(1 − 2c·φ(c)/P(c)). */
export function cutFactor(c: number): number {
  if (c >= UNCUT) return 1
  const known = cutFactors.get(c)
  if (known !== undefined) return known
  const factor = Math.sqrt(1 - (2 * c * density(c)) / normalCoverage(c))
  cutFactors.set(c, factor)
  return factor
}

/** A budget asks for two or three cuts, over and over. */
const cutFactors = new Map<number, number>()

/** Root of the sum of squares of standard deviations. */
export const combinedDeviation = (spreads: readonly Spread[]): number =>
  Math.sqrt(spreads.reduce((sum, s) => sum + deviationOf(s) ** 2, 0))

/** Terms kept exactly; smaller ones together count as one normal. */
const EXACT = 10
const MOST_TERMS = 3000
const SMALLEST_TERM = 1e-7

/**
 * Half-width x with P(|X| ≤ x) = `probability` (0 to 1) of the sum. Good to 1e-4 of the standard deviation; never
 * beyond the sum of limits. 0 for nothing.
 */
export function coverageInterval(spreads: readonly Spread[], probability: number): number {
  const present = spreads
    .filter((s) => reachOf(s) > 0)
    .map((s) => ({ s, deviation: deviationOf(s) }))
    .sort((a, b) => b.deviation - a.deviation)
    .map(({ s }) => s)
  const most = present.reduce((sum, s) => sum + reachOf(s), 0)
  if (present.length === 0 || probability <= 0) return 0
  if (probability >= 1) return most
  const rest = combinedDeviation(present.slice(EXACT))
  const kept = present.slice(0, EXACT)
  if (rest > 0) kept.push({ kind: 'normal', deviation: rest, cut: Infinity })
  const length = kept.reduce((sum, s) => sum + reachOf(s), 0)
  const series = coefficients(kept, length)
  const covered = (x: number): number => {
    // sin(kθ) by recurrence: sin((k+1)θ) = 2cosθ·sin(kθ) − sin((k−1)θ)
    const angle = (Math.PI * x) / length
    const twice = 2 * Math.cos(angle)
    let [before, sine] = [0, Math.sin(angle)]
    let sum = 0
    for (let k = 1; k <= series.length; k++) {
      sum += (series[k - 1]! * sine) / k
      ;[before, sine] = [sine, twice * sine - before]
    }
    return x / length + (2 * sum) / Math.PI
  }
  return Math.min(findCrossing(covered, probability, combinedDeviation(present), length), most)
}

/** φ(kπ/L) for k = 1, 2, … until nothing more comes. */
function coefficients(spreads: readonly Spread[], length: number): number[] {
  const series: number[] = []
  let small = 0
  for (let k = 1; k <= MOST_TERMS && small < 6; k++) {
    const omega = (k * Math.PI) / length
    let product = 1
    for (const s of spreads) {
      product *= characteristic(s, omega)
      if (Math.abs(product) < 1e-12) break
    }
    series.push(product)
    small = Math.abs(product) < SMALLEST_TERM * k ? small + 1 : 0
  }
  return series
}

function characteristic(s: Spread, omega: number): number {
  if (s.kind === 'rectangular') {
    const x = omega * s.half
    return x < 1e-4 ? 1 - (x * x) / 6 : Math.sin(x) / x
  }
  const t = omega * s.deviation
  return s.cut >= UNCUT ? Math.exp((-t * t) / 2) : cutCharacteristic(t, s.cut)
}

/** ∫ cos(tz)·φ(z) dz over ±c, over P(c): Simpson's rule, and far out what is left by parts at the edges. */
function cutCharacteristic(t: number, c: number): number {
  const edge = density(c)
  if (t > 7) return (2 * edge * (Math.sin(t * c) / t - (c * Math.cos(t * c)) / (t * t))) / normalCoverage(c)
  const steps = 32
  const h = c / steps
  let sum = density(0) + edge * Math.cos(t * c)
  for (let i = 1; i < steps; i++) sum += (i % 2 === 1 ? 4 : 2) * density(i * h) * Math.cos(t * i * h)
  return (2 * sum * h) / 3 / normalCoverage(c)
}

/** x with a rising `covered` at `probability`: regula falsi between bounds, bisected where it stalls. */
function findCrossing(
  covered: (x: number) => number,
  probability: number,
  scale: number,
  length: number,
): number {
  let [low, high] = [0, length]
  let [below, above] = [-probability, 1 - probability]
  let x = Math.min(length, scale * normalFactor(probability))
  for (let turn = 0; turn < 60 && high - low > 1e-5 * scale; turn++) {
    const found = covered(x) - probability
    if (found < 0) [low, below] = [x, found]
    else [high, above] = [x, found]
    const secant = low - (below * (high - low)) / (above - below)
    const margin = 0.02 * (high - low)
    const stalled = turn % 3 === 2
    x = stalled ? (low + high) / 2 : Math.min(Math.max(secant, low + margin), high - margin)
  }
  return (low + high) / 2
}

const density = (z: number): number => Math.exp((-z * z) / 2) / Math.sqrt(2 * Math.PI)

/** Probability that a standard normal lies within ±k: erf(k/√2), by its series, beyond 5 by a continued fraction. */
export function normalCoverage(k: number): number {
  const z = Math.abs(k)
  if (z > 5) {
    let fraction = z
    for (let n = 40; n >= 1; n--) fraction = z + n / fraction
    return 1 - (2 * density(z)) / fraction
  }
  let term = z
  let sum = z
  for (let n = 1; n < 120 && term > 1e-17 * sum; n++) {
    term *= (z * z) / (2 * n + 1)
    sum += term
  }
  return 2 * density(z) * sum
}

/** Coverage factor of a normal distribution for a probability between 0 and 1: 1.959964 for 0.95. */
export function normalFactor(probability: number): number {
  if (!(probability > 0)) return 0
  let [low, high] = [0, 9]
  for (let turn = 0; turn < 60; turn++) {
    const middle = (low + high) / 2
    if (normalCoverage(middle) < probability) low = middle
    else high = middle
  }
  return (low + high) / 2
}
