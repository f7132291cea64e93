import type { ConcaveMargin } from './clip-range.ts'
import { narrowClipRange } from './clip-range.ts'
import type { Problem } from './extremes-problem.ts'
import { clipSpan } from './extremes-problem.ts'
import type { VertexWalk } from './vertex-walk.ts'

/** Bounds found so far; entry = output · number of cases + case. Clip ends count from the case's clip origin. */
export interface Bounds {
  low: Float64Array
  high: Float64Array
  clipLow: Float64Array
  clipHigh: Float64Array
  clipEmpty: Uint8Array
}

export function createBounds({ outputs, cases }: Problem): Bounds {
  const count = outputs.length * cases
  return {
    low: new Float64Array(count).fill(Infinity),
    high: new Float64Array(count).fill(-Infinity),
    clipLow: new Float64Array(count).fill(-Infinity),
    clipHigh: new Float64Array(count).fill(Infinity),
    clipEmpty: new Uint8Array(count),
  }
}

/**
 * A function that widens `bounds` by the extremes that the sources reach at the walk's present vertex. All of its
 * memory is allocated here: it runs once per vertex.
 */
export function createEvaluator(walk: VertexWalk, bounds: Bounds): () => void {
  const { problem, columns, firstMean, firstPort } = walk
  const { cases, variables, cmrr, clip, clipCase } = problem
  const rowCount = walk.outputs.length
  const clipAt = clip ? variables.indexOf(clip) : -1
  const span = clipSpan(problem)
  const outputs = Int32Array.from(walk.outputs)

  /** Ports of variables that are free in every case, with their half-ranges. */
  const free = [...problem.portHalf.keys()].filter((p) => problem.portHalf[p]! > 0)
  const freeColumn = Int32Array.from(free, (p) => firstPort + p)
  const freeHalf = Float64Array.from(free, (p) => problem.portHalf[p]!)
  /** Per variable and case: shift of the middle where it is pinned, half-range where it is free. */
  const shift = new Float64Array(variables.length * cases)
  const half = new Float64Array(variables.length * cases)
  variables.forEach((variable, v) => {
    variable.pinned.forEach((pinned, c) => {
      if (Number.isNaN(pinned)) half[v * cases + c] = variable.half
      else shift[v * cases + c] = pinned - variable.middle
    })
  })
  const cmrrColumn = Int32Array.from(cmrr, ({ port }) => firstPort + port)
  const cmrrLimit = Float64Array.from(cmrr, ({ x }) => x)

  /** Of the row last read, per case: middle, half, and half without the clip variable. */
  const middleOf = new Float64Array(cases)
  const halfOf = new Float64Array(cases)
  const restOf = new Float64Array(cases)
  /** Of each common mode, per case: distance from its reference and half-ranges. */
  const offset = new Float64Array(cmrr.length * cases)
  const offsetHalf = new Float64Array(cmrr.length * cases)
  const offsetRest = new Float64Array(cmrr.length * cases)
  const offsetSlope = new Float64Array(cmrr.length)
  const which = new Int32Array(cmrr.length)
  const margin: ConcaveMargin = {
    count: 0,
    value: 0,
    slope: 0,
    weights: new Float64Array(cmrr.length),
    offsets: new Float64Array(cmrr.length),
    slopes: new Float64Array(cmrr.length),
  }

  const readRow = (start: number): void => {
    const { table } = walk
    let common = 0
    for (let i = 0; i < freeColumn.length; i++)
      common += Math.abs(table[start + freeColumn[i]!]!) * freeHalf[i]!
    const middle = table[start]!
    for (let c = 0; c < cases; c++) {
      let at = middle
      let spread = common
      for (let v = 0, entry = c; v < variables.length; v++, entry += cases) {
        const gain = table[start + 1 + v]!
        at += gain * shift[entry]!
        spread += Math.abs(gain) * half[entry]!
      }
      middleOf[c] = at
      halfOf[c] = spread
      restOf[c] =
        clipAt < 0 ? spread : spread - Math.abs(table[start + 1 + clipAt]!) * half[clipAt * cases + c]!
    }
  }

  return () => {
    const { table } = walk
    for (let k = 0; k < cmrrLimit.length; k++) {
      const start = (firstMean + k) * columns
      readRow(start)
      offset.set(middleOf, k * cases)
      offsetHalf.set(halfOf, k * cases)
      offsetRest.set(restOf, k * cases)
      offsetSlope[k] = clipAt < 0 ? 0 : table[start + 1 + clipAt]!
    }
    for (let row = 0, start = 0; row < rowCount; row++, start += columns) {
      readRow(start)
      // only amplifiers that this output feels take part
      let active = 0
      for (let k = 0; k < cmrrLimit.length; k++) {
        const weight = Math.abs(table[start + cmrrColumn[k]!]!) * cmrrLimit[k]!
        if (weight === 0) continue
        margin.weights[active] = weight
        margin.slopes[active] = offsetSlope[k]!
        which[active++] = k
      }
      margin.count = active
      for (let c = 0; c < cases; c++) {
        const middle = middleOf[c]!
        let spread = halfOf[c]!
        let rest = restOf[c]!
        for (let k = 0; k < active; k++) {
          const i = which[k]! * cases + c
          const weight = margin.weights[k]!
          spread += weight * (Math.abs(offset[i]!) + offsetHalf[i]!)
          rest += weight * offsetRest[i]!
          margin.offsets[k] = offset[i]!
        }
        const entry = outputs[row]! * cases + c
        if (middle - spread < bounds.low[entry]!) bounds.low[entry] = middle - spread
        if (middle + spread > bounds.high[entry]!) bounds.high[entry] = middle + spread
        if (clipAt < 0 || clipCase[c] !== c) continue
        margin.value = middle - rest
        margin.slope = table[start + 1 + clipAt]!
        narrowClipRange(margin, span, bounds, entry)
      }
    }
  }
}
