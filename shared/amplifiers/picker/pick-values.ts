import { distinctValues, totalCost, valueCost } from './cost.ts'
import { evaluateForm } from './evaluate.ts'
import { formRefs, type Pair } from './forms.ts'
import { prepare, type Prepared } from './prepare.ts'
import type { Pick, PickRequest, PickResult } from './request.ts'
import { search } from './search.ts'
import { type Found, SAME_ENDS, ShortList } from './short-list.ts'
import { toleranceErrors } from './tolerance-error.ts'

/** An error beyond this many spans is no pick. */
const LARGEST_ERROR = 10
const DEFAULT_COUNT = 8
/** A pick may miss by this share of what the tolerances cost anyway. */
const SHARE_OF_TOLERANCE = 0.1
/** Below this an error counts as none when it is weighed, as a fraction of the span. */
const NO_ERROR = 1e-9
/** Factor by which a search widens that has not found enough. */
const WIDEN = 4
/** How often the target is shrunk to bring the ends inside. */
const SHRINKS = 4

/**
 * Standard values for a form, exactly: the smallest end-point error that the allowed values can give, the first few
 * picks by error, and, among all picks that miss by no more than max(E_min, T/10), the cheapest few. Both lists have
 * distinct end points, and both are what an exhaustive search would find.
 *
 * With `inside`, practical picks are those whose ends stay in that range with every resistor at its limit. Where none
 * does, the target is shrunk by what the tolerances take and the picks are made for that; their errors are still told
 * against the target asked for, so they may exceed the threshold and are then not `practical`.
 *
 * Where every value is fixed by a person the answer is that pick, whatever its error. Otherwise an optimum beyond ten
 * spans is `outside-window`, with the closest pick.
 *
 * @throws RangeError where the target has no span, the preferred impedance is not above 0, a resistor has no list, a
 * list holds a negative value, or a demand on a pair names a resistor that the form has not
 */
export function pickValues(request: PickRequest): PickResult {
  const { form, target, preferred } = request
  if (!(Number.isFinite(target[0]) && Number.isFinite(target[1]) && target[0] !== target[1]))
    throw new RangeError('A target runs between two different finite voltages')
  if (!(preferred > 0 && preferred < Infinity)) throw new RangeError('The preferred impedance is above 0 Ω')
  const prepared = prepare(form, request.lists, request.pairs ?? [], preferred)
  if (!prepared) return { ok: false, reason: 'no-allowed-pair' }

  const nearest = findNearest(request, prepared, target)
  const first = nearest[0]
  if (!first) {
    const closest = findWithin(prepared, target, Infinity, 1)[0]
    if (!closest) return { ok: false, reason: prepared.allows ? 'no-allowed-pair' : 'outside-window' }
    if (!prepared.fixed)
      return { ok: false, reason: 'outside-window', closest: toPick(request, closest, LARGEST_ERROR) }
    return conclude(request, prepared, [closest])
  }
  return conclude(request, prepared, nearest)
}

function conclude(request: PickRequest, prepared: Prepared, nearest: Found[]): PickResult {
  const { target } = request
  const span = Math.abs(target[1] - target[0])
  const optimum = Math.min(...nearest.map((found) => found.error)) / span
  const [toleranceError, threshold] = weigh(request, target, nearest)
  return {
    ok: true,
    optimum,
    toleranceError,
    threshold,
    picks: findPractical(request, prepared, nearest).map((found) => toPick(request, found, threshold)),
    best: nearest.map((found) => toPick(request, found, threshold)),
  }
}

/** T at the pick with the smallest error, and the threshold that follows, as fractions of the span. */
function weigh(request: PickRequest, target: Pair, nearest: Found[]): [number, number] {
  const span = Math.abs(target[1] - target[0])
  const first = nearest[0] as Found
  const spread = toleranceErrors(request.form, named(request, first), request.tolerance)
  const toleranceError = Math.max(...spread) / span
  return [toleranceError, Math.max(first.error / span, SHARE_OF_TOLERANCE * toleranceError)]
}

/** The cheapest picks within the threshold; with `inside`, of those that stay inside. */
function findPractical(request: PickRequest, prepared: Prepared, nearest: Found[]): Found[] {
  const { inside } = request
  let target = request.target
  let optimal = nearest
  for (let shrinks = 0; ; shrinks++) {
    const [, threshold] = weigh(request, target, optimal)
    const found = findCheapest(request, prepared, target, threshold)
    if (found.length > 0 || !inside || shrinks === SHRINKS) return found
    const rise = Math.sign(target[1] - target[0])
    const spread = toleranceErrors(request.form, named(request, optimal[0] as Found), request.tolerance)
    const shrunk: Pair = [target[0] + rise * spread[0], target[1] - rise * spread[1]]
    if (spread[0] + spread[1] === 0 || Math.sign(shrunk[1] - shrunk[0]) !== rise) return found
    optimal = findNearest(request, prepared, shrunk)
    if (optimal.length === 0) return found
    target = shrunk
  }
}

/** The first picks by error, widening the search until it holds enough of them; empty beyond the largest error. */
function findNearest(request: PickRequest, prepared: Prepared, target: Pair): Found[] {
  const count = request.count ?? DEFAULT_COUNT
  for (let error = prepared.grain; ; error *= WIDEN) {
    const limit = Math.min(error, LARGEST_ERROR)
    const found = findWithin(prepared, target, limit, count)
    if (found.length === count || limit === LARGEST_ERROR) return found
  }
}

function findWithin(prepared: Prepared, target: Pair, limit: number, count: number): Found[] {
  const { task, allows } = prepared
  const span = Math.abs(target[1] - target[0])
  const list = new ShortList(task.slots, task.first, task.second, span, count, null, allows)
  list.open(limit * span)
  search({ ...task, target }, list)
  return list.found
}

function findCheapest(request: PickRequest, prepared: Prepared, target: Pair, threshold: number): Found[] {
  const { task, allows } = prepared
  const { form, inside, tolerance } = request
  const span = Math.abs(target[1] - target[0])
  const refs = task.slots.refs
  const staysInside = (values: Float64Array): boolean => {
    if (!inside) return true
    const chosen = toRecord(refs, values)
    const ends = evaluateForm(form, chosen)
    const spread = toleranceErrors(form, chosen, tolerance)
    return ([0, 1] as const).every(
      (end) => ends[end] - spread[end] >= inside[0] && ends[end] + spread[end] <= inside[1],
    )
  }
  const demands = inside
    ? (values: Float64Array) => (!allows || allows(values)) && staysInside(values)
    : allows
  const weight = Math.max(threshold, NO_ERROR) * span
  const count = request.count ?? DEFAULT_COUNT
  const list = new ShortList(task.slots, task.first, task.second, span, count, weight, demands)
  list.open(threshold * span)
  search({ ...task, target }, list)
  return list.found
}

function toPick(request: PickRequest, found: Found, threshold: number): Pick {
  const { form, target, preferred } = request
  const values = named(request, found)
  const ends = evaluateForm(form, values)
  const span = Math.abs(target[1] - target[0])
  const error = Math.max(Math.abs(ends[0] - target[0]), Math.abs(ends[1] - target[1])) / span
  const chosen = Object.values(values)
  const distinct = distinctValues(chosen)
  const sum = chosen.reduce((total, value) => total + valueCost(value, preferred), 0)
  return {
    values,
    error,
    cost: totalCost(sum, distinct, error / Math.max(threshold, NO_ERROR)),
    distinct,
    practical: error <= threshold + SAME_ENDS,
    ends,
  }
}

function named(request: PickRequest, found: Found): Record<string, number> {
  return toRecord(formRefs(request.form), found.values)
}

/** Values by ref, those left open absent. */
function toRecord(refs: readonly string[], values: Float64Array): Record<string, number> {
  const record: Record<string, number> = {}
  refs.forEach((ref, slot) => {
    if (values[slot] !== Infinity) record[ref] = values[slot] as number
  })
  return record
}
