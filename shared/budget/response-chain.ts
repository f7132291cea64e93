import { buildChain, type Chain, type ChainSpec } from '#shared/design/chain.ts'
import type { Design } from '#shared/design/schema.ts'
import type { Amplifier, Network } from '#shared/network/types.ts'

const known = new WeakMap<ChainSpec, { design: Design; chain: Chain }>()

/**
 * The chain that noise, stability, dynamics and curves are computed of: the measurand at quantity.low, as in the
 * printed netlist. Kept per chain, since all of them ask.
 */
export function responseChain(design: Design, spec: ChainSpec): Chain {
  const found = known.get(spec)
  if (found?.design === design) return found.chain
  const chain = buildChain(design, spec, design.sensor.quantity.low)
  known.set(spec, { design, chain })
  return chain
}

/** The amplifiers of a network that are parts of their own; the halves inside an integrated part are not. */
export const plainAmplifiers = (network: Network): Amplifier[] =>
  network.elements.flatMap((e) => (e.kind === 'amplifier' && !e.macro ? [e] : []))
