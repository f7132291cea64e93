import type { Budget, BudgetLine, ErrorState, Improvement } from '#shared/design/plan.ts'
import { classesFor, limitFor } from '#shared/parts/classes.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import type { Term } from './error-terms.ts'
import { largestExpanded, variances, type Change } from './error-totals.ts'

/** Lines that are looked at. */
const MOST = 5
/** How near to the aim the total has to come, as a share of it. */
const CLOSE = 1e-4

/**
 * For each of the largest lines: the limit with which, all else as it is, the target would be met, or where it is met or
 * none is stated the total would halve; and the loosest class of parts with which it would, all figures of that class put
 * in place of the design's, in every part it applies to.
 */
export function proposeImprovements(
  lines: readonly BudgetLine[],
  terms: readonly Term[],
  state: ErrorState,
  coverage: number,
  total: number,
  target: Budget['target'],
): Improvement[] {
  const missed = target !== null && !target.met
  const wanted = missed ? target.limit : total / 2
  const aim: Improvement['aim'] = missed ? 'target' : 'half'
  const variance = variances(terms, state)
  const totalWith = (change: Change): number =>
    largestExpanded(terms, state, coverage, variance, change).expanded
  return lines
    .filter((line) => line.share > 0)
    .slice(0, MOST)
    .flatMap((line): Improvement[] => {
      const term = terms.find(({ id }) => id === line.id)
      if (!term) return []
      const needed = findNeeded((times) => totalWith(new Map([[term, times]])), total, wanted)
      const found = {
        line: line.id,
        aim,
        needed: needed.ok ? needed.times * line.limit : null,
        after: needed.after,
        part: findPart(line, terms, term, totalWith, wanted, needed.ok ? needed.times : 1),
      }
      return [{ ...found, text: wordsFor(line, found) }]
    })
}

/** Share of its limit at which the total comes down to what is wanted; not `ok` where not even 0 does it. */
function findNeeded(
  after: (times: number) => number,
  total: number,
  wanted: number,
): { ok: boolean; times: number; after: number } {
  const least = after(0)
  if (least > wanted) return { ok: false, times: 0, after: least }
  // The square of the total is nearly straight in the square of the limit: regula falsi on squares ends in a few turns.
  let [low, high] = [0, 1]
  let [below, above] = [least ** 2, total ** 2]
  let best = { times: 0, after: least }
  for (let turn = 0; turn < 12 && best.after < wanted * (1 - CLOSE); turn++) {
    const share = (wanted ** 2 - below) / (above - below)
    const square = low + (high - low) * Math.min(Math.max(share, 0.01), 0.99)
    const found = after(Math.sqrt(square))
    if (found <= wanted) {
      best = { times: Math.sqrt(square), after: found }
      ;[low, below] = [square, found ** 2]
    } else [high, above] = [square, found ** 2]
  }
  return { ok: true, ...best }
}

/** The loosest class that keeps `times` the line's limit and brings the total down to what is wanted. */
function findPart(
  line: BudgetLine,
  terms: readonly Term[],
  term: Term,
  totalWith: (change: Change) => number,
  wanted: number,
  times: number,
): Improvement['part'] {
  if (term.path === null) return null
  const family = familyOf(term.path)
  for (const { part, limit } of classesFor(term.path)) {
    if (limit > term.limit * times * (1 + 1e-9)) continue
    const change = new Map<Term, number>()
    for (const other of terms) {
      const stated =
        other.path !== null && familyOf(other.path) === family ? limitFor(part, other.path) : undefined
      if (stated !== undefined) change.set(other, stated / other.limit)
    }
    const after = totalWith(change)
    if (after <= wanted) return { name: part.name, limit: (limit / term.limit) * line.limit, after }
  }
  return null
}

/** Fields of one part stand under one key: `parts.resistors`. */
const familyOf = (path: string): string => path.slice(0, path.lastIndexOf('.'))

/** A limit as people read it: fractions as percent, everything else in its unit. */
const limitWords = (limit: number, unit: string): string =>
  unit === ''
    ? formatQuantity(limit, '', { digits: 2, display: 'percent', rounding: 'down' })
    : formatQuantity(limit, unit, { digits: 2, rounding: 'down' })

function wordsFor(line: BudgetLine, found: Omit<Improvement, 'text'>): string {
  const purpose = found.aim === 'target' ? 'meet the target' : 'halve the total'
  const limits =
    found.needed === null
      ? `even without it the rest would not ${purpose}`
      : `±${limitWords(found.needed, line.unit)} instead of ±${limitWords(line.limit, line.unit)} would ${purpose}`
  const part = found.part ? `; with the class ${found.part.name} throughout it would` : ''
  const none =
    found.needed !== null && !found.part && line.path !== null ? '; no class of parts here does' : ''
  return `${line.label}: ${limits}${part}${none}`
}
