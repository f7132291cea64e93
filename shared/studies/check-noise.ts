import { probeNoise } from '#shared/analysis/noise.ts'
import { toSpice } from '#shared/analysis/spice.ts'
import { digitalFilterOf, summariseNoise } from '#shared/budget/noise.ts'
import type { Chain } from '#shared/design/chain.ts'
import type { NoiseSummary } from '#shared/design/plan.ts'
import type { Prepared } from '#shared/design/plan-design.ts'
import { kindOf } from '#shared/network/elements/index.ts'
import { toSpiceNumber } from '#shared/network/elements/spice-number.ts'
import type { Amplifier, Network } from '#shared/network/types.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import { ALLOWED, compareFigures, type CheckRun } from './check-line.ts'

/*
 * Noise in SPICE. Resistors make their own thermal noise there. What an amplifier adds is given to it by sources whose
 * spectra SPICE knows: the thermal noise of a resistor, 4kTR and white, and the flicker noise of a diode, KF/f with
 * AF = 0 whatever flows. Each stands alone on its own nodes; a controlled source brings it to where it belongs: a
 * voltage between the inputs as the current that it makes in the model's transconductance of 1 S, a current into its
 * pin. The resistors inside the model (a0, rout, rin, rcm) are figures, not resistors, and are printed noiseless.
 */

const BOLTZMANN = 1.380649e-23
/** 0 °C, K. */
const ZERO_CELSIUS = 273.15
/** Ω of each source of white noise. */
const NOISY = 1000
const POINTS_PER_DECADE = 60

/** The plan's noise of all resistors and amplifiers at the converter's pins; null for a network without AC source. */
export function noiseRun({ design, spec, candidate }: Prepared, { network }: Chain): CheckRun | null {
  const source = network.elements.find((e) => 'ac' in e && e.ac)
  if (!source) return null
  const summary = candidate.noise ?? summariseNoise(design, spec)
  const { from, to, temperature } = summary
  const netlist = printNoise(network, { from, to, temperature, input: source.ref })
  // The simulator knows no digital filter: before one, both spectra are integrated as they stand.
  const filtered = digitalFilterOf(design) !== null
  const [low, high] = [from, to].map((f) => formatQuantity(f, 'Hz', { digits: 3 }))
  const what = `Noise of resistors and amplifiers, ${low} to ${high}`
  return {
    what,
    netlist,
    async judge(simulator) {
      const { frequency, density } = await simulator.runNoise(netlist)
      const spice = integrate(frequency, density)
      const ours = filtered
        ? integrate(frequency, spectrum(network, temperature, frequency))
        : rmsOf(summary, network)
      const said = filtered ? `${what}, before the digital filter` : what
      return [compareFigures(said, 'V', [ours, spice], ALLOWED.noise * spice)]
    },
  }
}

/** Of the summary's lines those that elements of the network make; an integrated part stands there as its halves. */
function rmsOf({ lines }: NoiseSummary, network: Network): number {
  const refs = new Set(network.elements.map(({ ref }) => ref))
  const inside = lines.filter(({ source }) => refs.has(source) || refs.has(`${source}B`))
  return Math.sqrt(inside.reduce((sum, { rms }) => sum + rms ** 2, 0))
}

/** All sources together, V/√Hz. */
function spectrum(network: Network, temperature: number, frequencies: readonly number[]): number[] {
  const probe = probeNoise(network, temperature)
  return frequencies.map((f) => Math.sqrt(probe.densitiesAt(f).reduce((sum, part) => sum + part, 0)))
}

interface NoiseNetlist {
  /** Hz */
  from: number
  to: number
  /** K */
  temperature: number
  /** Source with the `ac` amplitude. */
  input: string
}

/** The network as the plan prints it, with the noise of its amplifiers, asking for the spectrum at its output. */
export function printNoise(network: Network, { from, to, temperature, input }: NoiseNetlist): string {
  const { elements } = network
  const amplifiers = elements.flatMap((e) => (e.kind === 'amplifier' ? amplifierNoise(e, temperature) : []))
  const silent = new Set(
    elements.flatMap((e) => (kindOf(e).noise(e, temperature).length === 0 ? [e.ref] : [])),
  )
  return toSpice(
    { ...network, temperature: temperature - ZERO_CELSIUS },
    {
      extra: [...amplifiers, FLICKER],
      noiseless: (printed) => printed.startsWith('R_') || silent.has(printed),
      analysis: { noise: { pointsPerDecade: POINTS_PER_DECADE, from, to, input } },
    },
  )
}

const FLICKER = '.model flicker D(KF=1 AF=0)'

/** Sources of voltage noise between the inputs and of current noise into each pin, white and 1/f apart. */
function amplifierNoise(element: Amplifier, temperature: number): string[] {
  const { ref, p, m } = element
  const unit = Math.sqrt(4 * BOLTZMANN * temperature * NOISY)
  const places: Record<string, { letter: string; node: string }> = {
    en: { letter: 'e', node: `${ref}__a` },
    'in+': { letter: 'p', node: p },
    'in-': { letter: 'm', node: m },
  }
  return kindOf(element)
    .noise(element, temperature)
    .flatMap(({ name, density, corner }) => {
      const place = places[name]
      if (!place) throw new RangeError(`${ref} has a source of noise, ${name}, that cannot be printed`)
      const { letter, node } = place
      const size = Math.sqrt(density)
      const id = `N_${ref}_${letter.toUpperCase()}`
      const [white, flicker] = [`${ref}__w${letter}`, `${ref}__f${letter}`]
      const steady = [
        `R${id} ${white} 0 ${NOISY}`,
        `G${id} 0 ${node} ${white} 0 ${toSpiceNumber(size / unit)}`,
      ]
      if (corner === 0) return steady
      return [
        ...steady,
        `D${id} ${flicker} 0 flicker`,
        `V${id} ${flicker} 0 DC 0`,
        `F${id} 0 ${node} V${id} ${toSpiceNumber(size * Math.sqrt(corner))}`,
      ]
    })
}

/**
 * Root of the integral of a density squared (V/√Hz over Hz), V rms. Between two points it is taken as a power of
 * frequency, which is exact for white, 1/f and any single slope.
 */
export function integrate(frequency: readonly number[], density: readonly number[]): number {
  let sum = 0
  for (let i = 1; i < frequency.length; i++) {
    const [f0, f1] = [frequency[i - 1] ?? Number.NaN, frequency[i] ?? Number.NaN]
    const [d0, d1] = [density[i - 1] ?? Number.NaN, density[i] ?? Number.NaN]
    const over = Math.log((d1 / d0) ** 2) / Math.log(f1 / f0) + 1
    sum +=
      Math.abs(over) < 1e-9
        ? d0 ** 2 * f0 * Math.log(f1 / f0)
        : (d0 ** 2 * f0 * ((f1 / f0) ** over - 1)) / over
  }
  return Math.sqrt(sum)
}
