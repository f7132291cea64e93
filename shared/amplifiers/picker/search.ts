import type { Pair } from './forms.ts'
import { nearestFactor } from './ideal.ts'
import { pairAllowed, type PairBounds, type PairTable } from './pair-table.ts'
import type { IdealRatio, Lines } from './problem.ts'
import type { Members, ShortList, Slots } from './short-list.ts'
import { lowerBound } from './value-list.ts'

/**
 * The exact search. Every output is u_i = p_i(r) + β·d_i(r) at the ends i = 0, 1 (`Problem`), so with c = p − target:
 *
 * - for a given r no β misses by less than |c0·d1 − c1·d0|/(|d0| + |d1|), the distance of a line from the target in
 *   the larger-of-two-errors sense; where that exceeds the present limit the whole r is passed over;
 * - for a given r the error is convex in β: along a sorted list it falls, then rises. Walking outward from the best β
 *   and stopping at the first error above the limit loses nothing;
 * - the r whose line comes within ε of the target form one interval around the ideal design equation, so a sorted list
 *   of ratios is walked outward too. Where that equation has a pole within ε of the target, all ratios are looked at.
 *
 * The limit is what the short list still accepts, and falls with every pick found. Rounding is covered by the
 * width within which end points count as the same (`SAME_ENDS`).
 */
export interface Task {
  target: Pair
  slots: Slots
  lines: Lines
  ideal: IdealRatio | null
  /** First pair: slots, series resistances, and its table unless the ratio is no plain one. */
  first: Members
  firstAbove: number
  firstBelow: number
  /** Null: pairs are found by a staircase over the two lists, or there is no first pair. */
  firstTable: PairTable | null
  firstBounds: PairBounds | null
  hasFirst: boolean
  second: Members
  beta: BetaTask
}

export type BetaTask =
  /** A table of ratios q: β = 1/(1 + q) where `divider`, else f0 + f1·q. */
  | { kind: 'table'; table: PairTable; divider: boolean; f0: number; f1: number }
  /** Each pair of lists by itself: q = (A + above)/(B + below). */
  | {
      kind: 'legs'
      above: number
      below: number
      divider: boolean
      f0: number
      f1: number
      bounds: PairBounds | null
    }
  /** One more resistor X in the second pair's lower slot: q = (A + own)/(X + series), A the first pair's upper. */
  | { kind: 'shared'; own: number; series: number; divider: boolean }
  /** β = A/(B + Thevenin resistance of the first pair). */
  | { kind: 'loaded'; bounds: PairBounds | null }

/** Intervals are widened by this much, relative, against the rounding of their ends. */
const WIDER = 1e-11

/** Offers the list every pick that it may still accept. */
export function search(task: Task, list: ShortList): void {
  if (!task.hasFirst) {
    const { pa, da } = task.lines
    const c: Pair = [pa[0] - task.target[0], pa[1] - task.target[1]]
    visitSecond(task, list, c[0], c[1], da[0], da[1], 0, 0, 1, 0)
  } else if (task.firstTable) walkTable(task, list, task.firstTable)
  else climbStairs(task, list)
}

/** Ratios of the first pair from the sorted table, outward from the ideal one. */
function walkTable(task: Task, list: ShortList, table: PairTable): void {
  const { ratios, starts, least } = table
  const [low, high, connected] = idealInterval(task, list.limit)
  const middle = idealInterval(task, 0)[0]
  const from = connected ? lowerBound(ratios, low * (1 - WIDER)) : 0
  const start = connected ? Math.max(from, lowerBound(ratios, middle)) : 0
  const end = connected ? high * (1 + WIDER) : Infinity
  for (let i = start; i < ratios.length && (ratios[i] as number) <= end; i++) {
    const near = visitFirst(
      task,
      list,
      ratios[i] as number,
      starts[i] as number,
      starts[i + 1] as number,
      least[i] as number,
    )
    if (!near && connected) break
  }
  for (let i = start - 1; i >= from; i--) {
    const near = visitFirst(
      task,
      list,
      ratios[i] as number,
      starts[i] as number,
      starts[i + 1] as number,
      least[i] as number,
    )
    if (!near && connected) break
  }
}

/** Ratios of the first pair that fall into the ideal interval, without a table: one pass with pointers that only rise. */
function climbStairs(task: Task, list: ShortList): void {
  const { first, firstAbove, firstBelow, firstBounds, slots } = task
  const uppers = slots.values[first.upperSlot] as Float64Array
  const lowers = slots.values[first.lowerSlot] as Float64Array
  const costUpper = slots.costs[first.upperSlot] as Float64Array
  const costLower = slots.costs[first.lowerSlot] as Float64Array
  const [low, high] = idealInterval(task, list.limit)
  if (high < 0) return
  let bottom = 0
  for (let i = 0; i < uppers.length; i++) {
    const a = uppers[i] as number
    const least = quotient(a + firstAbove, high) * (1 - WIDER) - firstBelow * (1 + WIDER)
    const most = low > 0 ? ((a + firstAbove) / low) * (1 + WIDER) : Infinity
    while (bottom < lowers.length && (lowers[bottom] as number) < least) bottom++
    for (let j = bottom; j < lowers.length; j++) {
      const b = lowers[j] as number
      if (b + firstBelow > most) break
      if (firstBounds && !pairAllowed(a, b, firstBounds)) continue
      first.upper[0] = i
      first.lower[0] = j
      const cost = (costUpper[i] as number) + (costLower[j] as number)
      visitFirst(task, list, (a + firstAbove) / (b + firstBelow), 0, 1, cost)
    }
  }
}

/** One ratio of the first pair; false where no β can bring it within the limit. */
function visitFirst(
  task: Task,
  list: ShortList,
  r: number,
  from: number,
  to: number,
  least: number,
): boolean {
  const { lines, target } = task
  const m = lines.inverse ? 1 / (1 + r) : r
  const c0 = lines.pa[0] + lines.pb[0] * m - target[0]
  const c1 = lines.pa[1] + lines.pb[1] * m - target[1]
  const d0 = lines.da[0] + lines.db[0] * m
  const d1 = lines.da[1] + lines.db[1] * m
  const size = Math.abs(d0) + Math.abs(d1)
  const miss = size > 0 ? Math.abs(c0 * d1 - c1 * d0) / size : Math.max(Math.abs(c0), Math.abs(c1))
  if (!(miss <= list.limit)) return false
  if (!list.hopeless(least, miss)) visitSecond(task, list, c0, c1, d0, d1, r, from, to, least)
  return true
}

function visitSecond(
  task: Task,
  list: ShortList,
  c0: number,
  c1: number,
  d0: number,
  d1: number,
  r: number,
  from: number,
  to: number,
  least: number,
): void {
  const { beta } = task
  switch (beta.kind) {
    case 'table':
      return walkRatios(beta, list, c0, c1, d0, d1, from, to, least)
    case 'legs':
      return walkLegs(task, beta, list, c0, c1, d0, d1)
    case 'shared':
      return walkShared(task, beta, list, c0, c1, d0, d1, r, from, to)
    case 'loaded':
      return walkLoaded(task, beta, list, c0, c1, d0, d1, from, to)
  }
}

/** Second ratios from their table, outward from the best one. */
function walkRatios(
  beta: { table: PairTable; divider: boolean; f0: number; f1: number },
  list: ShortList,
  c0: number,
  c1: number,
  d0: number,
  d1: number,
  from: number,
  to: number,
  leastFirst: number,
): void {
  const { divider, f0, f1, table } = beta
  const { ratios, starts, least, leastOfAll } = table
  if (list.hopeless(leastFirst + leastOfAll, 0)) return
  const best = -(Math.sign(d0) * c0 + Math.sign(d1) * c1) / (Math.abs(d0) + Math.abs(d1))
  const wanted = divider ? (best > 0 ? 1 / best - 1 : Infinity) : (best - f0) / f1
  const start = lowerBound(ratios, wanted)
  for (let step = 1; step >= -1; step -= 2) {
    for (let i = step > 0 ? start : start - 1; i >= 0 && i < ratios.length; i += step) {
      const q = ratios[i] as number
      const factor = divider ? 1 / (1 + q) : f0 + f1 * q
      const low = c0 + factor * d0
      const high = c1 + factor * d1
      const error = Math.max(Math.abs(low), Math.abs(high))
      if (!(error <= list.limit)) break
      if (list.hopeless(leastFirst + (least[i] as number), error)) continue
      list.offer(low, high, from, to, starts[i] as number, starts[i + 1] as number)
    }
  }
}

/** The only pair there is, with a series resistance: each upper value has its own best lower one. */
function walkLegs(
  task: Task,
  beta: Extract<BetaTask, { kind: 'legs' }>,
  list: ShortList,
  c0: number,
  c1: number,
  d0: number,
  d1: number,
): void {
  const { divider, f0, f1 } = beta
  const { second, slots } = task
  const uppers = slots.values[second.upperSlot] as Float64Array
  const best = nearestFactor([c0, c1], [d0, d1])
  const wanted = divider ? (best > 0 ? 1 / best - 1 : Infinity) : (best - f0) / f1
  for (let i = 0; i < uppers.length; i++) {
    second.upper[0] = i
    const numerator = (uppers[i] as number) + beta.above
    walkValues(
      task,
      list,
      c0,
      c1,
      d0,
      d1,
      numerator,
      beta.below,
      wanted,
      divider,
      divider ? 1 : f0,
      f1,
      0,
      1,
      beta.bounds,
    )
  }
}

/** One further resistor against the first pair's upper leg: every member of the first pair asks for another one. */
function walkShared(
  task: Task,
  beta: { own: number; series: number; divider: boolean },
  list: ShortList,
  c0: number,
  c1: number,
  d0: number,
  d1: number,
  r: number,
  from: number,
  to: number,
): void {
  const { first, slots } = task
  const uppers = slots.values[first.upperSlot] as Float64Array
  const { divider } = beta
  const best = -(Math.sign(d0) * c0 + Math.sign(d1) * c1) / (Math.abs(d0) + Math.abs(d1))
  const base = divider ? 1 + r : 0
  const wanted = divider ? (best > 0 ? 1 / best - base : Infinity) : best
  for (let j = from; j < to; j++) {
    const numerator = (uppers[first.upper[j] as number] as number) + beta.own
    walkValues(task, list, c0, c1, d0, d1, numerator, beta.series, wanted, divider, base, 1, j, j + 1, null)
  }
}

/**
 * Values X of the second pair's lower slot, outward from the best one: q = numerator/(X + series), β = 1/(base + q)
 * where `divider`, else base + factor·q.
 */
function walkValues(
  task: Task,
  list: ShortList,
  c0: number,
  c1: number,
  d0: number,
  d1: number,
  numerator: number,
  series: number,
  wanted: number,
  divider: boolean,
  base: number,
  scale: number,
  from: number,
  to: number,
  bounds: PairBounds | null,
): void {
  const { second, slots } = task
  const values = slots.values[second.lowerSlot] as Float64Array
  const own = bounds ? (slots.values[second.upperSlot]?.[second.upper[0] as number] as number) : 0
  const start = lowerBound(values, wanted > 0 ? numerator / wanted - series : Infinity)
  for (let step = 1; step >= -1; step -= 2) {
    for (let i = step > 0 ? start : start - 1; i >= 0 && i < values.length; i += step) {
      const q = numerator / ((values[i] as number) + series)
      const factor = divider ? 1 / (base + q) : base + scale * q
      const low = c0 + factor * d0
      const high = c1 + factor * d1
      if (!(Math.abs(low) <= list.limit && Math.abs(high) <= list.limit)) {
        // Link against link has no meaning and says nothing about its neighbours.
        if (Number.isNaN(factor)) continue
        break
      }
      if (bounds && !pairAllowed(own, values[i] as number, bounds)) continue
      second.lower[0] = i
      list.offer(low, high, from, to, 0, 1)
    }
  }
}

/** β = A/(B + Rth): for each member of the first pair a staircase over the two lists, in the band of β that is near enough. */
function walkLoaded(
  task: Task,
  beta: { bounds: PairBounds | null },
  list: ShortList,
  c0: number,
  c1: number,
  d0: number,
  d1: number,
  from: number,
  to: number,
): void {
  const { first, second, slots, firstAbove } = task
  const [least, most] = factorBand(c0, c1, d0, d1, list.limit)
  if (!(most >= 0 && least <= most)) return
  const firstUppers = slots.values[first.upperSlot] as Float64Array
  const firstLowers = slots.values[first.lowerSlot] as Float64Array
  const uppers = slots.values[second.upperSlot] as Float64Array
  const lowers = slots.values[second.lowerSlot] as Float64Array
  const smallest = lowers[0] as number
  const largest = lowers[lowers.length - 1] as number
  for (let member = from; member < to; member++) {
    const upper = (firstUppers[first.upper[member] as number] as number) + firstAbove
    const thevenin = 1 / (1 / upper + 1 / (firstLowers[first.lower[member] as number] as number))
    let bottom = 0
    const start = least > 0 ? lowerBound(uppers, (smallest + thevenin) * least * (1 - WIDER)) : 0
    const end = (largest + thevenin) * most * (1 + WIDER)
    for (let i = start; i < uppers.length; i++) {
      const a = uppers[i] as number
      if (a > end) break
      const nearest = quotient(a, most) * (1 - WIDER) - thevenin * (1 + WIDER)
      const farthest = least > 0 ? (a / least) * (1 + WIDER) - thevenin : Infinity
      while (bottom < lowers.length && (lowers[bottom] as number) < nearest) bottom++
      for (let j = bottom; j < lowers.length; j++) {
        const b = lowers[j] as number
        if (b > farthest) break
        const factor = a / (b + thevenin)
        const low = c0 + factor * d0
        const high = c1 + factor * d1
        if (!(Math.abs(low) <= list.limit && Math.abs(high) <= list.limit)) continue
        if (beta.bounds && !pairAllowed(a, b, beta.bounds)) continue
        second.upper[0] = i
        second.lower[0] = j
        list.offer(low, high, member, member + 1, 0, 1)
      }
    }
  }
}

/** The β with |c_i + β·d_i| ≤ limit at both ends, from 0 up; empty as [1, 0]. */
function factorBand(c0: number, c1: number, d0: number, d1: number, limit: number): Pair {
  let least = 0
  let most = Infinity
  for (const [c, d] of [
    [c0, d0],
    [c1, d1],
  ] as const) {
    if (d === 0) {
      if (Math.abs(c) > limit) return [1, 0]
      continue
    }
    const one = (-limit - c) / d
    const other = (limit - c) / d
    least = Math.max(least, Math.min(one, other))
    most = Math.min(most, Math.max(one, other))
  }
  return [least, most]
}

/**
 * Ratios r whose line comes within `limit` (V) of the target: lowest, highest, and whether they are one interval, which
 * they are unless the ideal equation has a pole there; then the whole range.
 */
function idealInterval(task: Task, limit: number): [number, number, boolean] {
  const { ideal, target } = task
  if (!ideal) return [0, Infinity, false]
  const { n, e, inverse } = ideal
  const denominator = e[0] * target[0] + e[1] * target[1] + e[2]
  if (!(Math.abs(denominator) > limit * (Math.abs(e[0]) + Math.abs(e[1])))) return [0, Infinity, false]
  let low = Infinity
  let high = -Infinity
  for (let corner = 0; corner < 4; corner++) {
    const u0 = target[0] + (corner & 1 ? limit : -limit)
    const u1 = target[1] + (corner & 2 ? limit : -limit)
    const m = (n[0] * u0 + n[1] * u1 + n[2]) / (e[0] * u0 + e[1] * u1 + e[2])
    low = Math.min(low, m)
    high = Math.max(high, m)
  }
  if (!inverse) return [low, high, true]
  return [high > 0 ? 1 / high - 1 : Infinity, low > 0 ? 1 / low - 1 : Infinity, true]
}

/** a/b with 0/0 = 0. */
function quotient(a: number, b: number): number {
  return a === 0 ? 0 : a / b
}
