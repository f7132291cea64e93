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
  const found = lines
    .filter((line) => line.share > 0)
    .slice(0, MOST)
    .flatMap((line): Found[] => {
      const term = terms.find(({ id }) => id === line.id)
      if (!term) return []
      const needed = findNeeded((times) => totalWith(new Map([[term, times]])), total, wanted)
      const part = findPart(line, terms, term, totalWith, wanted, needed.ok ? needed.times : 1)
      return [{ line, aim, needed: needed.ok ? needed.times * line.limit : null, after: needed.after, part }]
    })
  return merged(found).map(([first, ...others]) => ({
    ...first,
    line: first.line.id,
    text: others.length === 0 ? wordsFor(first) : wordsForAll([first, ...others]),
  }))
}

/** What was found for a line, before its words. */
type Found = Omit<Improvement, 'line' | 'text'> & { line: BudgetLine }
type Group = [first: Found, ...others: Found[]]

/** Lines of which none alone would do and that one class of parts cures stand together, where the first of them stood. */
function merged(list: readonly Found[]): Group[] {
  const groups: Group[] = []
  for (const one of list) {
    const { part, needed } = one
    const same = groups.find(
      ([first]) =>
        part !== null && needed === null && first.needed === null && first.part?.name === part.name,
    )
    if (same) same.push(one)
    else groups.push([one])
  }
  return groups
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

const purposeOf = ({ aim }: Found): string => (aim === 'target' ? 'meet the target' : 'halve the total')

/** `Rf, Rg and R2 over temperature, Rf tolerance`: parts of which the same is said stand together. */
function namesOf(lines: readonly BudgetLine[]): string {
  const sources = new Map<string, string[]>()
  for (const { label, source } of lines) {
    const own = label.startsWith(`${source} `)
    const said = own ? label.slice(source.length) : label
    const before = sources.get(said)
    if (own) sources.set(said, [...(before ?? []), source])
    else sources.set(said, [])
  }
  return [...sources].map(([said, parts]) => listed(parts) + said).join(', ')
}

/** `a, b and c`. */
const listed = (words: readonly string[]): string =>
  words.length < 2 ? words.join('') : `${words.slice(0, -1).join(', ')} and ${words.at(-1) ?? ''}`

const wordsForAll = (group: Group): string =>
  `${namesOf(group.map(({ line }) => line))}: none alone would ${purposeOf(group[0])}; with the class ${group[0].part?.name ?? ''} throughout they would`

function wordsFor(found: Found): string {
  const { line } = found
  const purpose = purposeOf(found)
  const limits =
    found.needed === null
      ? `even without it the rest would not ${purpose}`
      : `±${limitWords(found.needed, line.unit)} instead of ±${limitWords(line.limit, line.unit)} would ${purpose}`
  const part = found.part ? `; with the class ${found.part.name} throughout it would` : ''
  const none =
    found.needed !== null && !found.part && line.path !== null ? '; no class of parts here does' : ''
  return `${line.label}: ${limits}${part}${none}`
}
