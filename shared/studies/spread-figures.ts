import type { Ends } from '#shared/design/plan.ts'
import type { Histogram } from './types.ts'

/** Figures of a sample: mean, standard deviation (n − 1), quantiles and histogram. All zero or empty for no values. */
export interface SampleFigures {
  mean: number
  deviation: number
  quantiles: [number, number][]
  histogram: Histogram
}

/** Shares of which the error is told. */
const SHARES = [0.001, 0.025, 0.05, 0.25, 0.5, 0.75, 0.95, 0.975, 0.999]
const FEWEST_BINS = 20
const MOST_BINS = 60
/** Values from which quantiles are taken while a run goes on. */
const GLANCE = 20_000

/**
 * Figures of the first `count` values. `glance` takes quantiles from every so-manieth value instead of all, for a picture
 * that is renewed while the run goes on. `resolution` is the width of the picture where all values are one.
 */
export function describeSample(
  values: Float64Array,
  count: number,
  { glance, resolution }: { glance: boolean; resolution: number },
): SampleFigures {
  if (count === 0) return { mean: 0, deviation: 0, quantiles: [], histogram: evenBins(0, resolution) }
  const all = values.subarray(0, count)
  let [sum, low, high] = [0, Infinity, -Infinity]
  for (const value of all) {
    sum += value
    if (value < low) low = value
    if (value > high) high = value
  }
  const mean = sum / count
  let squares = 0
  for (const value of all) squares += (value - mean) ** 2
  const stride = glance ? Math.ceil(count / GLANCE) : 1
  const sorted = everyNth(all, stride).sort()
  const at = (share: number) => quantileOf(sorted, share)
  return {
    mean,
    deviation: count > 1 ? Math.sqrt(squares / (count - 1)) : 0,
    quantiles: SHARES.map((share) => [share, at(share)]),
    histogram:
      high > low
        ? countBins(all, low, high, { quartiles: at(0.75) - at(0.25), resolution })
        : evenBins(mean, resolution, count),
  }
}

function everyNth(values: Float64Array, stride: number): Float64Array {
  const taken = new Float64Array(Math.ceil(values.length / stride))
  for (let i = 0; i < taken.length; i++) taken[i] = values[i * stride]!
  return taken
}

/** Straight between neighbours: value number share·(n − 1), counted from 0. */
function quantileOf(sorted: Float64Array, share: number): number {
  const place = share * (sorted.length - 1)
  const below = Math.floor(place)
  const from = sorted[below]!
  return from + (place - below) * (sorted[Math.min(below + 1, sorted.length - 1)]! - from)
}

/**
 * Width of a bin 2·IQR·n^(−1/3), as a whole number of codes, since readings come in codes: bins of another width would
 * hold now more of them, now fewer. Source: Freedman and Diaconis, Z. Wahrscheinlichkeitstheorie verw. Gebiete 57 (1981).
 */
function countBins(
  values: Float64Array,
  low: number,
  high: number,
  { quartiles, resolution }: { quartiles: number; resolution: number },
): Histogram {
  const wanted = 2 * quartiles * values.length ** (-1 / 3)
  const least = (high - low + resolution) / MOST_BINS
  const most = (high - low + resolution) / FEWEST_BINS
  const width = Math.max(least, Math.min(wanted > 0 ? wanted : least, most))
  const whole = resolution > 0 ? Math.max(1, Math.ceil(width / resolution - 1e-9)) * resolution : width
  const filled = Math.ceil((high - low + resolution) / whole - 1e-9)
  // Few codes make few bins: empty ones at both sides keep the picture's scale.
  const bins = Math.max(filled, FEWEST_BINS)
  const start = (low + high) / 2 - (bins * whole) / 2
  // Edges lie between codes: half a code below the lowest reading, in whole bins from the start.
  const first = low - resolution / 2 - Math.round((low - resolution / 2 - start) / whole) * whole
  const counts = new Array<number>(bins + 1).fill(0)
  for (const value of values) {
    const at = Math.floor((value - first) / whole)
    counts[Math.min(Math.max(at, 0), bins)]! += 1
  }
  while (counts.length > FEWEST_BINS && counts.at(-1) === 0) counts.pop()
  return { edges: counts.map((_, i) => first + i * whole).concat(first + counts.length * whole), counts }
}

const edgesOf = (low: number, high: number, bins: number): number[] =>
  Array.from({ length: bins + 1 }, (_, i) => (i === bins ? high : low + ((high - low) * i) / bins))

/** A picture around one value that all boards share, if there are any. */
function evenBins(middle: number, width: number, count = 0): Histogram {
  const counts = new Array<number>(FEWEST_BINS + 1).fill(0)
  counts[FEWEST_BINS / 2] = count
  return { edges: edgesOf(middle - width / 2, middle + width / 2, FEWEST_BINS + 1), counts }
}

/** Quantile of the normal distribution for 95 % on both sides. */
const Z = 1.959963984540054

/** Interval of 95 % for a share, from `inside` of `all`. Source: Wilson, J. Am. Stat. Assoc. 22 (1927) 209–212. */
export function wilsonInterval(inside: number, all: number): Ends {
  const share = inside / all
  const weight = Z ** 2 / all
  const middle = (share + weight / 2) / (1 + weight)
  const half = (Z * Math.sqrt((share * (1 - share)) / all + weight / (4 * all))) / (1 + weight)
  return { low: inside === 0 ? 0 : middle - half, high: inside === all ? 1 : middle + half }
}
