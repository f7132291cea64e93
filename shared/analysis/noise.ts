import { kindOf } from '#shared/network/elements/index.ts'
import type { Stamper } from '#shared/network/elements/element-kind.ts'
import type { Network } from '#shared/network/types.ts'
import { integratePanel, refinePanels, type Panel } from '#shared/numerics/panel-integral.ts'
import { assembleSystem, findBranch, findNode, outputVector } from './system.ts'
import { prepareTransfers } from './transfer.ts'

/*
 * Noise at the output by the adjoint network: with Mᵀ y = c, c picking the output, a source that enters the equations
 * as z gives yᵀ·z, so one factorisation a frequency serves every source (real amplifiers). Independent sources add as
 * squares. Source: Rohrer, Nagel, Meyer and Weber, "Computationally efficient electronic-circuit noise calculations",
 * IEEE Journal of Solid-State Circuits 6 (1971).
 */

/** A source of noise: element and which of its sources it is (`thermal`, `en`, `in+`, `in-`). */
export interface NoiseOrigin {
  ref: string
  name: string
}

export interface NoiseProbe {
  origins: readonly NoiseOrigin[]
  /** What each origin gives at the output at a frequency (Hz, above 0), V²/Hz. */
  densitiesAt(frequency: number): Float64Array
}

/** Prepares a network for noise at an absolute temperature, K; the equations are written once. */
export function probeNoise(network: Network, temperature: number): NoiseProbe {
  const system = assembleSystem(network, { model: 'real' })
  const { index } = system
  let entries: { row: number; value: number }[] = []
  const collect: Stamper = {
    model: 'real',
    node: (name) => findNode(index, name),
    branch: (ref) => findBranch(index, ref),
    add: () => undefined,
    addSource: (row, value) => {
      if (row >= 0) entries.push({ row, value })
    },
  }
  const sources = network.elements.flatMap((element) =>
    kindOf(element)
      .noise(element, temperature)
      .map(({ name, density, corner, inject }) => {
        entries = []
        inject(collect)
        return { ref: element.ref, name, density, corner, entries }
      }),
  )
  const transfer = prepareTransfers(
    system,
    outputVector(index, network.output),
    sources.map((source) => source.entries),
  )
  return {
    origins: sources.map(({ ref, name }) => ({ ref, name })),
    densitiesAt(frequency) {
      const { re, im } = transfer(frequency)
      return Float64Array.from(
        sources,
        ({ density, corner }, k) => (re[k]! ** 2 + im[k]! ** 2) * density * (1 + corner / frequency),
      )
    },
  }
}

export interface NoiseBand {
  /** Lowest frequency, Hz, above 0. */
  from: number
  /** Frequency up to which the integration goes in any case, Hz. */
  least: number
  /** Power response of what follows the network (a digital filter); absent: 1. */
  weight?: (frequency: number) => number
  /** Frequencies at which the integrand changes its form, Hz, ascending: panels end there. */
  breaks?: readonly number[]
}

export interface IntegratedNoise {
  from: number
  /** Where the integration ended: nothing more is added above, or the highest frequency looked at, Hz. */
  to: number
  /** Per origin, V². */
  squares: Float64Array
}

/** No circuit of this kind is known by its parts beyond this, Hz. */
export const HIGHEST = 1e9
/** A panel that adds less than this part of the whole, above `least`, ends the integration. */
const NEGLIGIBLE = 2e-5

/**
 * Mean square at the output per origin, from `from` up to where a decade adds less than 2e-5 of the whole. Integrates
 * f·S over ln f, in which white and 1/f noise are smooth, by panels of a decade that are halved where the response
 * turns; better than 0.1 % of the rms.
 */
export function integrateNoise(probe: NoiseProbe, band: NoiseBand): IntegratedNoise {
  const { from, least, weight, breaks = [] } = band
  const integrand = (u: number): Float64Array => {
    const frequency = Math.exp(u)
    const scale = frequency * (weight?.(frequency) ?? 1)
    return probe.densitiesAt(frequency).map((density) => scale * density)
  }
  const panels: Panel[] = []
  let whole = 0
  let at = from
  while (at < HIGHEST) {
    const wall = breaks.find((frequency) => frequency > at * (1 + 1e-9)) ?? HIGHEST
    const next = Math.min(at * 10, wall, HIGHEST)
    const panel = integratePanel(integrand, Math.log(at), Math.log(next))
    panels.push(panel)
    whole += panel.sum
    at = next
    if (at > least && panel.sum < NEGLIGIBLE * whole) break
  }
  return { from, to: at, squares: refinePanels(integrand, panels) }
}
