import type { SortedIndex } from './sorted-index.ts'
import { COST, COST_STEP, totalCost } from './cost.ts'

/** Resistors of a search. Slots from `refs.length` on are no parts: a fixed resistor inside a part, or none at all. */
export interface Slots {
  refs: readonly string[]
  values: readonly Float64Array[]
  indices: readonly SortedIndex[]
  /** Cost of each value by itself. */
  costs: readonly Float64Array[]
}

/**
 * Pairs of two slots. In a table, `upper[j]` and `lower[j]` index their values. Without one both are empty and a member
 * is a code made of the two indices (`memberCode`), below 0 to tell it from a place in a table.
 */
export interface Members {
  upperSlot: number
  lowerSlot: number
  upper: Uint16Array
  lower: Uint16Array
}

/** Every member firstFrom ≤ j < firstTo of the first pair with every such member of the second; a code stands alone. */
interface Hit {
  firstFrom: number
  firstTo: number
  secondFrom: number
  secondTo: number
}

export interface Found {
  /** Misses of the target at the two ends, V. */
  low: number
  high: number
  /** Larger of the two, V. */
  error: number
  /** Ω by slot. */
  values: number[]
  /** Sum of the values' own costs, number of distinct ones, and the cost with the error's share. */
  sum: number
  distinct: number
  cost: number
}

interface Entry extends Found {
  /** What makes these end points, as long as the cheapest has not been chosen. */
  hits: Hit[]
}

/** End points that agree this well, as a fraction of the span, are the same end points. */
export const SAME_ENDS = 1e-11

const CODE = 65536

export const memberCode = (upper: number, lower: number): number => -1 - (upper * CODE + lower)
export const upperOf = (members: Members, member: number): number =>
  member < 0 ? ((-1 - member) / CODE) | 0 : (members.upper[member] as number)
export const lowerOf = (members: Members, member: number): number =>
  member < 0 ? (-1 - member) % CODE : (members.lower[member] as number)

/**
 * The first few picks with distinct end points, by error or by cost. Of picks with the same end points the cheapest
 * stands for all; equal costs are settled by the values in the order of the refs. The order in which picks are offered
 * does not matter.
 */
/** Ways to one pair of end points that are kept before their costs decide: where nothing depends on β they are many. */
const MOST_HITS = 10_000

export class ShortList {
  /** Errors above this, V, cannot enter any more. */
  limit = Infinity
  /** Costs above this cannot enter any more. */
  private costLimit = Infinity
  private entries: Entry[] = []
  private readonly same: number
  /** Turns an error in V into its share of the cost. */
  private readonly share: number
  private readonly byCost: boolean
  /** Indices and values of the member that is being looked at, and the values of the best one so far. */
  private readonly index: number[]
  private readonly trial: number[]
  private chosen: number[] = []
  private hasChosen = false
  private chosenCost = 0
  private chosenSum = 0
  private chosenDistinct = 0
  private sum = 0
  private distinct = 0

  constructor(
    private readonly slots: Slots,
    private readonly first: Members,
    private readonly second: Members,
    /** Target span, V. */
    span: number,
    private readonly count: number,
    /** Threshold of the error, V, where the cost decides; null where the error does. */
    threshold: number | null,
    /** A demand on all values together. */
    private readonly allows: ((values: readonly number[]) => boolean) | null,
  ) {
    this.same = span * SAME_ENDS
    this.byCost = threshold !== null
    this.share = threshold === null ? 0 : COST.error / threshold
    this.index = slots.values.map(() => 0)
    this.trial = slots.values.map(() => Infinity)
  }

  /** Starts over with errors up to `limit`, V. */
  open(limit: number): void {
    this.entries.length = 0
    this.limit = limit + this.same
    this.costLimit = Infinity
  }

  get full(): boolean {
    return this.entries.length >= this.count
  }

  /** True where values that cost at least `sum` by themselves cannot enter with this error, V. */
  hopeless(sum: number, error: number): boolean {
    return sum + error * this.share > this.costLimit + COST_STEP
  }

  /** Offers a hit whose ends miss by `low` and `high`, V. */
  offer(
    low: number,
    high: number,
    firstFrom: number,
    firstTo: number,
    secondFrom: number,
    secondTo: number,
  ): void {
    const hit: Hit = { firstFrom, firstTo, secondFrom, secondTo }
    const error = Math.max(Math.abs(low), Math.abs(high))
    // Equal errors pile up where one end does not depend on β; now and then their costs decide.
    if (this.entries.length > 4 * this.count) this.settle()
    const known = this.sameEnds(low, high)
    // By error alone the choice among equal end points can wait; a demand or the cost cannot.
    const waits = !this.byCost && !this.allows
    if (waits && known >= 0) {
      const hits = this.entries[known]?.hits ?? []
      hits.push(hit)
      if (hits.length >= MOST_HITS) this.settle()
      return
    }
    if (!waits) {
      this.begin(this.costLimit)
      this.choose(hit, error)
      if (!this.hasChosen) return
    }
    if (known >= 0) {
      if (!this.precedes(this.chosenCost, this.chosen, this.entries[known] as Entry)) return
      this.entries.splice(known, 1)
    }
    this.insert(
      waits
        ? { low, high, error, values: [], sum: 0, distinct: 0, cost: 0, hits: [hit] }
        : { low, high, error, ...this.choice(), hits: [] },
    )
  }

  /** The picks, in order. */
  get found(): readonly Found[] {
    this.settle()
    return this.entries
  }

  /** Chooses the cheapest of each set of equal end points, and between equal errors by cost. */
  private settle(): void {
    for (const entry of this.entries) {
      if (entry.hits.length === 0) continue
      this.hasChosen = entry.values.length > 0
      this.chosen = entry.values
      this.chosenSum = entry.sum
      this.chosenDistinct = entry.distinct
      this.chosenCost = this.hasChosen ? entry.cost : Infinity
      for (const hit of entry.hits) this.choose(hit, entry.error)
      entry.values = this.chosen
      entry.sum = this.chosenSum
      entry.distinct = this.chosenDistinct
      entry.cost = this.chosenCost
      entry.hits = []
    }
    this.entries.sort((a, b) => this.order(a, b))
    if (this.entries.length > this.count) this.entries.length = this.count
  }

  private begin(costLimit: number): void {
    this.hasChosen = false
    this.chosenCost = costLimit
  }

  private choice(): Pick<Found, 'values' | 'sum' | 'distinct' | 'cost'> {
    return {
      values: this.chosen,
      sum: this.chosenSum,
      distinct: this.chosenDistinct,
      cost: this.chosenCost,
    }
  }

  private sameEnds(low: number, high: number): number {
    const { entries, same } = this
    for (let i = 0; i < entries.length; i++) {
      const entry = entries[i] as Entry
      if (Math.abs(entry.low - low) <= same && Math.abs(entry.high - high) <= same) return i
    }
    return -1
  }

  private insert(entry: Entry): void {
    const { entries, count } = this
    let place = entries.length
    while (place > 0 && this.order(entry, entries[place - 1] as Entry) < 0) place--
    entries.splice(place, 0, entry)
    const last = entries[count - 1]
    if (!last) return
    const waits = !this.byCost && !this.allows
    // Equal errors stay until their costs are known.
    while (entries.length > count && !(waits && this.step(entries.at(-1) as Entry) === this.step(last)))
      entries.pop()
    if (this.byCost) this.costLimit = last.cost
    else this.limit = Math.min(this.limit, last.error + this.same)
  }

  /** The cheapest allowed member of a hit, into `chosen`, if it is no dearer than `chosenCost`. */
  private choose(hit: Hit, error: number): void {
    const { slots, first, second, trial, index } = this
    const share = error * this.share
    const a = first.upperSlot
    const b = first.lowerSlot
    const c = second.upperSlot
    const d = second.lowerSlot
    const valuesA = slots.values[a] as Float64Array
    const valuesB = slots.values[b] as Float64Array
    const valuesC = slots.values[c] as Float64Array
    const valuesD = slots.values[d] as Float64Array
    const costsA = slots.costs[a] as Float64Array
    const costsB = slots.costs[b] as Float64Array
    const costsC = slots.costs[c] as Float64Array
    const costsD = slots.costs[d] as Float64Array
    const firstTo = hit.firstFrom < 0 ? hit.firstFrom + 1 : hit.firstTo
    const secondTo = hit.secondFrom < 0 ? hit.secondFrom + 1 : hit.secondTo
    for (let i = hit.firstFrom; i < firstTo; i++) {
      const ia = upperOf(first, i)
      const ib = lowerOf(first, i)
      const ofFirst = (costsA[ia] as number) + (costsB[ib] as number) + share
      // Pairs of one ratio are in the order of their cost.
      if (ofFirst > this.chosenCost + COST_STEP) break
      for (let j = hit.secondFrom; j < secondTo; j++) {
        const ic = upperOf(second, j)
        const id = lowerOf(second, j)
        if (ofFirst + (costsC[ic] as number) + (costsD[id] as number) > this.chosenCost + COST_STEP) break
        index[a] = ia
        index[b] = ib
        index[c] = ic
        index[d] = id
        trial[a] = valuesA[ia] as number
        trial[b] = valuesB[ib] as number
        trial[c] = valuesC[ic] as number
        trial[d] = valuesD[id] as number
        const cost = this.costOf(share)
        if (cost > this.chosenCost) continue
        if (this.hasChosen && cost === this.chosenCost && !this.isLess(trial, this.chosen)) continue
        if (this.allows && !this.allows(trial)) continue
        this.hasChosen = true
        this.chosenCost = cost
        this.chosenSum = this.sum
        this.chosenDistinct = this.distinct
        this.chosen = trial.slice()
      }
    }
  }

  /** Summed in the order of the refs, so that one set of values has one cost whichever way it was found. */
  private costOf(share: number): number {
    const { slots, trial, index } = this
    let sum = 0
    let distinct = 0
    for (let i = 0; i < slots.refs.length; i++) {
      const value = trial[i] as number
      sum += (slots.costs[i] as Float64Array)[index[i] as number] as number
      if (value === 0 || value === Infinity) continue
      let earlier = 0
      while (trial[earlier] !== value) earlier++
      if (earlier === i) distinct++
    }
    this.sum = sum
    this.distinct = distinct
    return totalCost(sum, distinct, share)
  }

  private isLess(one: readonly number[], other: readonly number[]): boolean {
    for (let i = 0; i < this.slots.refs.length; i++) {
      // A resistor that is left open saves a part, so it comes before every value.
      if (one[i] !== other[i])
        return other[i] !== Infinity && (one[i] === Infinity || (one[i] as number) < (other[i] as number))
    }
    return false
  }

  private precedes(cost: number, values: readonly number[], other: Found): boolean {
    return cost !== other.cost ? cost < other.cost : this.isLess(values, other.values)
  }

  /** Errors in steps within which they count as equal. */
  private step(found: Found): number {
    return this.byCost ? 0 : Math.round(found.error / this.same)
  }

  private order(one: Found, other: Found): number {
    const steps = this.step(one) - this.step(other)
    if (steps !== 0) return steps
    if (this.precedes(one.cost, one.values, other)) return -1
    return this.precedes(other.cost, other.values, one) ? 1 : 0
  }
}
