import { solveDc } from '#shared/analysis/dc.ts'
import { assembleSystem } from '#shared/analysis/system.ts'
import { buildNetworkFor, planDesign } from '#shared/design/plan-design.ts'
import type { Network } from '#shared/network/types.ts'
import { sampleNetworks } from '#tests/support/circuits.ts'
import { arrangementDesigns } from '#tests/support/designs.ts'
import { solveExactly } from '#tests/support/solve-exactly.ts'
import { toRow, type Row } from './rows.ts'

/** Some of the chains, of one stage and of two, with dividers and without. */
const CHAINS = ['non-inverting-up', 'weighted-difference', 'three-amplifier', 'non-inverting+inverting-up']

/** How far the operating point lies from a solution of the same stamps with 64 digits, worst node of all networks. */
export function run(): Row[] {
  const networks = [...Object.values(sampleNetworks()), ...chains()]
  const worst = networks.reduce((most, network) => Math.max(most, distance(network)), 0)
  const what = `operating point of ${networks.length} networks against 64 digits, farthest node`
  return [toRow(what, worst, 'V', { most: 1e-11 }, 'Operating point against 64 digits, farthest node')]
}

function chains(): Network[] {
  return arrangementDesigns
    .filter(([id]) => CHAINS.includes(id))
    .map(([id, document]) => {
      const plan = planDesign(document)
      const candidate = plan.candidates[plan.chosen ?? -1]
      const network = candidate && buildNetworkFor(document, candidate)
      if (!network) throw new Error(`${id} has no network`)
      return network
    })
}

function distance(network: Network): number {
  const exact = solveExactly(network, 'real')
  const solution = solveDc(network, { model: 'real' })
  const { nodes } = assembleSystem(network, { model: 'real' }).index
  return nodes.reduce(
    (most, node, at) => Math.max(most, Math.abs(solution.voltage(node) - (exact[at] ?? Number.NaN))),
    0,
  )
}
