/**
 * Ascending numbers ≥ 0 (∞ allowed) with a table that finds a place among them at once. The leading bits of a positive
 * double rise with its value and split every octave evenly, so they number buckets that hold about one value each.
 */
export interface SortedIndex {
  values: Float64Array
  /** Places of the first and one past the last value that is neither 0 nor infinite. */
  from: number
  to: number
  /** Place of the first value in bucket b or later. */
  starts: Uint32Array
  /** Number of the first bucket, and the bits to drop from the upper word. */
  base: number
  shift: number
}

const probe = new Float64Array(1)
const words = new Uint32Array(probe.buffer)
const UPPER = new Uint8Array(new Uint32Array([1]).buffer)[0] === 1 ? 1 : 0
/** Bits of the mantissa in the upper word. */
const MANTISSA_BITS = 20

export function sortedIndex(values: Float64Array): SortedIndex {
  let from = 0
  let to = values.length
  while (from < to && values[from] === 0) from++
  while (to > from && values[to - 1] === Infinity) to--
  if (from === to) return { values, from, to, starts: new Uint32Array(0), base: 0, shift: 0 }
  const octaves = Math.log2((values[to - 1] as number) / (values[from] as number)) + 1
  const bits = Math.min(MANTISSA_BITS, Math.max(0, Math.ceil(Math.log2((to - from) / octaves))))
  const shift = MANTISSA_BITS - bits
  const base = bucket(values[from] as number, shift)
  const starts = new Uint32Array(bucket(values[to - 1] as number, shift) - base + 1)
  let place = from
  for (let b = 0; b < starts.length; b++) {
    while (bucket(values[place] as number, shift) - base < b) place++
    starts[b] = place
  }
  return { values, from, to, starts, base, shift }
}

/** Place of the first value not below `wanted`; the length where there is none, 0 for NaN. */
export function placeOf(index: SortedIndex, wanted: number): number {
  const { values, from, to } = index
  if (!(wanted > 0)) return 0
  if (from === to || !(wanted > (values[from] as number))) return from
  if (wanted > (values[to - 1] as number)) return to
  let place = index.starts[bucket(wanted, index.shift) - index.base] as number
  while ((values[place] as number) < wanted) place++
  return place
}

function bucket(value: number, shift: number): number {
  probe[0] = value
  return (words[UPPER] as number) >>> shift
}
