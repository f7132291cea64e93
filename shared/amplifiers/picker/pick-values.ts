import { COST, totalCost } from './cost.ts'
import { evaluateForm } from './evaluate.ts'
import type { Pair } from './forms.ts'
import { prepare, type Prepared } from './prepare.ts'
import type { Pick, PickRequest, PickResult } from './request.ts'
import { Search } from './search.ts'
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
  return prepared ? new Picker(request, prepared).pick() : { ok: false, reason: 'no-allowed-pair' }
}

interface Weight {
  /** What the tolerances take at the two ends, V. */
  spread: Pair
  /** T and max(E_min, T/10), fractions of the span. */
  toleranceError: number
  threshold: number
}

class Picker {
  private readonly count: number
  private readonly refs: readonly string[]

  constructor(
    private readonly request: PickRequest,
    private readonly prepared: Prepared,
  ) {
    this.count = request.count ?? DEFAULT_COUNT
    this.refs = prepared.task.slots.refs
  }

  pick(): PickResult {
    const { target } = this.request
    const { allows, fixed } = this.prepared
    let nearest = this.findNearest(target)
    if (nearest.length === 0) {
      nearest = this.findWithin(this.listByError(target, 1), target, Infinity)
      const closest = nearest[0]
      if (!closest) return { ok: false, reason: allows ? 'no-allowed-pair' : 'outside-window' }
      if (!fixed) return { ok: false, reason: 'outside-window', closest: this.toPick(closest, LARGEST_ERROR) }
    }
    const weight = this.weigh(target, nearest)
    const { toleranceError, threshold } = weight
    return {
      ok: true,
      optimum: Math.min(...nearest.map((found) => found.error)) / spanOf(target),
      toleranceError,
      threshold,
      picks: this.findPractical(weight).map((found) => this.toPick(found, threshold)),
      best: nearest.map((found) => this.toPick(found, threshold)),
    }
  }

  /** What an error is weighed against, at the pick with the smallest one. */
  private weigh(target: Pair, nearest: readonly Found[]): Weight {
    const { form, tolerance } = this.request
    const first = nearest[0] as Found
    const spread = toleranceErrors(form, this.toRecord(first.values), tolerance, this.refs)
    const toleranceError = Math.max(...spread) / spanOf(target)
    const threshold = Math.max(first.error / spanOf(target), SHARE_OF_TOLERANCE * toleranceError)
    return { spread, toleranceError, threshold }
  }

  /** The cheapest picks within the threshold; with `inside`, of those that stay inside. */
  private findPractical(asked: Weight): readonly Found[] {
    let { target } = this.request
    let { spread, threshold } = asked
    for (let shrinks = 0; ; shrinks++) {
      const found = this.findCheapest(target, threshold)
      if (found.length > 0 || !this.request.inside || shrinks === SHRINKS) return found
      const rise = Math.sign(target[1] - target[0])
      const shrunk: Pair = [target[0] + rise * spread[0], target[1] - rise * spread[1]]
      if (spread[0] + spread[1] === 0 || Math.sign(shrunk[1] - shrunk[0]) !== rise) return found
      const optimal = this.findNearest(shrunk)
      if (optimal.length === 0) return found
      target = shrunk
      ;({ spread, threshold } = this.weigh(target, optimal))
    }
  }

  /** The first picks by error, widening the search until it holds enough of them; empty beyond the largest error. */
  private findNearest(target: Pair): readonly Found[] {
    const list = this.listByError(target, this.count)
    const { grain, knobs } = this.prepared
    for (let error = grain * this.count ** (1 / knobs); ; error *= WIDEN) {
      const limit = Math.min(error, LARGEST_ERROR)
      const found = this.findWithin(list, target, limit)
      if (found.length === this.count || limit === LARGEST_ERROR) return found
    }
  }

  private listByError(target: Pair, count: number): ShortList {
    const { task, allows } = this.prepared
    return new ShortList(task.slots, task.first, task.second, spanOf(target), count, null, allows)
  }

  /** What a list holds after a search up to `limit`, a fraction of the span. */
  private findWithin(list: ShortList, target: Pair, limit: number): readonly Found[] {
    list.open(limit * spanOf(target))
    new Search(this.prepared.task, target, list).run()
    return list.full || limit >= LARGEST_ERROR ? list.found : []
  }

  private findCheapest(target: Pair, threshold: number): readonly Found[] {
    const { task, allows } = this.prepared
    const { inside } = this.request
    const demands = inside
      ? (values: readonly number[]) => (!allows || allows(values)) && this.staysInside(values, inside)
      : allows
    const span = spanOf(target)
    const weight = Math.max(threshold, NO_ERROR) * span
    const list = new ShortList(task.slots, task.first, task.second, span, this.count, weight, demands)
    list.open(threshold * span)
    new Search(task, target, list).run()
    return list.found
  }

  private staysInside(values: readonly number[], inside: Pair): boolean {
    const { form, tolerance } = this.request
    const chosen = this.toRecord(values)
    const ends = evaluateForm(form, chosen)
    const spread = toleranceErrors(form, chosen, tolerance, this.refs)
    return (
      Math.min(ends[0] - spread[0], ends[1] - spread[1]) >= inside[0] &&
      Math.max(ends[0] + spread[0], ends[1] + spread[1]) <= inside[1]
    )
  }

  private toPick(found: Found, threshold: number): Pick {
    const { form, target } = this.request
    const values = this.toRecord(found.values)
    const ends = evaluateForm(form, values)
    const error = Math.max(Math.abs(ends[0] - target[0]), Math.abs(ends[1] - target[1])) / spanOf(target)
    return {
      values,
      error,
      cost: totalCost(found.sum, found.distinct, (COST.error * error) / Math.max(threshold, NO_ERROR)),
      distinct: found.distinct,
      practical: error <= threshold + SAME_ENDS,
      ends,
    }
  }

  /** Values by ref, those left open absent. */
  private toRecord(values: readonly number[]): Record<string, number> {
    const record: Record<string, number> = {}
    for (let slot = 0; slot < this.refs.length; slot++) {
      if (values[slot] !== Infinity) record[this.refs[slot] as string] = values[slot] as number
    }
    return record
  }
}

function spanOf(target: Pair): number {
  return Math.abs(target[1] - target[0])
}
