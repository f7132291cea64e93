import type { BigNumber } from 'mathjs'
import { all, create } from 'mathjs'
import { assembleSystem } from '#shared/analysis/system.ts'
import type { Model } from '#shared/network/elements/element-kind.ts'
import type { Network } from '#shared/network/types.ts'

const math = create(all!, { number: 'BigNumber', precision: 64, relTol: 1e-60, absTol: 1e-60 })

/** Every unknown of a network's operating point: the same stamps solved with 64 digits by another program. */
export function solveExactly(network: Network, model: Model): number[] {
  const { constant, dc, index } = assembleSystem(network, { model })
  const exact = (value: number) => math.bignumber(value.toPrecision(60))
  const rows = index.nodes
    .concat(index.branches)
    .map((_, i) => Array.from({ length: index.size }, (_, j) => exact(constant[i * index.size + j]!)))
  // the declared type leaves open what a list of lists of such numbers comes back as
  const solution = math.lusolve(rows, Array.from(dc, exact)) as unknown as (BigNumber | number)[][]
  return solution.map(([value]) => Number(value))
}
