import { valueCost } from './cost.ts'
import { sortedIndex, type SortedIndex } from './sorted-index.ts'

/** Allowed values of one resistor, ascending and distinct, with what each costs by itself. */
export interface ValueList {
  /** The same for every array with the same members. */
  id: number
  values: Float64Array
  index: SortedIndex
  /** Ω for which `costs` holds. */
  preferred: number
  costs: Float64Array
  /** Lists made of a part of this one, by first and last place. */
  parts: Map<number, ValueList>
}

const byArray = new WeakMap<readonly number[], ValueList>()
const byContent = new Map<string, ValueList>()
const KEPT = 512
let lastId = 0

/**
 * The list for an array of allowed values, Ω (0 = link, Infinity = open). Arrays with the same members share one list,
 * so that tables built on it are found again whoever made the array.
 *
 * @throws RangeError for a negative value or one that is not a number
 */
export function toValueList(allowed: readonly number[]): ValueList {
  const known = byArray.get(allowed)
  if (known && (Object.isFrozen(allowed) || holds(known.values, allowed))) return known
  const values = Float64Array.from(new Set(allowed)).sort()
  if (values.some((value) => !(value >= 0)))
    throw new RangeError(
      `An allowed value is 0 or more, in Ω: ${[...values].find((value) => !(value >= 0))} is not`,
    )
  const key = values.join()
  let list = byContent.get(key)
  if (!list) {
    list = makeList(values)
    if (byContent.size >= KEPT) byContent.clear()
    byContent.set(key, list)
  }
  byArray.set(allowed, list)
  return list
}

/** The values from place `from` up to, but not including, place `to` of a list. */
export function partOf(list: ValueList, from: number, to: number): ValueList {
  if (from === 0 && to === list.values.length) return list
  const key = from * 65536 + to
  let part = list.parts.get(key)
  if (!part) {
    part = makeList(list.values.slice(from, to))
    if (list.parts.size >= KEPT) list.parts.clear()
    list.parts.set(key, part)
  }
  return part
}

function makeList(values: Float64Array): ValueList {
  return {
    id: ++lastId,
    values,
    index: sortedIndex(values),
    preferred: NaN,
    costs: new Float64Array(values.length),
    parts: new Map(),
  }
}

/** An array may have been changed since it was last seen. */
function holds(values: Float64Array, allowed: readonly number[]): boolean {
  if (values.length !== allowed.length) return false
  for (let i = 0; i < values.length; i++) if (values[i] !== allowed[i]) return false
  return true
}

/** Costs of the list's values about a preferred impedance, Ω; kept until another one is asked for. */
export function listCosts(list: ValueList, preferred: number): Float64Array {
  if (list.preferred === preferred) return list.costs
  list.costs = list.values.map((value) => valueCost(value, preferred))
  list.preferred = preferred
  return list.costs
}
