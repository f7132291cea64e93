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
  /** Error of the nearest of n picks, as a fraction of the span: of this order times √n with two free ratios, times n with one. */
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
  let combinations = 1
  for (const ref of refs) {
    const list = allowedValues(form, ref, lists[ref])
    combinations *= list.values.length
    all.push(list)
  }
  if (combinations === 0) return null
  all.push(constantOf(alpha, beta), NOTHING)
  const places = new Places(refs, all, preferred)

  const firstBounds = alpha && boundsOf(limits, alpha.upper, alpha.lower)
  const first = alpha ? places.pair(alpha, firstBounds, isPlain(alpha)) : places.nothing()
  const second = places.beta(beta, limits, alpha !== null)
  if (!first || !second) return null
  const rest = limits.filter(
    (limit) => !firstBounds?.from.includes(limit) && !second.bounds?.from.includes(limit),
  )
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
    allows: rest.length > 0 ? crossCheck(refs, rest) : null,
    fixed: refs.every((ref) => lists[ref]?.length === 1),
    grain: alpha ? GRAIN / Math.sqrt(combinations) : GRAIN / combinations,
    knobs: alpha ? 2 : 1,
  }
}

/** The resistor inside a part that a pair is made with, if there is one. */
function constantOf(alpha: PairLegs | null, beta: Beta): ValueList {
  if (alpha && typeof alpha.upper === 'number') return toValueList([alpha.upper])
  if (beta.kind === 'pair' && typeof beta.legs.upper === 'number') return toValueList([beta.legs.upper])
  return NOTHING
}

interface Bounds extends PairBounds {
  from: readonly PairLimit[]
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
  ): { members: Members; task: BetaTask; bounds: Bounds | null } | null {
    if (beta.kind === 'shared') {
      const { own, series, divider } = beta
      const members = untabled(this.none, this.slotOf(beta.ref))
      return { members, task: { kind: 'shared', own, series, divider }, bounds: null }
    }
    if (beta.kind === 'loaded') {
      const bounds = boundsOf(limits, beta.upper, beta.lower)
      const found = this.pair({ upper: beta.upper, lower: beta.lower, above: 0, below: 0 }, bounds, false)
      return found && { members: found.members, task: { kind: 'loaded', bounds }, bounds }
    }
    const { legs, divider, f0, f1 } = beta
    const bounds = boundsOf(limits, legs.upper, legs.lower)
    // Beside a first pair the second is asked thousands of times: its table pays even with a series resistance.
    const found = this.pair(legs, bounds, hasFirst || isPlain(legs))
    if (!found) return null
    const task: BetaTask = found.table
      ? { kind: 'table', table: found.table, divider, f0, f1 }
      : { kind: 'legs', above: legs.above, below: legs.below, divider, f0, f1, bounds }
    return { members: found.members, task, bounds }
  }

  private slotOf(leg: string | number): number {
    return typeof leg === 'number' ? this.constant : this.slots.refs.indexOf(leg)
  }
}

/** Natural range of a ratio that picks spread over, with some room: only the first guess depends on it. */
const GRAIN = 30
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

function concerns(limit: PairLimit, one: string | number, other: string | number): boolean {
  return limit.refs.includes(one as string) && limit.refs.includes(other as string)
}

/** All demands on one pair together; null where there is none. */
function boundsOf(limits: readonly PairLimit[], one: string | number, other: string | number): Bounds | null {
  if (limits.length === 0) return null
  const from = limits.filter((limit) => concerns(limit, one, other))
  if (from.length === 0) return null
  return { ...merge(from), from }
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
