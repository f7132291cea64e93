import { partsCost } from './cost.ts'
import { toleranceError, type SectionKind, type SectionValues } from './section-values.ts'

/*
 * Standard values of a section, picked exactly. For two capacitors, Q within ±ε bounds x = √(B/A) to one interval on
 * each side of its turning point, f0 within ±ε bounds A·B: the resistors that can do are a few neighbours in their
 * lists. Each hit lowers ε to its own error; what is left is the global optimum over the lists.
 */

export interface SectionRequest {
  kind: SectionKind
  f0: number
  q: number
  /** Allowed values, ascending, Ω and F. A holds R1 of a sallen-key section, R3 of the other. */
  lists: { A: readonly number[]; B: readonly number[]; C1: readonly number[]; C2: readonly number[] }
  /** R3/R1 of a multiple-feedback section. */
  gain: number
  tolerance: { resistor: number; capacitor: number }
  /** Ω */
  preferred: number
}

export interface SectionPick {
  values: SectionValues
  /** max(|Δf0/f0|, |ΔQ/Q|). */
  error: number
  /** The smallest error possible over the lists. */
  optimum: number
}

type Hit = [A: number, B: number, C1: number, C2: number]

/** Errors at which the search begins, and beyond which free lists are said not to reach the section. */
const FIRST_ERROR = 1e-3
const MOST_ERROR = 0.3
const ROUNDING = 1e-11
/** Sets of the same product in other decades differ by a rounding: their errors are one, fraction. */
const SAME = 1e-9

/**
 * The cheapest set no worse than max(smallest error possible, a tenth of what tolerances do); null where no set comes
 * within 30 % (lists of several values) or at all. Ties fall to the smaller value in the order A, B, C1, C2, but of a
 * sallen-key section's two resistors from one list the larger stands first: less passes it around the amplifier.
 */
export function pickSection(request: SectionRequest): SectionPick | null {
  const { lists } = request
  const free = Object.values(lists).every((list) => list.length > 1)
  let best: { hit: Hit; error: number } | null = null
  for (let limit = FIRST_ERROR; best === null; limit *= 4) {
    search(request, limit, always, (hit, error) => {
      if (best === null || error < best.error) best = { hit, error }
      return error
    })
    if (free && limit > MOST_ERROR) break
    if (limit > 1e15) break
  }
  // The closure above hides the assignment from the compiler.
  const found = best as { hit: Hit; error: number } | null
  if (!found) return null
  const optimum = found.error
  const allowed =
    (1 + SAME) * Math.max(optimum, toleranceError(valuesOf(request, found.hit), request.tolerance) / 10)
  const price = partsCost(request.preferred)
  const costOf = ([A, B, C1, C2]: Hit, of: number) => price([A, B], [C1, C2], { of, allowed })
  let taken = { hit: found.hit, error: optimum, cost: costOf(found.hit, optimum) }
  // What costs more than the set taken before it is complete needs no further parts.
  const exact = { of: 0, allowed }
  const worth = (C1: number, C2: number, A?: number) =>
    price(A === undefined ? [] : [A], [C1, C2], exact) <= taken.cost + 1e-5
  search(request, allowed, worth, (hit, error) => {
    const cost = costOf(hit, error)
    if (cost < taken.cost || (cost === taken.cost && isBefore(hit, taken.hit))) taken = { hit, error, cost }
    return allowed
  })
  return { values: valuesOf(request, taken.hit), error: taken.error, optimum }
}

const isBefore = (a: Hit, b: Hit): boolean => {
  for (let i = 0; i < 4; i++) if (a[i] !== b[i]) return a[i]! < b[i]!
  return false
}

function valuesOf({ kind, gain }: SectionRequest, [A, B, C1, C2]: Hit): SectionValues {
  return kind === 'sallen-key' ? { R1: A, R2: B, C1, C2 } : { R1: A / gain, R2: B, R3: A, C1, C2 }
}

const always = () => true

/**
 * Visits every set with an error of at most `limit` whose parts are `worth` it; `onHit` answers the limit that holds
 * from there on.
 */
function search(
  request: SectionRequest,
  limit: number,
  worth: (C1: number, C2: number, A?: number) => boolean,
  onHit: (hit: Hit, error: number) => number,
): void {
  const { kind, f0, q, lists } = request
  const m = kind === 'sallen-key' ? 1 : 1 + request.gain
  const turning = 2 * Math.sqrt(m)
  // From one list both orders of two resistors do the same: the larger first.
  const oneSide = kind === 'sallen-key' && lists.A === lists.B
  let e = limit
  for (const C1 of lists.C1)
    for (const C2 of lists.C2) {
      const wide = e * (1 + ROUNDING) + ROUNDING
      const most = 1 - wide > 0 ? 1 / (1 - wide) : Infinity
      const root = Math.sqrt(C1 / C2) / q
      const gHigh = root * most
      if (gHigh < turning || !worth(C1, C2)) continue
      const gLow = Math.max(root / (1 + wide), turning)
      const product = 1 / ((2 * Math.PI * f0) ** 2 * C1 * C2)
      const pLow = product / (1 + wide) ** 2
      const pHigh = product * most * most
      const far = Math.sqrt(Math.max(0, gLow * gLow - 4 * m))
      const wideFar = Math.sqrt(Math.max(0, gHigh * gHigh - 4 * m))
      const sides: [number, number][] = [
        [Number.isFinite(gHigh) ? 2 / (gHigh + wideFar) : 0, 2 / (gLow + far)],
      ]
      if (!oneSide) sides.push([(gLow + far) / (2 * m), (gHigh + wideFar) / (2 * m)])
      for (const [xLow, xHigh] of sides) {
        const aLow = (Math.sqrt(pLow) / xHigh) * (1 - ROUNDING)
        const aHigh = (xLow > 0 ? Math.sqrt(pHigh) / xLow : Infinity) * (1 + ROUNDING)
        for (let i = firstAtLeast(lists.A, aLow); i < lists.A.length; i++) {
          const A = lists.A[i]!
          if (A > aHigh) break
          if (!worth(C1, C2, A)) continue
          const bLow = Math.max(pLow / A, xLow * xLow * A) * (1 - ROUNDING)
          const bHigh = Math.min(pHigh / A, xHigh * xHigh * A) * (1 + ROUNDING)
          for (let j = firstAtLeast(lists.B, bLow); j < lists.B.length; j++) {
            const B = lists.B[j]!
            if (B > bHigh) break
            // The formulas of `sectionOf`, written out: this is the innermost place.
            const x = Math.sqrt(B / A)
            const offQ = Math.abs(root / (m * x + 1 / x) - 1)
            const offF = Math.abs(Math.sqrt(product / (A * B)) - 1)
            const error = Math.max(offQ, offF)
            if (error <= e) e = onHit([A, B, C1, C2], error)
          }
        }
      }
    }
}

/** Index of the first member not below a bound; the length where there is none. */
function firstAtLeast(list: readonly number[], bound: number): number {
  let [low, high] = [0, list.length]
  while (low < high) {
    const middle = (low + high) >> 1
    if (list[middle]! < bound) low = middle + 1
    else high = middle
  }
  return low
}
