/** f(t) = value + slope·t − Σ weights·|offsets + slopes·t| over the first `count` terms, weights ≥ 0: concave, so that
 * f ≥ 0 holds on one interval. */
export interface ConcaveMargin {
  count: number
  value: number
  slope: number
  weights: Float64Array
  offsets: Float64Array
  slopes: Float64Array
}

export interface ClipEnds {
  clipLow: Float64Array
  clipHigh: Float64Array
  clipEmpty: Uint8Array
}

/** Ends further than this many spans of the variable away are no ends: the slope there is rounding. */
const FURTHEST = 1e6

/** Narrows the interval kept at `entry` to where f ≥ 0 as well. `span` is the size of the variable's usual range. */
export function narrowClipRange(margin: ConcaveMargin, span: number, ends: ClipEnds, entry: number): void {
  const furthest = FURTHEST * span
  // f is at least floor + slope·t − steepness·|t|: most boards are settled by that alone
  let floor = margin.value
  let steepness = 0
  for (let k = 0; k < margin.count; k++) {
    floor -= margin.weights[k]! * Math.abs(margin.offsets[k]!)
    steepness += margin.weights[k]! * Math.abs(margin.slopes[k]!)
  }
  const knownHigh = ends.clipHigh[entry]!
  if (!staysAbove(floor, margin.slope - steepness, knownHigh)) {
    const high = endInDirection(margin, 1, knownHigh, furthest)
    if (high === -Infinity) ends.clipEmpty[entry] = 1
    else if (high < knownHigh) ends.clipHigh[entry] = high
  }
  const knownLow = ends.clipLow[entry]!
  if (!staysAbove(floor, -margin.slope - steepness, -knownLow)) {
    const low = -endInDirection(margin, -1, -knownLow, furthest)
    if (low === Infinity) ends.clipEmpty[entry] = 1
    else if (low > knownLow) ends.clipLow[entry] = low
  }
}

/** True where floor + slope·t, rising or falling from a floor at or above zero, is no less than zero from 0 to `end`. */
function staysAbove(floor: number, slope: number, end: number): boolean {
  return floor >= 0 && end >= 0 && (slope >= 0 || floor + slope * end >= 0)
}

/**
 * Largest t·direction at which f ≥ 0, if it is below `known`; Infinity where there is no such end, -Infinity where f is
 * negative throughout. Newton's method from outside: on a concave piecewise linear function each step lands on the next
 * piece's own root, so it ends after at most one step per piece.
 */
function endInDirection(margin: ConcaveMargin, direction: 1 | -1, known: number, furthest: number): number {
  let at = known
  if (!Number.isFinite(known)) {
    // far out, f is the line of its last piece
    let value = margin.value
    let slope = margin.slope * direction
    for (let k = 0; k < margin.count; k++) {
      const side = margin.slopes[k]! * direction
      const sign = side === 0 ? Math.sign(margin.offsets[k]!) : Math.sign(side)
      value -= margin.weights[k]! * sign * margin.offsets[k]!
      slope -= margin.weights[k]! * Math.abs(side)
    }
    if (slope >= 0) return valueWhereFlat(value, slope, furthest)
    at = -value / slope
    if (at > furthest) return Infinity
  }
  for (let step = 0; step <= margin.count + 1; step++) {
    let value = margin.value + margin.slope * direction * at
    let slope = margin.slope * direction
    for (let k = 0; k < margin.count; k++) {
      const side = margin.slopes[k]! * direction
      const inside = margin.offsets[k]! + side * at
      value -= margin.weights[k]! * Math.abs(inside)
      // the slope towards smaller t: outside pieces count
      slope -= margin.weights[k]! * (inside > 0 ? side : inside < 0 ? -side : Math.abs(side))
    }
    if (value >= -1e-15) return at < known ? at : Infinity
    if (slope >= 0) return valueWhereFlat(value, slope, furthest)
    const next = at - value / slope
    if (!(next < at)) return at
    if (next < -furthest) return -Infinity
    at = next
  }
  return at
}

/** No end where f rises outward, or stays level at or above zero; nothing at all where it stays level below. */
function valueWhereFlat(value: number, slope: number, furthest: number): number {
  return slope * furthest < -value ? -Infinity : Infinity
}
