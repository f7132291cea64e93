import { COST, formRefs, type Pick, type PickRequest } from '#shared/amplifiers/picker/index.ts'
import { MANTISSAS } from '#shared/parts/series-data.ts'
import { closedForm } from './closed-forms.ts'

/**
 * What the picker has to find, by looking at every combination of allowed values. Nothing here is shared with the
 * picker but the published weights; the ends come from the closed forms.
 */
export interface Exhaustive {
  optimum: number
  toleranceError: number
  threshold: number
  best: Pick[]
  picks: Pick[]
}

/** Misses closer than this fraction of the span are the same. */
const SAME = 1e-11

interface Entry {
  values: number[]
  ends: [number, number]
  error: number
}

export function exhaust(request: PickRequest): Exhaustive | null {
  const count = request.count ?? 8
  const refs = formRefs(request.form)
  const lists = refs.map((ref) => request.lists[ref] as readonly number[])
  const errors = everyError(request, refs, lists)
  const fixed = lists.every((list) => list.length === 1)
  const bound = distinctBound(errors, count, fixed ? Infinity : 10)
  if (bound === null) return null
  const nearest = classes(request, refs, collect(request, refs, lists, errors, bound), 0, 1)
  nearest.sort((a, b) => compare(round(a.error, SAME), round(b.error, SAME)) || byCost(refs)(a, b))
  const best = nearest.slice(0, count)
  const first = best[0] as Pick

  const toleranceError = Math.max(...spreads(request, first.values)) / span(request)
  const threshold = Math.max(first.error, toleranceError / 10)
  const weight = Math.max(threshold, 1e-9)
  const practical = collect(request, refs, lists, errors, threshold)
  const picks = classes(request, refs, practical, 1, weight)
    .filter((pick) => staysInside(request, pick))
    .slice(0, count)
  return {
    optimum: Math.min(...best.map((pick) => pick.error)),
    toleranceError,
    threshold,
    best: best.map((pick) => ({
      ...pick,
      cost: cost(request, Object.values(pick.values), pick.error / weight),
    })),
    picks,
  }
}

function span(request: PickRequest): number {
  return Math.abs(request.target[1] - request.target[0])
}

/** Error of every combination in counting order, last ref fastest; NaN where it is not allowed. */
function everyError(
  request: PickRequest,
  refs: readonly string[],
  lists: (readonly number[])[],
): Float64Array {
  const errors = new Float64Array(lists.reduce((product, list) => product * list.length, 1))
  const evaluate = closedForm(request.form)
  const { target, form } = request
  const size = span(request)
  const x: Record<string, number> = {}
  let number = 0
  const turn = (wheel: number): void => {
    const ref = refs[wheel]
    if (ref === undefined) {
      const { gain, offset } = evaluate(x)
      const low = Math.abs(gain * form.signal[0] + offset - target[0])
      const high = Math.abs(gain * form.signal[1] + offset - target[1])
      errors[number++] = pairsAllow(request, x) ? Math.max(low, high) / size : NaN
      return
    }
    for (const value of lists[wheel] as readonly number[]) {
      x[ref] = value
      turn(wheel + 1)
    }
  }
  turn(0)
  return errors
}

function pickOut(
  number: number,
  refs: readonly string[],
  lists: (readonly number[])[],
  x: Record<string, number>,
): void {
  let rest = number
  for (let i = refs.length - 1; i >= 0; i--) {
    const list = lists[i] as readonly number[]
    x[refs[i] as string] = list[rest % list.length] as number
    rest = Math.floor(rest / list.length)
  }
}

function pairsAllow(request: PickRequest, x: Record<string, number>): boolean {
  for (const limit of request.pairs ?? []) {
    const [a, b] = [x[limit.refs[0]] as number, x[limit.refs[1]] as number]
    if (limit.minimumSum !== undefined && a + b < limit.minimumSum) return false
    const together = a === Infinity ? b : b === Infinity ? a : a + b === 0 ? 0 : (a * b) / (a + b)
    if (limit.minimumParallel !== undefined && together < limit.minimumParallel * (1 - 1e-15)) return false
    if (limit.maximumParallel !== undefined && together > limit.maximumParallel * (1 + 1e-15)) return false
  }
  return true
}

/** An error that at least `count` picks with distinct errors keep to, none of them beyond `most`. */
function distinctBound(errors: Float64Array, count: number, most: number): number | null {
  const least: number[] = []
  for (const error of errors) {
    if (!(error <= most)) continue
    const last = least[least.length - 1]
    if (least.length === 4 * count && error >= (last as number)) continue
    if (least.some((other) => Math.abs(other - error) <= SAME)) continue
    least.push(error)
    least.sort(compare)
    if (least.length > 4 * count) least.pop()
  }
  return least.length === 0 ? null : (least[least.length - 1] as number)
}

function collect(
  request: PickRequest,
  refs: readonly string[],
  lists: (readonly number[])[],
  errors: Float64Array,
  bound: number,
): Entry[] {
  const evaluate = closedForm(request.form)
  const entries: Entry[] = []
  errors.forEach((error, number) => {
    if (!(error <= bound + SAME)) return
    const x: Record<string, number> = {}
    pickOut(number, refs, lists, x)
    const { gain, offset } = evaluate(x)
    const { signal } = request.form
    const ends: [number, number] = [gain * signal[0] + offset, gain * signal[1] + offset]
    entries.push({ values: refs.map((ref) => x[ref] as number), ends, error })
  })
  return entries
}

/** The cheapest of each set with the same ends, cheapest first. */
function classes(
  request: PickRequest,
  refs: readonly string[],
  entries: Entry[],
  share: number,
  weight: number,
): Pick[] {
  const near = span(request) * SAME
  const picks = entries
    .map((entry) => toPick(request, refs, entry, (share * entry.error) / weight, share === 1))
    .sort(byCost(refs))
  const kept: Pick[] = []
  // Sorted by one end, equal ends are neighbours.
  const places = new Map<number, Pick[]>()
  for (const pick of picks) {
    const cell = Math.floor(pick.ends[0] / near / 4)
    const nearby = [-1, 0, 1].flatMap((step) => places.get(cell + step) ?? [])
    const same = nearby.some(
      (other) =>
        Math.abs(other.ends[0] - pick.ends[0]) <= near && Math.abs(other.ends[1] - pick.ends[1]) <= near,
    )
    if (same) continue
    kept.push(pick)
    places.set(cell, [...(places.get(cell) ?? []), pick])
  }
  return kept
}

function toPick(
  request: PickRequest,
  refs: readonly string[],
  entry: Entry,
  share: number,
  practical: boolean,
): Pick {
  const values: Record<string, number> = {}
  entry.values.forEach((value, i) => {
    if (value !== Infinity) values[refs[i] as string] = value
  })
  const real = entry.values.filter((value) => value > 0 && value < Infinity)
  return {
    values,
    error: entry.error,
    cost: cost(request, entry.values, share),
    distinct: new Set(real).size,
    practical,
    ends: entry.ends,
  }
}

function cost(request: PickRequest, values: number[], share: number): number {
  const real = values.filter((value) => value > 0 && value < Infinity)
  const far = real.reduce(
    (sum, value) => sum + Math.max(0, Math.abs(Math.log10(value / request.preferred)) - COST.free),
    0,
  )
  const odd = real.filter((value) => !onShelf(value)).length
  const distinct = new Set(real).size
  const total =
    COST.decade * far + COST.outsideE24 * odd + COST.distinct * Math.max(0, distinct - 1) + COST.error * share
  return Math.round(total * 1e6) / 1e6
}

function onShelf(value: number): boolean {
  const mantissa = Number((value / 10 ** Math.floor(Math.log10(value * (1 + 1e-12)))).toPrecision(10))
  return MANTISSAS.E24.some((tenths) => Math.abs(tenths / 10 - mantissa) < 1e-9)
}

/** Σ |R·∂u/∂R|·tolerance at both ends, V, by central differences. */
export function spreads(request: PickRequest, values: Record<string, number>): number[] {
  const form =
    request.form.kind === 'gain-single'
      ? { ...request.form, gainMinimum: 0, gainMaximum: Infinity }
      : request.form
  const evaluate = closedForm(form)
  const step = 1e-5
  return form.signal.map((signal) =>
    Object.entries(values).reduce((sum, [ref, value]) => {
      const up = evaluate({ ...values, [ref]: value * (1 + step) })
      const down = evaluate({ ...values, [ref]: value * (1 - step) })
      const slope = ((up.gain - down.gain) * signal + up.offset - down.offset) / (2 * step)
      return sum + Math.abs(slope) * (request.tolerance[ref] ?? 0)
    }, 0),
  )
}

/** Whether both ends stay in the range asked for with every resistor at its limit. */
export function staysInside(request: PickRequest, pick: Pick): boolean {
  const { inside } = request
  if (!inside) return true
  const [low, high] = spreads(request, pick.values) as [number, number]
  return (
    Math.min(pick.ends[0] - low, pick.ends[1] - high) >= inside[0] &&
    Math.max(pick.ends[0] + low, pick.ends[1] + high) <= inside[1]
  )
}

function byCost(refs: readonly string[]): (a: Pick, b: Pick) => number {
  return (a, b) => {
    if (a.cost !== b.cost) return a.cost - b.cost
    for (const ref of refs) {
      const order = compare(a.values[ref] ?? -1, b.values[ref] ?? -1)
      if (order !== 0) return order
    }
    return 0
  }
}

function compare(a: number, b: number): number {
  return a < b ? -1 : a > b ? 1 : 0
}

function round(value: number, step: number): number {
  return Math.round(value / step)
}
