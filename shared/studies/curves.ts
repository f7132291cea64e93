import { openLoop, prepareResponse } from '#shared/analysis/ac.ts'
import { solveDc } from '#shared/analysis/dc.ts'
import { probeNoise } from '#shared/analysis/noise.ts'
import { prepareStep } from '#shared/analysis/step-response.ts'
import { computeDynamics } from '#shared/budget/dynamics.ts'
import { filterBand } from '#shared/budget/filter-band.ts'
import { seriesBefore } from '#shared/budget/filter-plan.ts'
import { nameNoise, summariseNoise } from '#shared/budget/noise.ts'
import { plainAmplifiers, responseChain } from '#shared/budget/response-chain.ts'
import { withSampling } from '#shared/budget/stability.ts'
import { buildChain, type ChainSpec } from '#shared/design/chain.ts'
import type { Design } from '#shared/design/schema.ts'
import { sectionsGain } from '#shared/filters/prototypes.ts'
import type { Network } from '#shared/network/types.ts'
import { magnitude, phase } from '#shared/numerics/complex.ts'
import type { BodePlot, Curves, LoopPlot, NoisePlot, StepPlot } from './types.ts'

/** Points of each line. */
const POINTS = { bode: 160, loop: 120, step: 200, noise: 140 } as const
/** Sources of noise that get a line of their own. */
const LARGEST = 4
/** A band narrower than this everywhere is that of exact parts, dB. */
const NARROWEST = 1e-9
const DEGREES = 180 / Math.PI

/** Lines of the plots about frequency and time, of the chain with the measurand at quantity.low, real amplifiers. */
export function computeCurves(design: Design, spec: ChainSpec): Curves {
  const { network } = responseChain(design, spec)
  const dynamics = computeDynamics(design, spec)
  const corner = dynamics.bandwidth ?? 1e6
  return {
    bode: bodeOf(design, spec, network, corner),
    step: stepOf(design, spec, network, { corner, settling: dynamics.settling }),
    loops: loopsOf(withSampling(design, network)),
    noise: noiseOf(design, spec, network),
  }
}

/** `count` frequencies evenly on a logarithmic axis, both ends included. */
function spaced(from: number, to: number, count: number): number[] {
  return Array.from({ length: count }, (_, i) => from * (to / from) ** (i / (count - 1)))
}

const decibels = (ratio: number): number => 20 * Math.log10(Math.max(ratio, 1e-30))

function bodeOf(design: Design, spec: ChainSpec, network: Network, corner: number): BodePlot {
  const frequency = spaced(corner / 1e3, Math.min(corner * 1e4, 1e9), POINTS.bode)
  const respond = prepareResponse(network)
  const dc = respond(0)
  const found = frequency.map(respond)
  const start = phase(dc)
  const level = found.map((value) => decibels(magnitude(value) / magnitude(dc)))
  return {
    frequency,
    magnitude: level,
    phase: unwrap(found.map((value) => (phase(value) - start) * DEGREES)),
    band: bandOf(design, spec, frequency, level),
  }
}

/** Removes jumps of a whole turn, from the first point on. */
function unwrap(angles: readonly number[]): number[] {
  let turns = 0
  let before = 0
  return angles.map((angle) => {
    while (angle + turns - before > 180) turns -= 360
    while (angle + turns - before < -180) turns += 360
    before = angle + turns
    return before
  })
}

/**
 * Lowest and highest magnitude over the tolerance of the filter's parts, relative to DC, dB: the band of the printed
 * figures, laid around what the chain gives nominally. Null without a filter or with exact parts.
 */
function bandOf(
  design: Design,
  spec: ChainSpec,
  frequency: readonly number[],
  level: readonly number[],
): BodePlot['band'] {
  if (spec.filter.kind === 'none') return null
  const band = filterBand(design, spec.filter, seriesBefore(design, spec))
  const shifts = frequency.map((f) => {
    const { low, high } = band.gain(f)
    const nominal = sectionsGain(band.nominal, f)
    return { low: decibels(low / nominal), high: decibels(high / nominal) }
  })
  if (shifts.every(({ low, high }) => high - low < NARROWEST)) return null
  const around = (side: 'low' | 'high') => level.map((own, i) => own + (shifts[i]?.[side] ?? 0))
  return { low: around('low'), high: around('high') }
}

function stepOf(
  design: Design,
  spec: ChainSpec,
  network: Network,
  { corner, settling }: { corner: number; settling: number | null },
): StepPlot {
  const { converter, rules, sensor } = design
  const [from, to] = [network, buildChain(design, spec, sensor.quantity.high).network].map(
    (one) => solveDc(one, { model: 'real' }).output,
  ) as [number, number]
  const step = prepareStep(network, { pace: corner })
  // a chain that never settles is drawn over the time in which a single pole would
  const until = 1.25 * (settling ?? 20 / (2 * Math.PI * corner))
  const time = Array.from({ length: POINTS.step }, (_, i) => (until * i) / (POINTS.step - 1))
  return {
    time,
    output: time.map((t) => (t === 0 ? from : to + ((to - from) * step.errorAt(t)) / step.final)),
    final: to,
    band: (rules.settling * (converter.input.high - converter.input.low)) / 2 ** converter.bits,
  }
}

/** Loop gains with the second pole of each part, down to a tenth at least, as stability is judged. */
function loopsOf(network: Network): LoopPlot[] {
  return plainAmplifiers(network).map(({ ref, part }) => {
    const loop = openLoop(network, ref, { poles: 2 })
    const frequency = spaced(10, 10 * part.gbw, POINTS.loop)
    const found = frequency.map(loop)
    return {
      amplifier: ref,
      frequency,
      magnitude: found.map((value) => decibels(magnitude(value))),
      phase: unwrap(found.map((value) => phase(value) * DEGREES)),
    }
  })
}

function noiseOf(design: Design, spec: ChainSpec, network: Network): NoisePlot {
  const { from, to, temperature, lines } = summariseNoise(design, spec)
  const probe = probeNoise(network, temperature)
  const frequency = spaced(from, to, POINTS.noise)
  const densities = frequency.map((f) => probe.densitiesAt(f))
  const names = probe.origins.map(nameNoise)
  const largest = lines.filter((line) => names.some(({ id }) => id === line.id)).slice(0, LARGEST)
  return {
    frequency,
    total: densities.map((squares) => Math.sqrt(squares.reduce((sum, square) => sum + square, 0))),
    parts: largest.map(({ id, label }) => {
      const at = names.findIndex((name) => name.id === id)
      return { name: label, x: frequency, y: densities.map((squares) => Math.sqrt(squares[at] ?? 0)) }
    }),
  }
}
