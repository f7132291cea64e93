/*
 * Seeded random numbers for studies of many boards.
 *
 * Generator: xoshiro128** 1.1, period 2^128 − 1. Source: Blackman and Vigna, "Scrambled linear pseudorandom number
 * generators", ACM Trans. Math. Softw. 47 (2021). Streams lie 2^64 numbers apart (its `jump`), so that no two of them
 * meet. The seed is spread over the state by the finaliser of MurmurHash3 (Appleby, public domain) over a Weyl sequence.
 *
 * A variable with a stream of its own takes one number per board: board i is the same however boards are cut into
 * blocks. Only integers and the four operations are used, so that every machine draws the same.
 */

/** Polynomial of 2^64 steps for xoshiro128. */
const JUMP = [0x8764000b, 0xf542d2d3, 0x6fa035c3, 0x77f2db5b] as const

/** One stream of random numbers. */
export class RandomStream {
  private a: number
  private b: number
  private c: number
  private d: number

  constructor(state: readonly [number, number, number, number]) {
    ;[this.a, this.b, this.c, this.d] = state
  }

  /** The next 32 bits, 0 to 2^32 − 1. */
  next(): number {
    const scrambled = Math.imul(this.b, 5)
    const result = Math.imul((scrambled << 7) | (scrambled >>> 25), 9) >>> 0
    this.step()
    return result
  }

  /** Fills `count` entries from `start` with numbers spread evenly over ±1, the ends excluded. */
  fillRectangular(target: Float64Array, start: number, count: number): void {
    for (let i = start; i < start + count; i++) target[i] = (this.next() + 0.5) * 2 ** -31 - 1
  }

  /** The same with a normal distribution whose limit of `deviations` standard deviations is scaled to ±1. */
  fillNormal(target: Float64Array, start: number, count: number, deviations: number): void {
    const table = cutNormal(deviations)
    for (let i = start; i < start + count; i++) {
      const bits = this.next()
      const at = 4 * ((bits >>> 19) & (PIECES - 1))
      const t = ((bits & 0x7ffff) + 0.5) * 2 ** -19
      const x = table[at]! + t * (table[at + 1]! + t * (table[at + 2]! + t * table[at + 3]!))
      target[i] = bits >= 2 ** 31 ? x : -x
    }
  }

  /** The stream that begins 2^64 numbers further on. */
  jumped(): RandomStream {
    const walker = new RandomStream([this.a, this.b, this.c, this.d])
    const sum: [number, number, number, number] = [0, 0, 0, 0]
    for (const word of JUMP) {
      for (let bit = 0; bit < 32; bit++) {
        if (word & (1 << bit)) {
          sum[0] ^= walker.a
          sum[1] ^= walker.b
          sum[2] ^= walker.c
          sum[3] ^= walker.d
        }
        walker.step()
      }
    }
    return new RandomStream(sum)
  }

  private step(): void {
    const shifted = this.b << 9
    this.c ^= this.a
    this.d ^= this.b
    this.b ^= this.c
    this.a ^= this.d
    this.c ^= shifted
    this.d = (this.d << 11) | (this.d >>> 21)
  }
}

/** `count` streams of one seed (an integer of at most 32 bits) that never meet. */
export function createStreams(seed: number, count: number): RandomStream[] {
  let stream = new RandomStream([scatter(seed, 1), scatter(seed, 2), scatter(seed, 3), scatter(seed, 4)])
  return Array.from({ length: count }, () => {
    const given = stream
    stream = stream.jumped()
    return given
  })
}

/** 32 bits from a seed and a place; never 0 at all four places, since the map from the sum is one to one. */
function scatter(seed: number, place: number): number {
  let h = (seed + Math.imul(place, 0x9e3779b9)) | 0
  h = Math.imul(h ^ (h >>> 16), 0x85ebca6b)
  h = Math.imul(h ^ (h >>> 13), 0xc2b2ae35)
  return h ^ (h >>> 16)
}

/** Pieces of the inverse distribution for its upper half. */
const PIECES = 4096

const tables = new Map<number, Float64Array>()

/**
 * Coefficients of a cubic for each piece of the inverse of the cut normal distribution, upper half, limit scaled to 1.
 * The inverse x(u) has the slope 1/φ(x): values and slopes at the ends of each piece are met exactly, which is within
 * 3e-7 standard deviations throughout for a cut at 3 (worst at the cut).
 */
function cutNormal(deviations: number): Float64Array {
  const known = tables.get(deviations)
  if (known) return known
  if (!(deviations > 0 && deviations <= 5))
    throw new RangeError(`A normal distribution cut at ${deviations} standard deviations; it needs 0 to 5`)
  const half = centralArea(deviations)
  const width = half / PIECES
  const table = new Float64Array(4 * PIECES)
  let [x0, slope0] = [0, width / density(0)]
  for (let piece = 0; piece < PIECES; piece++) {
    const x1 = piece + 1 === PIECES ? deviations : inverseArea((piece + 1) * width, x0 + slope0)
    const slope1 = width / density(x1)
    const rise = x1 - x0
    table.set(
      [x0, slope0, 3 * rise - 2 * slope0 - slope1, slope0 + slope1 - 2 * rise].map((c) => c / deviations),
      4 * piece,
    )
    x0 = x1
    slope0 = slope1
  }
  tables.set(deviations, table)
  return table
}

const density = (x: number): number => Math.exp(-0.5 * x * x) / Math.sqrt(2 * Math.PI)

/** Area of the standard normal density from 0 to x: φ(x)·(x + x³/3 + x⁵/15 + …). Source: Abramowitz and Stegun 26.2.11. */
function centralArea(x: number): number {
  let term = x
  let sum = x
  for (let n = 3; term > 1e-17 * sum; n += 2) {
    term *= (x * x) / n
    sum += term
  }
  return density(x) * sum
}

/** x with that area, by Newton's method from a guess nearby. */
function inverseArea(area: number, guess: number): number {
  let x = guess
  for (let turn = 0; turn < 8; turn++) {
    const change = (centralArea(x) - area) / density(x)
    x -= change
    if (Math.abs(change) < 1e-15) break
  }
  return x
}
