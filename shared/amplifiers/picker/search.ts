import { COST } from './cost.ts'
import type { Pair } from './forms.ts'
import { pairAllowed, type PairBounds, type PairTable } from './pair-table.ts'
import type { IdealRatio, Lines } from './problem.ts'
import { lowerOf, memberCode, type Members, type ShortList, type Slots, upperOf } from './short-list.ts'
import { placeOf, type SortedIndex } from './sorted-index.ts'

/**
 * A form with its lists as the search sees it. Every output is u_i = p_i(r) + β·d_i(r) at the ends i = 0, 1, r being the
 * ratio of the first pair and β made by the rest (`Problem`).
 */
export interface Task {
  slots: Slots
  lines: Lines
  ideal: IdealRatio | null
  /** First pair and its series resistances, Ω; null where the form has one free factor. */
  first: Members & { above: number; below: number; bounds: PairBounds | null; table: PairTable | null }
  hasFirst: boolean
  second: Members
  beta: BetaTask
}

export type BetaTask =
  /** A table of ratios q: β = 1/(1 + q) where `divider`, else f0 + f1·q. */
  | ({ kind: 'table'; table: PairTable } & Factor)
  /** The same with q = (A + above)/(B + below) of two lists without a table. */
  | ({ kind: 'legs'; above: number; below: number; bounds: PairBounds | null } & Factor)
  /** One more resistor X in the second pair's lower slot: q = (A + own)/(X + series), A the first pair's upper. */
  | { kind: 'shared'; own: number; series: number; divider: boolean }
  /** β = A/(B + Thevenin resistance of the first pair). */
  | { kind: 'loaded'; bounds: PairBounds | null }

interface Factor {
  divider: boolean
  f0: number
  f1: number
}

/** Intervals are widened by this much, relative, against the rounding of their ends. */
const WIDER = 1e-11

/**
 * The search at one ratio of the first pair: c = p − target and d at the two ends (V), the ratio, the least that its
 * pairs cost, and the least that any β misses by (V). One search runs at a time and nothing survives it; a shared array keeps the inner loops free of garbage.
 */
const at = new Float64Array(7)
/** Member of a pair that does not exist. */
const ALONE = memberCode(0, 0)
const [C0, C1, D0, D1, RATIO, LEAST, MISS] = [0, 1, 2, 3, 4, 5, 6] as const

/**
 * Offers the list every pick that it may still accept, exactly:
 *
 * - for a given r no β misses by less than |c0·d1 − c1·d0|/(|d0| + |d1|), the distance of a line from the target in the
 *   larger-of-two-errors sense; where that exceeds the list's limit the whole r is passed over;
 * - for a given r the error is convex in β: along a sorted list it falls, then rises. Walking outward from the best β
 *   and stopping at the first error above the limit loses nothing;
 * - the r whose line comes within ε of the target form one interval around the ideal design equation, so a sorted list
 *   of ratios is walked outward too. Where that equation has a pole within ε of the target, all ratios are looked at.
 *
 * The limit falls with every pick found. Rounding is covered by the width within which end points count as the same.
 */
export class Search {
  constructor(
    private readonly task: Task,
    private readonly target: Pair,
    private readonly list: ShortList,
  ) {}

  run(): void {
    const { first, hasFirst } = this.task
    if (!hasFirst) {
      at[RATIO] = 0
      at[LEAST] = 0
      this.approach()
      this.visitSecond(ALONE, ALONE + 1)
    } else if (first.table) this.walkTable(first.table)
    else this.climbStairs()
  }

  /** Ratios of the first pair from their sorted table, outward from the ideal one. */
  private walkTable(table: PairTable): void {
    const { first, slots } = this.task
    const { index, ratios, starts, least } = table
    const { list } = this
    const [low, high, connected] = this.idealInterval(list.limit)
    const from = connected ? placeOf(index, low * (1 - WIDER)) : 0
    const to = connected ? placeOf(index, high * (1 + WIDER)) : ratios.length - 1
    const start = connected ? Math.max(from, placeOf(index, this.idealInterval(0)[0])) : 0
    for (let step = 1; step >= -1; step -= 2) {
      for (let i = step > 0 ? start : start - 1; i >= from && i <= to && i < ratios.length; i += step) {
        at[RATIO] = ratios[i] as number
        if (!this.approach()) {
          if (connected) break
          continue
        }
        at[LEAST] = (least[i] as number) + pairCost(slots, first, ratios[i] as number)
        if (!list.hopeless(at[LEAST], 0)) this.visitSecond(starts[i] as number, starts[i + 1] as number)
      }
    }
  }

  /** Ratios of the first pair inside the ideal interval, without a table: one pass with a pointer that only rises. */
  private climbStairs(): void {
    const { first, slots } = this.task
    const { above, below, bounds } = first
    const { list } = this
    const uppers = slots.values[first.upperSlot] as Float64Array
    const lowers = slots.values[first.lowerSlot] as Float64Array
    const [low, high] = this.idealInterval(list.limit)
    if (high < 0) return
    // The nearest lines first: what they find lowers the limit before the many others are looked at.
    const near = list.limit / 8
    const later: number[] = []
    const misses: number[] = []
    const [smallest, largest] = [(lowers[0] as number) + below, (lowers[lowers.length - 1] as number) + below]
    const start =
      low > 0
        ? placeOf(
            slots.indices[first.upperSlot] as SortedIndex,
            low * smallest * (1 - WIDER) - above * (1 + WIDER),
          )
        : 0
    const end = high * largest * (1 + WIDER)
    const fewest = (1 - WIDER) / high
    const furthest = low > 0 ? (1 + WIDER) / low : Infinity
    let bottom = 0
    for (let i = start; i < uppers.length; i++) {
      const a = (uppers[i] as number) + above
      if (a > end) break
      const least = a === 0 ? 0 : a * fewest - below * (1 + WIDER)
      const most = low > 0 ? a * furthest : Infinity
      while (bottom < lowers.length && (lowers[bottom] as number) < least) bottom++
      for (let j = bottom; j < lowers.length; j++) {
        const b = (lowers[j] as number) + below
        if (b > most) break
        at[RATIO] = a / b
        if (!this.approach()) continue
        if (bounds && !pairAllowed(uppers[i] as number, lowers[j] as number, bounds)) continue
        const member = memberCode(i, j)
        if ((at[MISS] as number) > near) {
          later.push(member)
          misses.push(at[MISS] as number)
        } else this.visitMember(member)
      }
    }
    for (const cut of [near * 3, Infinity]) {
      for (let k = 0; k < later.length; k++) {
        const miss = misses[k] as number
        if (miss > cut || miss > list.limit) continue
        const member = later[k] as number
        at[RATIO] =
          ((uppers[upperOf(first, member)] as number) + above) /
          ((lowers[lowerOf(first, member)] as number) + below)
        misses[k] = Infinity
        if (this.approach()) this.visitMember(member)
      }
    }
  }

  private visitMember(member: number): void {
    const { first, slots } = this.task
    at[LEAST] = memberCost(slots, first, member)
    if (!this.list.hopeless(at[LEAST], 0)) this.visitSecond(member, member + 1)
  }

  /** Works out the line of the ratio in hand; false where no β brings it within the limit. */
  private approach(): boolean {
    const { lines } = this.task
    const { target } = this
    const r = at[RATIO] as number
    const m = lines.inverse ? 1 / (1 + r) : r
    const c0 = lines.pa[0] + lines.pb[0] * m - target[0]
    const c1 = lines.pa[1] + lines.pb[1] * m - target[1]
    const d0 = lines.da[0] + lines.db[0] * m
    const d1 = lines.da[1] + lines.db[1] * m
    at[C0] = c0
    at[C1] = c1
    at[D0] = d0
    at[D1] = d1
    const size = Math.abs(d0) + Math.abs(d1)
    const miss = size > 0 ? Math.abs(c0 * d1 - c1 * d0) / size : Math.max(Math.abs(c0), Math.abs(c1))
    at[MISS] = miss
    return miss <= this.list.limit
  }

  private visitSecond(from: number, to: number): void {
    const { beta } = this.task
    if (beta.kind === 'table') this.walkRatios(beta, from, to)
    else if (beta.kind === 'shared') this.walkShared(beta, from, to)
    else if (beta.kind === 'loaded') this.walkLoaded(beta.bounds, from, to)
    else this.walkLegs(beta)
  }

  /** Second ratios from their table, outward from the best one. */
  private walkRatios(beta: { table: PairTable } & Factor, from: number, to: number): void {
    const { divider, f0, f1, table } = beta
    const { index, ratios, starts, least } = table
    const { list } = this
    const c0 = at[C0] as number
    const c1 = at[C1] as number
    const d0 = at[D0] as number
    const d1 = at[D1] as number
    const ofFirst = at[LEAST] as number
    if (list.hopeless(ofFirst + table.leastOfAll, 0)) return
    const best = bestFactor()
    const start = placeOf(index, divider ? (best > 0 ? 1 / best - 1 : Infinity) : (best - f0) / f1)
    for (let step = 1; step >= -1; step -= 2) {
      for (let i = step > 0 ? start : start - 1; i >= 0 && i < ratios.length; i += step) {
        const q = ratios[i] as number
        const factor = divider ? 1 / (1 + q) : f0 + f1 * q
        const low = c0 + factor * d0
        const high = c1 + factor * d1
        const error = Math.max(Math.abs(low), Math.abs(high))
        if (!(error <= list.limit)) break
        if (list.hopeless(ofFirst + (least[i] as number), error)) continue
        list.offer(low, high, from, to, starts[i] as number, starts[i + 1] as number)
      }
    }
  }

  /** The only pair there is, with a series resistance: each upper value has its own best lower one. */
  private walkLegs(beta: { above: number; below: number; bounds: PairBounds | null } & Factor): void {
    const { divider, f0, f1 } = beta
    const { second, slots } = this.task
    const uppers = slots.values[second.upperSlot] as Float64Array
    const best = bestFactor()
    const wanted = divider ? (best > 0 ? 1 / best - 1 : Infinity) : (best - f0) / f1
    const rule = { series: beta.below, divider, base: divider ? 1 : f0, scale: f1, bounds: beta.bounds }
    for (let i = 0; i < uppers.length; i++)
      this.walkValues((uppers[i] as number) + beta.above, wanted, rule, ALONE, i)
  }

  /** One further resistor against the first pair's upper leg: every member of the first pair asks for another one. */
  private walkShared(
    beta: { own: number; series: number; divider: boolean },
    from: number,
    to: number,
  ): void {
    const { first, slots } = this.task
    const { divider, own, series } = beta
    const uppers = slots.values[first.upperSlot] as Float64Array
    const best = bestFactor()
    const base = divider ? 1 + (at[RATIO] as number) : 0
    const wanted = divider ? (best > 0 ? 1 / best - base : Infinity) : best
    const rule = { series, divider, base, scale: 1, bounds: null }
    for (let member = from; member < to; member++)
      this.walkValues((uppers[upperOf(first, member)] as number) + own, wanted, rule, member, 0)
  }

  /**
   * Values X of the second pair's lower slot, outward from the best one: q = numerator/(X + series), β = 1/(base + q)
   * where `divider`, else base + scale·q.
   */
  private walkValues(
    numerator: number,
    wanted: number,
    rule: { series: number; divider: boolean; base: number; scale: number; bounds: PairBounds | null },
    member: number,
    upper: number,
  ): void {
    const { first, second, slots } = this.task
    const { list } = this
    const { series, divider, base, scale, bounds } = rule
    const values = slots.values[second.lowerSlot] as Float64Array
    const costs = slots.costs[second.lowerSlot] as Float64Array
    const own = slots.values[second.upperSlot]?.[upper] as number
    const ownCost = slots.costs[second.upperSlot]?.[upper] as number
    const c0 = at[C0] as number
    const c1 = at[C1] as number
    const d0 = at[D0] as number
    const d1 = at[D1] as number
    const start = placeOf(
      slots.indices[second.lowerSlot] as SortedIndex,
      wanted > 0 ? numerator / wanted - series : Infinity,
    )
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
        const cost = memberCost(slots, first, member) + (costs[i] as number) + ownCost
        if (list.hopeless(cost, Math.max(Math.abs(low), Math.abs(high)))) continue
        const code = memberCode(upper, i)
        list.offer(low, high, member, member + 1, code, code + 1)
      }
    }
  }

  /** β = A/(B + Rth): for each member of the first pair a staircase over two lists, in the band of β that is near enough. */
  private walkLoaded(bounds: PairBounds | null, from: number, to: number): void {
    const { first, second, slots } = this.task
    const { list } = this
    const [least, most] = factorBand(list.limit)
    if (!(most >= 0 && least <= most)) return
    const c0 = at[C0] as number
    const c1 = at[C1] as number
    const d0 = at[D0] as number
    const d1 = at[D1] as number
    const firstUppers = slots.values[first.upperSlot] as Float64Array
    const firstLowers = slots.values[first.lowerSlot] as Float64Array
    const uppers = slots.values[second.upperSlot] as Float64Array
    const lowers = slots.values[second.lowerSlot] as Float64Array
    const upperCosts = slots.costs[second.upperSlot] as Float64Array
    const lowerCosts = slots.costs[second.lowerSlot] as Float64Array
    const smallest = lowers[0] as number
    const largest = lowers[lowers.length - 1] as number
    // Where a product of 0 and ∞ comes out as no number, nothing is passed over.
    const fewest = (1 - WIDER) / most
    const furthest = (1 + WIDER) / least
    for (let member = from; member < to; member++) {
      const above = (firstUppers[upperOf(first, member)] as number) + first.above
      const thevenin = 1 / (1 / above + 1 / (firstLowers[lowerOf(first, member)] as number))
      const ofFirst = memberCost(slots, first, member)
      if (list.hopeless(ofFirst, 0)) continue
      const start =
        least > 0
          ? placeOf(
              slots.indices[second.upperSlot] as SortedIndex,
              (smallest + thevenin) * least * (1 - WIDER),
            )
          : 0
      const end = (largest + thevenin) * most * (1 + WIDER)
      let bottom = 0
      for (let i = start; i < uppers.length; i++) {
        const a = uppers[i] as number
        if (a > end) break
        const nearest = a * fewest - thevenin * (1 + WIDER)
        const farthest = a * furthest - thevenin * (1 - WIDER)
        while (bottom < lowers.length && (lowers[bottom] as number) < nearest) bottom++
        for (let j = bottom; j < lowers.length; j++) {
          const b = lowers[j] as number
          if (b > farthest) break
          const factor = a / (b + thevenin)
          const low = c0 + factor * d0
          const high = c1 + factor * d1
          if (!(Math.abs(low) <= list.limit && Math.abs(high) <= list.limit)) continue
          if (bounds && !pairAllowed(a, b, bounds)) continue
          const cost = ofFirst + (upperCosts[i] as number) + (lowerCosts[j] as number)
          if (list.hopeless(cost, Math.max(Math.abs(low), Math.abs(high)))) continue
          const code = memberCode(i, j)
          list.offer(low, high, member, member + 1, code, code + 1)
        }
      }
    }
  }

  /**
   * Ratios r whose line comes within `limit` (V) of the target: lowest, highest, and whether they are one interval, which
   * they are unless the ideal equation has a pole there; then the whole range.
   */
  private idealInterval(limit: number): [number, number, boolean] {
    const { ideal } = this.task
    const [t0, t1] = this.target
    if (!ideal) return [0, Infinity, false]
    const { n, e, inverse } = ideal
    const denominator = e[0] * t0 + e[1] * t1 + e[2]
    if (!(Math.abs(denominator) > limit * (Math.abs(e[0]) + Math.abs(e[1])))) return [0, Infinity, false]
    let low = Infinity
    let high = -Infinity
    for (let corner = 0; corner < 4; corner++) {
      const u0 = t0 + (corner & 1 ? limit : -limit)
      const u1 = t1 + (corner & 2 ? limit : -limit)
      const m = (n[0] * u0 + n[1] * u1 + n[2]) / (e[0] * u0 + e[1] * u1 + e[2])
      low = Math.min(low, m)
      high = Math.max(high, m)
    }
    if (!inverse) return [low, high, true]
    return [high > 0 ? 1 / high - 1 : Infinity, low > 0 ? 1 / low - 1 : Infinity, true]
  }
}

/** The β nearest to the target at both ends: its two errors are equal and opposite in sense. */
function bestFactor(): number {
  const d0 = at[D0] as number
  const d1 = at[D1] as number
  return (
    -(Math.sign(d0) * (at[C0] as number) + Math.sign(d1) * (at[C1] as number)) / (Math.abs(d0) + Math.abs(d1))
  )
}

/** The β with |c_i + β·d_i| ≤ limit at both ends, from 0 up; empty as [1, 0]. */
function factorBand(limit: number): Pair {
  let least = 0
  let most = Infinity
  for (let end = 0; end < 2; end++) {
    const c = at[C0 + end] as number
    const d = at[D0 + end] as number
    if (d === 0) {
      if (Math.abs(c) > limit) return [1, 0]
      continue
    }
    least = Math.max(least, Math.min((-limit - c) / d, (limit - c) / d))
    most = Math.min(most, Math.max((-limit - c) / d, (limit - c) / d))
  }
  return [least, most]
}

/** The least that a pick with this member of the first pair costs: its two values, and their being two. */
function memberCost(slots: Slots, members: Members, member: number): number {
  const { upperSlot, lowerSlot } = members
  const upper = upperOf(members, member)
  const lower = lowerOf(members, member)
  const a = (slots.values[upperSlot] as Float64Array)[upper] as number
  const b = (slots.values[lowerSlot] as Float64Array)[lower] as number
  const own = (slots.costs[upperSlot] as Float64Array)[upper] as number
  return own + ((slots.costs[lowerSlot] as Float64Array)[lower] as number) + pairCost(slots, members, a / b)
}

/** Two resistors of different value are two distinct values; a link, an open place, or what is no part is none. */
function pairCost(slots: Slots, members: Members, ratio: number): number {
  const parts = members.upperSlot < slots.refs.length && members.lowerSlot < slots.refs.length
  return parts && ratio > 0 && ratio < Infinity && ratio !== 1 ? COST.distinct : 0
}
