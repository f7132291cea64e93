import type { FilterResponse } from '#shared/design/plan.ts'
import {
  addComplex,
  complex,
  divideComplex,
  magnitude,
  multiplyComplex,
  subtractComplex,
} from '#shared/numerics/complex.ts'
import type { Complex } from '#shared/numerics/complex.ts'

/*
 * Low-pass prototypes from their poles. All are normalised in one way: |H| is 1/√2 of its value at 0 Hz at a frequency
 * of 1. For Chebyshev that is not the edge of the ripple, which most tables put at 1.
 */

/** Ripple of the Chebyshev response in its pass band, dB. */
export const CHEBYSHEV_RIPPLE = 0.5

export const MOST_POLES = 6

export const responses = ['butterworth', 'bessel', 'chebyshev'] as const satisfies readonly FilterResponse[]

/** As people write them. */
export const responseNames: Record<FilterResponse, string> = {
  butterworth: 'Butterworth',
  bessel: 'Bessel',
  chebyshev: 'Chebyshev',
}

/** A pair of poles, or a real one where `q` is null. `f0` relative to the −3 dB corner. */
export interface PoleSection {
  f0: number
  q: number | null
}

const known = new Map<string, readonly PoleSection[]>()

/**
 * Sections of a response, the real pole first, then by rising Q. Sources: Butterworth, Wireless Engineer 7 (1930);
 * Thomson, Proc. IEE 96 (1949), reverse Bessel polynomials; Chebyshev polynomials of the first kind, gain 1 at 0 Hz.
 *
 * @throws RangeError unless the order is a whole number from 1 to 6
 */
export function prototypeSections(
  response: FilterResponse,
  order: number,
  ripple = CHEBYSHEV_RIPPLE,
): readonly PoleSection[] {
  if (!(Number.isInteger(order) && order >= 1 && order <= MOST_POLES))
    throw new RangeError(`A filter has 1 to ${MOST_POLES} poles, not ${order}`)
  const key = `${response} ${order} ${ripple}`
  const found = known.get(key)
  if (found) return found
  const poles = polesOf(response, order, ripple)
  const sections = poles
    .filter((p) => p.im >= -1e-9 * magnitude(p))
    .map((p): PoleSection => {
      const f0 = magnitude(p)
      return Math.abs(p.im) < 1e-9 * f0 ? { f0, q: null } : { f0, q: -f0 / (2 * p.re) }
    })
    .sort((a, b) => (a.q ?? 0) - (b.q ?? 0))
  known.set(key, sections)
  return sections
}

function polesOf(response: FilterResponse, order: number, ripple: number): Complex[] {
  const angles = Array.from({ length: order }, (_, k) => ((2 * k + 1) * Math.PI) / (2 * order))
  if (response === 'butterworth')
    return angles.map((a) => exact({ re: -Math.sin(a), im: Math.cos(a) }, order))
  if (response === 'bessel') return besselPoles(order)
  const square = 10 ** (ripple / 10) - 1
  const width = Math.asinh(1 / Math.sqrt(square)) / order
  // |H|² = 1/(1 + ε²T²), at 0 Hz 1/(1 + ε²) for an even order; half of that where T² is this.
  const half = order % 2 === 0 ? (1 + 2 * square) / square : 1 / square
  const corner = Math.cosh(Math.acosh(Math.sqrt(half)) / order)
  return angles.map((a) =>
    exact(
      { re: (-Math.sinh(width) * Math.sin(a)) / corner, im: (Math.cosh(width) * Math.cos(a)) / corner },
      order,
    ),
  )
}

/** The middle pole of an odd order is real; cos(π/2) leaves a rounding. */
const exact = (pole: Complex, order: number): Complex =>
  order % 2 === 1 && Math.abs(pole.im) < 1e-12 ? complex(pole.re) : pole

/** Roots of the reverse Bessel polynomial Σ (2n−k)!/(2^(n−k)·k!·(n−k)!)·s^k, scaled to a corner of 1. */
function besselPoles(order: number): Complex[] {
  const factorial = (n: number): number => (n <= 1 ? 1 : n * factorial(n - 1))
  const coefficients = Array.from(
    { length: order + 1 },
    (_, k) => factorial(2 * order - k) / (2 ** (order - k) * factorial(k) * factorial(order - k)),
  )
  const roots = rootsOf(coefficients)
  const atZero = roots.reduce((product, p) => product * magnitude(p), 1)
  const gain = (w: number) => atZero / roots.reduce((product, p) => product * Math.hypot(p.re, w - p.im), 1)
  let [low, high] = [0, 16]
  for (let i = 0; i < 80; i++) {
    const middle = (low + high) / 2
    if (gain(middle) > Math.SQRT1_2) low = middle
    else high = middle
  }
  return roots.map((p) => ({ re: p.re / low, im: p.im / low }))
}

/** All roots of a real polynomial (coefficients from the constant up, the last 1), all at once (Weierstrass 1891). */
function rootsOf(coefficients: readonly number[]): Complex[] {
  const order = coefficients.length - 1
  const radius = Math.abs(coefficients[0] ?? 1) ** (1 / order)
  const roots = Array.from({ length: order }, (_, k) => {
    const angle = (2 * Math.PI * k) / order + 0.4
    return { re: radius * Math.cos(angle), im: radius * Math.sin(angle) }
  })
  const value = (s: Complex) =>
    coefficients.reduceRight<Complex>((sum, c) => addComplex(multiplyComplex(sum, s), complex(c)), complex(0))
  for (let turn = 0; turn < 200; turn++)
    roots.forEach((root, i) => {
      const others = roots.reduce<Complex>(
        (product, other, j) => (j === i ? product : multiplyComplex(product, subtractComplex(root, other))),
        complex(1),
      )
      roots[i] = subtractComplex(root, divideComplex(value(root), others))
    })
  return roots.map((r) => (Math.abs(r.im) < 1e-9 * magnitude(r) ? complex(r.re) : r))
}

/** |H| of sections at a frequency, both in the same unit; 1 at 0. */
export function sectionsGain(sections: readonly PoleSection[], frequency: number): number {
  return sections.reduce((gain, { f0, q }) => gain * sectionGain(f0, q, frequency), 1)
}

/** |H| of one section, 1 at 0. */
export function sectionGain(f0: number, q: number | null, frequency: number): number {
  const ratio = frequency / f0
  return q === null ? 1 / Math.hypot(1, ratio) : 1 / Math.hypot(1 - ratio * ratio, ratio / q)
}

/** Attenuation at a frequency, dB, relative to 0 Hz; negative where the response peaks. */
export const toDb = (gain: number): number => -20 * Math.log10(gain)

/**
 * Lowest corner (Hz) of a response with which amplitudes up to `bandwidth` (Hz) differ by no more than `loss` (fraction)
 * from that at 0 Hz.
 */
export function cornerFor(response: FilterResponse, order: number, bandwidth: number, loss: number): number {
  const sections = prototypeSections(response, order)
  const fits = (ratio: number) => Math.abs(sectionsGain(sections, ratio) - 1) <= loss
  let low = 0
  let high = 1
  // The first place at which the loss is exceeded: the response may come back to it.
  for (let i = 1; i <= 400; i++)
    if (!fits(i / 400)) {
      low = (i - 1) / 400
      high = i / 400
      break
    }
  for (let i = 0; i < 60; i++) {
    const middle = (low + high) / 2
    if (fits(middle)) low = middle
    else high = middle
  }
  return bandwidth / low
}
