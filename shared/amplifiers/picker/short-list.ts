import { COST, totalCost } from './cost.ts'

/** Resistors of a search. Slots from `refs.length` on are no parts: a fixed resistor inside a part, or none at all. */
export interface Slots {
  refs: readonly string[]
  values: readonly Float64Array[]
  costs: readonly Float64Array[]
}

/** Pairs that make one ratio: `upper[j]`, `lower[j]` index the values of two slots. */
export interface Members {
  upperSlot: number
  lowerSlot: number
  upper: Uint16Array
  lower: Uint16Array
}

export interface Found {
  /** Misses of the target at the two ends, V. */
  low: number
  high: number
  /** Larger of the two, V. */
  error: number
  cost: number
  /** Ω by slot */
  values: Float64Array
}

/** End points that agree this well, as a fraction of the span, are the same end points. */
export const SAME_ENDS = 1e-11

/**
 * The first few picks with distinct end points, by error or by cost. Of picks with the same end points the cheapest
 * stands for all; equal costs are settled by the values in the order of the refs. The order in which picks are offered
 * does not matter.
 */
export class ShortList {
  readonly found: Found[] = []
  /** Errors above this, V, cannot enter any more. */
  limit = Infinity
  /** Costs above this cannot enter any more. */
  costLimit = Infinity
  private readonly trial: Float64Array
  private readonly index: Uint16Array
  private readonly chosen: Float64Array
  private chosenCost = 0
  private readonly same: number

  constructor(
    private readonly slots: Slots,
    private readonly first: Members,
    private readonly second: Members,
    /** Target span, V. */
    span: number,
    private readonly count: number,
    /** Threshold of the error, V, where the cost decides; null where the error does. */
    private readonly threshold: number | null,
    /** A demand on all values together. */
    private readonly allows: ((values: Float64Array) => boolean) | null,
  ) {
    this.same = span * SAME_ENDS
    this.trial = new Float64Array(slots.values.length)
    this.index = new Uint16Array(slots.values.length)
    this.chosen = new Float64Array(slots.values.length)
  }

  /** Starts over with errors up to `limit`, V. */
  open(limit: number): void {
    this.found.length = 0
    this.limit = limit + this.same
    this.costLimit = Infinity
  }

  get full(): boolean {
    return this.found.length >= this.count
  }

  /** What the cost can be at least for values that cost `sum` by themselves at this error, V. */
  hopeless(sum: number, error: number): boolean {
    return this.threshold !== null && sum + (COST.error * error) / this.threshold > this.costLimit + MARGIN
  }

  /** A hit: every member firstFrom ≤ j < firstTo of the first pair with every such member of the second. */
  offer(
    low: number,
    high: number,
    firstFrom: number,
    firstTo: number,
    secondFrom: number,
    secondTo: number,
  ): void {
    const error = Math.max(Math.abs(low), Math.abs(high))
    if (!this.choose(error, firstFrom, firstTo, secondFrom, secondTo)) return
    const { found, same } = this
    for (let i = 0; i < found.length; i++) {
      const other = found[i] as Found
      if (Math.abs(other.low - low) > same || Math.abs(other.high - high) > same) continue
      if (!this.precedes(this.chosenCost, this.chosen, other)) return
      found.splice(i, 1)
      break
    }
    const entry: Found = { low, high, error, cost: this.chosenCost, values: this.chosen.slice() }
    let place = found.length
    while (place > 0 && this.before(entry, found[place - 1] as Found)) place--
    found.splice(place, 0, entry)
    if (found.length > this.count) found.pop()
    if (found.length === this.count) this.tighten(found[this.count - 1] as Found)
  }

  /** The cheapest allowed member of a hit, into `chosen`. */
  private choose(
    error: number,
    firstFrom: number,
    firstTo: number,
    secondFrom: number,
    secondTo: number,
  ): boolean {
    const { slots, first, second, trial, index, chosen } = this
    const share = this.threshold === null ? 0 : error / this.threshold
    const a = slots.values[first.upperSlot] as Float64Array
    const b = slots.values[first.lowerSlot] as Float64Array
    const c = slots.values[second.upperSlot] as Float64Array
    const d = slots.values[second.lowerSlot] as Float64Array
    const costA = slots.costs[first.upperSlot] as Float64Array
    const costB = slots.costs[first.lowerSlot] as Float64Array
    const costC = slots.costs[second.upperSlot] as Float64Array
    const costD = slots.costs[second.lowerSlot] as Float64Array
    let least = this.costLimit
    let any = false
    for (let i = firstFrom; i < firstTo; i++) {
      const ia = first.upper[i] as number
      const ib = first.lower[i] as number
      const costFirst = (costA[ia] as number) + (costB[ib] as number) + COST.error * share
      if (costFirst > least + MARGIN) continue
      index[first.upperSlot] = ia
      index[first.lowerSlot] = ib
      trial[first.upperSlot] = a[ia] as number
      trial[first.lowerSlot] = b[ib] as number
      for (let j = secondFrom; j < secondTo; j++) {
        const ic = second.upper[j] as number
        const id = second.lower[j] as number
        if (costFirst + (costC[ic] as number) + (costD[id] as number) > least + MARGIN) continue
        // A first pair and a second may share a slot that stands for no part, never a resistor.
        trial[second.upperSlot] = c[ic] as number
        trial[second.lowerSlot] = d[id] as number
        index[second.upperSlot] = ic
        index[second.lowerSlot] = id
        const cost = this.costOf(share)
        if (cost > least || (any && cost === least && !this.isLess(trial, chosen))) continue
        if (this.allows && !this.allows(trial)) continue
        least = cost
        any = true
        chosen.set(trial)
      }
    }
    this.chosenCost = least
    return any
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
    return totalCost(sum, distinct, share)
  }

  private isLess(one: Float64Array, other: Float64Array): boolean {
    for (let i = 0; i < this.slots.refs.length; i++) {
      if (one[i] !== other[i]) return (one[i] as number) < (other[i] as number)
    }
    return false
  }

  private precedes(cost: number, values: Float64Array, other: Found): boolean {
    return cost !== other.cost ? cost < other.cost : this.isLess(values, other.values)
  }

  private before(one: Found, other: Found): boolean {
    if (this.threshold === null) {
      const [a, b] = [Math.round(one.error / this.same), Math.round(other.error / this.same)]
      if (a !== b) return a < b
    }
    return this.precedes(one.cost, one.values, other)
  }

  private tighten(last: Found): void {
    if (this.threshold === null) this.limit = Math.min(this.limit, last.error + this.same)
    else this.costLimit = last.cost
  }
}

/** More than the rounding of a cost, which is to the millionth. */
const MARGIN = 1e-6
