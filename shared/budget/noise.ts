import { solveDc } from '#shared/analysis/dc.ts'
import { integrateNoise, probeNoise, type NoiseBand, type NoiseOrigin } from '#shared/analysis/noise.ts'
import { computeSensitivities } from '#shared/analysis/sensitivity.ts'
import { buildChain, type Chain, type ChainSpec } from '#shared/design/chain.ts'
import type { NoiseLine, NoiseSummary } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import type { Network } from '#shared/network/types.ts'
import { SINC_LOBES, sincPower, type Sinc } from '#shared/numerics/sinc.ts'
import { responseChain } from './response-chain.ts'

/** Where the band starts when the sensor does not say, Hz. */
const LOWEST_BAND = 0.1
/** 0 °C, K. */
const ZERO_CELSIUS = 273.15
/** Peak to peak over rms that Gaussian noise exceeds a thousandth of the time. */
const PEAK_TO_PEAK = 6.6

type Part = Omit<NoiseLine, 'share'>

/**
 * Noise of y, V rms: thermal, voltage and current noise of every part through the realised response (real amplifiers,
 * temperature.high) from the band's low end up; references, converter and quantisation besides. Quantisation is one
 * code over √12; a sine over the whole span against the total gives the signal to noise ratio, dB; effective bits
 * log2(span/(σ√12)), noise-free bits log2(span/6.6σ) (method: noise; converter).
 */
export function summariseNoise(design: Design, spec: ChainSpec): NoiseSummary {
  const low = responseChain(design, spec)
  const high = buildChain(design, spec, design.sensor.quantity.high)
  const temperature = design.temperature.high + ZERO_CELSIUS
  const probe = probeNoise(low.network, temperature)
  const found = integrateNoise(probe, bandOf(design, low.network))
  const circuit = probe.origins.map((origin, k) => ({
    ...nameNoise(origin),
    rms: Math.sqrt(found.squares[k]!),
  }))
  const { input, bits, noise } = design.converter
  const others: Part[] = [
    ...referenceLines(design, [low, high]),
    { id: 'converter', label: 'Converter', source: 'converter', rms: noise },
    {
      id: 'quantisation',
      label: 'Quantisation',
      source: 'converter',
      rms: (input.high - input.low) / 2 ** bits / Math.sqrt(12),
    },
  ]
  const parts = [...circuit, ...others].filter((line) => line.rms > 0).sort((a, b) => b.rms - a.rms)
  const square = sumOfSquares(parts)
  const rms = Math.sqrt(square)
  const span = Math.abs(outputOf(high) - outputOf(low))
  return {
    from: found.from,
    to: found.to,
    temperature,
    rms,
    circuit: Math.sqrt(sumOfSquares(parts.filter(({ source }) => source !== 'converter'))),
    lines: parts.map((line) => ({ ...line, share: line.rms ** 2 / square })),
    snr: 20 * Math.log10(span / (2 * Math.SQRT2) / rms),
    effectiveBits: Math.log2(span / (rms * Math.sqrt(12))),
    noiseFreeBits: Math.log2(span / (PEAK_TO_PEAK * rms)),
    dominant: parts[0]?.label ?? 'Quantisation',
  }
}

const sumOfSquares = (lines: readonly Part[]): number => lines.reduce((sum, { rms }) => sum + rms ** 2, 0)

const outputOf = (chain: Chain): number => solveDc(chain.network, { model: 'real' }).output

/** Low end of the band, Hz. */
export const bandLow = (design: Design): number => design.sensor.bandLow ?? LOWEST_BAND

/** The digital filter of an oversampling converter; null where none limits the band. */
export function digitalFilterOf({ converter }: Design): Sinc | null {
  const { architecture, digitalFilter, outputRate, modulatorRate } = converter
  if (architecture !== 'oversampling' || digitalFilter === 'none' || outputRate === undefined) return null
  return { order: Number(digitalFilter.slice(4)), outputRate, modulatorRate: modulatorRate ?? null }
}

function bandOf(design: Design, network: Network): NoiseBand {
  const amplifiers = network.elements.flatMap((e) => (e.kind === 'amplifier' ? [e.part.gbw] : []))
  const from = bandLow(design)
  // The floor of an amplifier behind a low filter may outweigh what the filter leaves: look past its own bandwidth.
  const least = Math.max(10 * from, 1e6, ...amplifiers)
  const sinc = digitalFilterOf(design)
  if (!sinc) return { from, least }
  const lobes = Array.from({ length: SINC_LOBES }, (_, lobe) => (lobe + 1) * sinc.outputRate)
  const image = sinc.modulatorRate === null ? [] : [sinc.modulatorRate / 2]
  const breaks = [...lobes, ...image].sort((a, b) => a - b)
  return { from, least, weight: (f) => sincPower(sinc, f), breaks }
}

const effects: Record<string, string> = {
  thermal: 'thermal noise',
  en: 'voltage noise',
  'in+': 'current noise, + input',
  'in-': 'current noise, − input',
}

/** Words for a source. An integrated part keeps its noise in its two halves: A has its − input, B all else. */
export function nameNoise({ ref, name }: NoiseOrigin): Omit<Part, 'rms'> {
  const half = /^(U\d+)([AB])$/.exec(ref)
  const source = half?.[1] ?? ref
  const effect = half?.[2] === 'A' && name === 'in+' ? 'in-' : name
  return {
    id: effect === 'thermal' ? source : `${source}.${effect}`,
    label: `${source} ${effects[effect] ?? effect}`,
    source,
  }
}

const referenceNames: Record<string, string> = {
  converterReference: 'Converter reference',
  shiftReference: 'Shift reference',
  positiveRail: 'Positive rail',
}

/**
 * Noise of each reference, one variable whatever it reaches: its effects through bridge and offset are summed by the
 * adjoint, and y = v·Vref,nominal/Vref takes −y/Vref more where it is the converter's, all before anything is squared.
 * Its rms is a figure without a spectrum, so that it passes as at DC. At the end of the span where it does more.
 */
function referenceLines(design: Design, chains: readonly Chain[]): Part[] {
  const { references } = chains[0] ?? { references: { converter: null, shift: null } }
  const stated = new Map<string, number>()
  const note = (variable: string | undefined, noise: number | undefined) => {
    if (variable !== undefined && noise) stated.set(variable, Math.max(noise, stated.get(variable) ?? 0))
  }
  note(references.converter?.variable, design.converter.reference?.noise)
  note(references.shift?.variable, design.shiftReference?.noise)
  return [...stated].map(([variable, noise]) => ({
    id: variable,
    label: referenceNames[variable] ?? variable,
    source: variable,
    rms: noise * Math.max(...chains.map((chain) => Math.abs(referenceSlope(chain, variable)))),
  }))
}

/** dy/dVref, V/V. */
function referenceSlope(chain: Chain, variable: string): number {
  const slopes = computeSensitivities(chain.network, { model: 'real' })
  const injections = chain.variables.find((v) => v.id === variable)?.injections ?? []
  const direct = injections.reduce((sum, { ref, port, scale }) => {
    const found = slopes.find((s) => s.ref === ref && s.port === port)
    return sum + scale * (found?.derivative ?? 0)
  }, 0)
  const { converter } = chain.references
  return converter?.variable === variable ? direct - outputOf(chain) / converter.voltage : direct
}
