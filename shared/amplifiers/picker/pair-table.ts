import { sortedIndex, type SortedIndex } from './sorted-index.ts'
import type { ValueList } from './value-list.ts'

/** Demands on the two resistors of a pair, with every bound present. Ω */
export interface PairBounds {
  minimumSum: number
  minimumParallel: number
  maximumParallel: number
}

/**
 * Every distinct ratio (A + above)/(B + below) of two lists, ascending, with the pairs that make it: those of ratio i
 * are `upper[j]`, `lower[j]` (indices into the lists) for starts[i] ≤ j < starts[i + 1].
 */
export interface PairTable {
  ratios: Float64Array
  index: SortedIndex
  starts: Uint32Array
  upper: Uint16Array
  lower: Uint16Array
  /** Costs of the two lists' values for which `least` holds: the smallest sum of the two, per ratio and over all. */
  priced: readonly [Float64Array, Float64Array] | null
  least: Float64Array
  leastOfAll: number
}

/** Ratios closer than this are one: they differ by the rounding of a sum and a division. */
const SAME = 1e-14

/** By the ids of two lists where nothing else matters, else by everything in words. */
const tables = new Map<number | string, PairTable>()
const ID_LIMIT = 2 ** 26
/** Bound on pairs kept, 12 bytes each and 8 more per distinct ratio. */
const PAIRS_KEPT = 6_000_000
let kept = 0

/**
 * The table of a pair of lists, kept while it is in use. Series resistances `above` and `below` in Ω; `bounds` removes
 * pairs before anything is searched. Empty where no pair is allowed.
 */
export function pairTable(
  upper: ValueList,
  lower: ValueList,
  above: number,
  below: number,
  bounds: PairBounds | null,
): PairTable {
  const plain = above === 0 && below === 0 && !bounds
  const key = plain
    ? upper.id * ID_LIMIT + lower.id
    : [
        upper.id,
        lower.id,
        above,
        below,
        bounds?.minimumSum,
        bounds?.minimumParallel,
        bounds?.maximumParallel,
      ].join()
  const known = tables.get(key)
  if (known) return known
  const table = build(upper, lower, above, below, bounds)
  if (kept + table.upper.length > PAIRS_KEPT) {
    tables.clear()
    kept = 0
  }
  tables.set(key, table)
  kept += table.upper.length
  return table
}

/**
 * Fills in the least costs of a table, from the costs of the two lists' values, and puts the pairs of each ratio in the
 * order of their cost.
 */
export function priceTable(table: PairTable, upper: Float64Array, lower: Float64Array): void {
  if (table.priced?.[0] === upper && table.priced[1] === lower) return
  table.leastOfAll = Infinity
  const costOf = (j: number): number =>
    (upper[table.upper[j] as number] as number) + (lower[table.lower[j] as number] as number)
  for (let i = 0; i < table.ratios.length; i++) {
    const from = table.starts[i] as number
    const to = table.starts[i + 1] as number
    for (let j = from + 1; j < to; j++) {
      const cost = costOf(j)
      const [a, b] = [table.upper[j] as number, table.lower[j] as number]
      let place = j
      while (place > from && costOf(place - 1) > cost) {
        table.upper[place] = table.upper[place - 1] as number
        table.lower[place] = table.lower[place - 1] as number
        place--
      }
      table.upper[place] = a
      table.lower[place] = b
    }
    const least = costOf(from)
    table.least[i] = least
    if (least < table.leastOfAll) table.leastOfAll = least
  }
  table.priced = [upper, lower]
}

/** Whether two chosen values satisfy their bounds; a resistor left open counts as infinite. */
export function pairAllowed(a: number, b: number, bounds: PairBounds): boolean {
  if (a + b < bounds.minimumSum) return false
  const parallel = 1 / (1 / a + 1 / b)
  return parallel >= bounds.minimumParallel && parallel <= bounds.maximumParallel
}

function build(
  upper: ValueList,
  lower: ValueList,
  above: number,
  below: number,
  bounds: PairBounds | null,
): PairTable {
  const width = lower.values.length
  const order = sortedPairs(upper, lower, above, below, bounds)
  const ratioOf = (pair: number): number =>
    ((upper.values[(pair / width) | 0] as number) + above) / ((lower.values[pair % width] as number) + below)
  const size = order.length
  const ratios = new Float64Array(size)
  const starts = new Uint32Array(size + 1)
  const uppers = new Uint16Array(size)
  const lowers = new Uint16Array(size)
  let count = 0
  for (let j = 0; j < size; j++) {
    const pair = order[j] as number
    const ratio = ratioOf(pair)
    if (count === 0 || !(ratio <= (ratios[count - 1] as number) * (1 + SAME))) {
      ratios[count] = ratio
      starts[count++] = j
    }
    uppers[j] = (pair / width) | 0
    lowers[j] = pair % width
  }
  starts[count] = size
  const distinct = ratios.slice(0, count)
  return {
    ratios: distinct,
    index: sortedIndex(distinct),
    starts: starts.slice(0, count + 1),
    upper: uppers,
    lower: lowers,
    priced: null,
    least: new Float64Array(count),
    leastOfAll: Infinity,
  }
}

/**
 * Allowed pairs (index of upper × number of lowers + index of lower) in the order of their ratios. The pair's number
 * rides in the lowest bits of its ratio, so that the built-in sort of doubles, much the fastest, carries it along; a
 * pass over the result then mends the order of ratios that only those bits told apart.
 */
function sortedPairs(
  upper: ValueList,
  lower: ValueList,
  above: number,
  below: number,
  bounds: PairBounds | null,
): Uint32Array {
  const width = lower.values.length
  const total = upper.values.length * width
  const mask = total <= 1 ? 0 : 2 ** Math.ceil(Math.log2(total)) - 1
  const keys = new Float64Array(total)
  const words = new Uint32Array(keys.buffer)
  const low = LITTLE_ENDIAN ? 0 : 1
  const infinite: number[] = []
  let size = 0
  for (let i = 0; i < upper.values.length; i++) {
    const a = upper.values[i] as number
    for (let j = 0; j < width; j++) {
      const b = lower.values[j] as number
      const ratio = (a + above) / (b + below)
      if (Number.isNaN(ratio) || (bounds && !pairAllowed(a, b, bounds))) continue
      if (ratio === Infinity) {
        infinite.push(i * width + j)
        continue
      }
      keys[size] = ratio
      const word = 2 * size + low
      words[word] = (((words[word] as number) & ~mask) | (i * width + j)) >>> 0
      size++
    }
  }
  keys.subarray(0, size).sort()
  const order = new Uint32Array(size + infinite.length)
  const exact = new Float64Array(size)
  for (let k = 0; k < size; k++) {
    const pair = (words[2 * k + low] as number) & mask
    const ratio =
      ((upper.values[(pair / width) | 0] as number) + above) /
      ((lower.values[pair % width] as number) + below)
    let place = k
    while (place > 0 && (exact[place - 1] as number) > ratio) {
      exact[place] = exact[place - 1] as number
      order[place] = order[place - 1] as number
      place--
    }
    exact[place] = ratio
    order[place] = pair
  }
  order.set(infinite, size)
  return order
}

const LITTLE_ENDIAN = new Uint8Array(new Uint32Array([1]).buffer)[0] === 1
