import { formRefs, type ValueForm } from './forms.ts'
import { pairAllowed, type PairBounds, type PairTable, pairTable, priceTable } from './pair-table.ts'
import { type Beta, type PairLegs, toProblem } from './problem.ts'
import type { PairLimit } from './request.ts'
import type { BetaTask, Task } from './search.ts'
import type { Members, Slots } from './short-list.ts'
import type { SortedIndex } from './sorted-index.ts'
import { listCosts, partOf, toValueList, type ValueList } from './value-list.ts'

/** A form with its allowed values, ready to be searched for any target. */
export interface Prepared {
  task: Task
  /** Demands on two resistors that no pair of the search can take care of. */
  allows: ((values: readonly number[]) => boolean) | null
  /** True where a person fixed every value. */
  fixed: boolean
  /** The n-th smallest error is of this order times √n with two free ratios (knobs), times n with one; of the span. */
  grain: number
  knobs: 1 | 2
}

/**
 * Puts form, allowed values and demands into the shape of the search. Null where no pair of values is allowed.
 *
 * @throws RangeError where a resistor of the form has no list, or a demand names a resistor that the form has not
 */
export function prepare(
  form: ValueForm,
  lists: Record<string, readonly number[]>,
  limits: readonly PairLimit[],
  preferred: number,
): Prepared | null {
  const refs = formRefs(form)
  for (const limit of limits) {
    const stray = limit.refs.find((ref) => !refs.includes(ref))
    if (stray !== undefined) throw new RangeError(`A demand names ${stray}, which the arrangement has not`)
  }
  const { alpha, beta, lines, ideal } = toProblem(form)
  const all: ValueList[] = []
  for (const ref of refs) all.push(allowedValues(form, ref, lists[ref]))
  const across = limits.filter((limit) => !isPair(limit, alpha) && !isPair(limit, secondPair(beta)))
  for (const limit of across) if (!narrow(all, refs, limit)) return null
  const combinations = all.reduce((product, list) => product * list.values.length, 1)
  if (combinations === 0) return null
  all.push(constantOf(alpha, beta), NOTHING)
  const places = new Places(refs, all, preferred)

  const firstBounds = boundsOf(limits, alpha)
  const first = alpha ? places.pair(alpha, firstBounds, isPlain(alpha)) : places.nothing()
  const second = places.beta(beta, limits, alpha !== null)
  if (!first || !second) return null
  return {
    task: {
      slots: places.slots,
      lines,
      ideal,
      first: {
        ...first.members,
        above: alpha?.above ?? 0,
        below: alpha?.below ?? 0,
        bounds: firstBounds,
        table: first.table,
      },
      hasFirst: alpha !== null,
      second: second.members,
      beta: second.task,
    },
    allows: across.length > 0 ? crossCheck(refs, across) : null,
    fixed: refs.every((ref) => lists[ref]?.length === 1),
    grain: GRAIN[beta.kind] / combinations ** (alpha ? 0.5 : 1),
    knobs: alpha ? 2 : 1,
  }
}

/** The resistor inside a part that a pair is made with, if there is one. */
function constantOf(alpha: PairLegs | null, beta: Beta): ValueList {
  if (alpha && typeof alpha.upper === 'number') return toValueList([alpha.upper])
  if (beta.kind === 'pair' && typeof beta.legs.upper === 'number') return toValueList([beta.legs.upper])
  return NOTHING
}

/** Finds slots by ref and tables by pair. */
class Places {
  readonly slots: Slots
  private readonly constant: number
  private readonly none: number

  constructor(
    refs: readonly string[],
    private readonly lists: readonly ValueList[],
    preferred: number,
  ) {
    this.constant = refs.length
    this.none = refs.length + 1
    const values: Float64Array[] = []
    const indices: SortedIndex[] = []
    const costs: Float64Array[] = []
    for (const list of lists) {
      values.push(list.values)
      indices.push(list.index)
      // What stands for no part costs nothing.
      costs.push(costs.length < refs.length ? listCosts(list, preferred) : FREE)
    }
    this.slots = { refs, values, indices, costs }
  }

  nothing(): { members: Members; table: null } {
    return { members: untabled(this.none, this.none), table: null }
  }

  /** Members of a pair: those of its table, or a place for one at a time. Null where the bounds leave no pair. */
  pair(
    legs: PairLegs,
    bounds: PairBounds | null,
    tabled: boolean,
  ): { members: Members; table: PairTable | null } | null {
    const upperSlot = this.slotOf(legs.upper)
    const lowerSlot = this.slotOf(legs.lower)
    const [upper, lower] = [this.lists[upperSlot] as ValueList, this.lists[lowerSlot] as ValueList]
    if (!tabled) {
      if (bounds && !anyAllowed(upper, lower, bounds)) return null
      return { members: untabled(upperSlot, lowerSlot), table: null }
    }
    const table = pairTable(upper, lower, legs.above, legs.below, bounds)
    if (table.ratios.length === 0) return null
    priceTable(
      table,
      this.slots.costs[upperSlot] as Float64Array,
      this.slots.costs[lowerSlot] as Float64Array,
    )
    return { members: { upperSlot, lowerSlot, upper: table.upper, lower: table.lower }, table }
  }

  beta(
    beta: Beta,
    limits: readonly PairLimit[],
    hasFirst: boolean,
  ): { members: Members; task: BetaTask } | null {
    if (beta.kind === 'shared') {
      const { own, series, divider } = beta
      const members = untabled(this.none, this.slotOf(beta.ref))
      return { members, task: { kind: 'shared', own, series, divider } }
    }
    if (beta.kind === 'loaded') {
      const bounds = boundsOf(limits, beta)
      const found = this.pair({ upper: beta.upper, lower: beta.lower, above: 0, below: 0 }, bounds, false)
      return found && { members: found.members, task: { kind: 'loaded', bounds } }
    }
    const { legs, divider, f0, f1 } = beta
    const bounds = boundsOf(limits, legs)
    // Beside a first pair the second is asked thousands of times: its table pays even with a series resistance.
    const found = this.pair(legs, bounds, hasFirst || isPlain(legs))
    if (!found) return null
    const task: BetaTask = found.table
      ? { kind: 'table', table: found.table, divider, f0, f1 }
      : { kind: 'legs', above: legs.above, below: legs.below, divider, f0, f1, bounds }
    return { members: found.members, task }
  }

  private slotOf(leg: string | number): number {
    return typeof leg === 'number' ? this.constant : this.slots.refs.indexOf(leg)
  }
}

/** Where the first few picks were found to lie; a search that starts elsewhere only takes longer. */
const GRAIN = { pair: 60, loaded: 60, shared: 12 } as const
const NOTHING = toValueList([Infinity])
const FREE = new Float64Array(1)

/** The ratio is one of the resistors alone, so that one table serves all designs. */
function isPlain(legs: PairLegs): boolean {
  return legs.above === 0 && legs.below === 0
}

const UNTABLED = new Uint16Array(0)

function untabled(upperSlot: number, lowerSlot: number): Members {
  return { upperSlot, lowerSlot, upper: UNTABLED, lower: UNTABLED }
}

function allowedValues(form: ValueForm, ref: string, values: readonly number[] | undefined): ValueList {
  if (!values) throw new RangeError(`No list of allowed values for ${ref}`)
  const list = toValueList(values)
  if (form.kind !== 'gain-single' || ref !== 'Rg') return list
  const { k, gainMinimum = -Infinity, gainMaximum = Infinity, stageGain = 1 } = form
  const gainOf = (place: number): number => stageGain * (1 + k / (list.values[place] as number))
  let from = 0
  let to = list.values.length
  while (from < to && !(gainOf(from) <= gainMaximum)) from++
  while (to > from && !(gainOf(to - 1) >= gainMinimum)) to--
  return partOf(list, from, to)
}

/** The second pair, where the search treats it as one. */
function secondPair(beta: Beta): Pick<PairLegs, 'upper' | 'lower'> | null {
  return beta.kind === 'pair' ? beta.legs : beta.kind === 'loaded' ? beta : null
}

function isPair(limit: PairLimit, pair: Pick<PairLegs, 'upper' | 'lower'> | null): boolean {
  return pair !== null && limit.refs.includes(pair.upper as string) && limit.refs.includes(pair.lower)
}

/**
 * Takes out of two lists what no value of the other can make allowed; false where no pair is. A demand across the pairs
 * of the search is checked pick by pick, which is slow where it excludes all the good ones; this spares most of that.
 */
function narrow(all: ValueList[], refs: readonly string[], limit: PairLimit): boolean {
  const [one, other] = limit.refs.map((ref) => refs.indexOf(ref)) as [number, number]
  const bounds = merge([limit])
  const [a, b] = [all[one] as ValueList, all[other] as ValueList]
  if (!anyAllowed(a, b, bounds)) return false
  all[one] = feasible(a, b, bounds)
  all[other] = feasible(b, a, bounds)
  return true
}

function feasible(list: ValueList, partners: ValueList, bounds: PairBounds): ValueList {
  const least = partners.values[0] as number
  const most = partners.values[partners.values.length - 1] as number
  let from = 0
  let to = list.values.length
  while (
    from < to &&
    !pairAllowed(list.values[from] as number, most, { ...bounds, maximumParallel: Infinity })
  )
    from++
  while (
    to > from &&
    !pairAllowed(list.values[to - 1] as number, least, { ...bounds, minimumSum: 0, minimumParallel: 0 })
  )
    to--
  return partOf(list, from, to)
}

/** All demands on one pair together; null where there is none. */
function boundsOf(
  limits: readonly PairLimit[],
  pair: Pick<PairLegs, 'upper' | 'lower'> | null,
): PairBounds | null {
  if (limits.length === 0) return null
  const from = limits.filter((limit) => isPair(limit, pair))
  return from.length > 0 ? merge(from) : null
}

function merge(limits: readonly PairLimit[]): PairBounds {
  return {
    minimumSum: Math.max(...limits.map((limit) => limit.minimumSum ?? 0)),
    minimumParallel: Math.max(...limits.map((limit) => limit.minimumParallel ?? 0)),
    maximumParallel: Math.min(...limits.map((limit) => limit.maximumParallel ?? Infinity)),
  }
}

function anyAllowed(upper: ValueList, lower: ValueList, bounds: PairBounds): boolean {
  return upper.values.some((a) => lower.values.some((b) => pairAllowed(a, b, bounds)))
}

function crossCheck(
  refs: readonly string[],
  limits: readonly PairLimit[],
): (values: readonly number[]) => boolean {
  const checks = limits.map((limit) => ({
    one: refs.indexOf(limit.refs[0]),
    other: refs.indexOf(limit.refs[1]),
    bounds: merge([limit]),
  }))
  return (values) =>
    checks.every(({ one, other, bounds }) =>
      pairAllowed(values[one] as number, values[other] as number, bounds),
    )
}
