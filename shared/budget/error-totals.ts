import { coverageInterval, normalFactor, type Spread } from '#shared/numerics/coverage.ts'
import type { BudgetTotal, ErrorState } from '#shared/design/plan.ts'
import { type Term } from './error-terms.ts'

/** Above this share of the variance one term dominates, and k of the normal distribution no longer holds. */
const DOMINANT = 0.25
/** Where k·u comes nearer than this to the sum of limits, the normal distribution reaches too far. */
const NEAR_LIMITS = 0.8
/** Places of which the expanded uncertainty is worked out: those next below in deviation may have the larger factor. */
const RIVALS = 4

/** Terms made smaller or larger, each to so many times its limit. */
export type Change = ReadonlyMap<Term, number>

const unchanged: Change = new Map()

const residualAt = (term: Term, state: ErrorState, place: number): number => term.residuals[state][place] ?? 0

/** Variance of y at every place, V². */
export function variances(terms: readonly Term[], state: ErrorState): Float64Array {
  const list = new Float64Array(terms[0]?.places.length ?? 0)
  for (const term of terms) {
    const residuals = term.residuals[state]
    for (let p = 0; p < list.length; p++) list[p]! += (residuals[p]! * term.deviation) ** 2
  }
  return list
}

/** Sum and root sum of squares of limits, each where it is largest, V. */
export function limitTotals(terms: readonly Term[], state: ErrorState): Pick<BudgetTotal, 'worst' | 'rss'> {
  const count = terms[0]?.places.length ?? 0
  let [worst, rss] = [0, 0]
  for (let p = 0; p < count; p++) {
    let [sum, squares] = [0, 0]
    for (const term of terms) {
      const left = Math.abs(term.residuals[state][p]!) * term.limit
      sum += left
      squares += left * left
    }
    worst = Math.max(worst, sum)
    rss = Math.max(rss, Math.sqrt(squares))
  }
  return { worst, rss }
}

/** Expanded uncertainty at one place: k of the normal where no term dominates, else the quantile of the combination. */
export function expandedOf(
  terms: readonly Term[],
  state: ErrorState,
  place: number,
  coverage: number,
  change: Change = unchanged,
): { expanded: number; standard: number; by: BudgetTotal['coverageBy'] } {
  let [variance, most, limits] = [0, 0, 0]
  for (const term of terms) {
    const left = Math.abs(residualAt(term, state, place)) * (change.get(term) ?? 1)
    const part = (left * term.deviation) ** 2
    variance += part
    most = Math.max(most, part)
    limits += left * term.limit
  }
  const standard = Math.sqrt(variance)
  const normal = normalFactor(coverage) * standard
  if (most <= DOMINANT * variance && normal <= NEAR_LIMITS * limits)
    return { expanded: normal, standard, by: 'normal' }
  const spreads: Spread[] = []
  for (const term of terms) {
    const left = residualAt(term, state, place) * (change.get(term) ?? 1)
    if (left !== 0) spreads.push(term.spread(left))
  }
  return { expanded: coverageInterval(spreads, coverage), standard, by: 'quantile' }
}

/** Place with the largest expanded uncertainty. */
export function worstPoint(terms: readonly Term[], state: ErrorState, coverage: number): number {
  return largestExpanded(terms, state, coverage, variances(terms, state)).place
}

/** The largest expanded uncertainty of all places, by the variances there; `change` as in `expandedOf`. */
export function largestExpanded(
  terms: readonly Term[],
  state: ErrorState,
  coverage: number,
  varianceAt: Float64Array,
  change: Change = unchanged,
): { place: number; expanded: number } {
  const left = varianceAt.slice()
  for (const [term, times] of change) {
    const residuals = term.residuals[state]
    for (let p = 0; p < left.length; p++)
      left[p] = Math.max(0, left[p]! - (residuals[p]! * term.deviation) ** 2 * (1 - times * times))
  }
  // No combination of limited terms needs a larger factor than the normal or the rectangular by more than a little.
  const most = 1.02 * Math.max(normalFactor(coverage), Math.sqrt(3) * coverage)
  let best = { place: 0, expanded: -1 }
  for (let turn = 0; turn < RIVALS; turn++) {
    let place = 0
    for (let p = 1; p < left.length; p++) if (left[p]! > left[place]! * (1 + 1e-9)) place = p
    const variance = left[place] ?? -1
    if (variance < 0 || most * Math.sqrt(variance) <= best.expanded) break
    const { expanded } = expandedOf(terms, state, place, coverage, change)
    if (expanded > best.expanded * (1 + 1e-9)) best = { place, expanded }
    left[place] = -1
  }
  return best
}
