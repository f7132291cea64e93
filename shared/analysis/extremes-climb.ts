import type { Bounds } from './extremes-evaluate.ts'
import type { VertexWalk, WalkOutcome } from './vertex-walk.ts'
import { refreshWalk } from './vertex-walk.ts'

/**
 * For boxes of too many resistors: climbs from vertex to neighbouring vertex, separately for the low and the high end of
 * each output and case, until no single change helps. What it finds is reached by some board but is no proven bound.
 */
export function climbVertices(walk: VertexWalk, bounds: Bounds, evaluate: () => void): WalkOutcome {
  const { cases } = walk.problem
  let vertices = 0
  let keepsSign = true
  const visit = (): void => {
    vertices++
    if (refreshWalk(walk) !== walk.sign) keepsSign = false
    else evaluate()
  }
  visit()
  for (const output of walk.outputs) {
    for (let c = 0; c < cases; c++) {
      const entry = output * cases + c
      for (const end of ['low', 'high'] as const) {
        const better = end === 'low' ? -1 : 1
        // this climb compares with its own best, not with what other climbs happened to find
        const known = bounds[end][entry]!
        bounds[end][entry] = -better * Infinity
        walk.state.fill(0)
        visit()
        for (let improved = true; improved && keepsSign;) {
          improved = false
          for (let i = 0; i < walk.state.length && keepsSign; i++) {
            const before = bounds[end][entry]!
            walk.state[i]! ^= 1
            visit()
            if (better * (bounds[end][entry]! - before) > 0) improved = true
            else walk.state[i]! ^= 1
          }
        }
        if (better * (known - bounds[end][entry]!) > 0) bounds[end][entry] = known
      }
    }
  }
  return { vertices, keepsSign }
}
