import { openLoop, prepareResponse } from '#shared/analysis/ac.ts'
import { solveDc } from '#shared/analysis/dc.ts'
import { probeNoise } from '#shared/analysis/noise.ts'
import { prepareStep } from '#shared/analysis/step-response.ts'
import type { ValueSet } from '#shared/analysis/system.ts'
import { computeDynamics } from '#shared/budget/dynamics.ts'
import { nameNoise, summariseNoise } from '#shared/budget/noise.ts'
import { plainAmplifiers, responseChain } from '#shared/budget/response-chain.ts'
import { withSampling } from '#shared/budget/stability.ts'
import { buildChain, type ChainSpec } from '#shared/design/chain.ts'
import { temperatureSpan } from '#shared/design/references.ts'
import type { Design } from '#shared/design/schema.ts'
import type { Network } from '#shared/network/types.ts'
import { magnitude, phase } from '#shared/numerics/complex.ts'
import type { BodePlot, Curves, LoopPlot, NoisePlot, StepPlot } from './types.ts'

/** Points of each line. */
const POINTS = { bode: 160, loop: 120, step: 200, noise: 140 } as const
/** Sources of noise that get a line of their own. */
const LARGEST = 4
const DEGREES = 180 / Math.PI

/** Lines of the plots about frequency and time, of the chain with the measurand at quantity.low, real amplifiers. */
export function computeCurves(design: Design, spec: ChainSpec): Curves {
  const { network } = responseChain(design, spec)
  const dynamics = computeDynamics(design, spec)
  const corner = dynamics.bandwidth ?? 1e6
  return {
    bode: bodeOf(design, network, corner),
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

function bodeOf(design: Design, network: Network, corner: number): BodePlot {
  const frequency = spaced(corner / 1e3, Math.min(corner * 1e4, 1e9), POINTS.bode)
  const respond = prepareResponse(network)
  const dc = respond(0)
  const found = frequency.map(respond)
  const start = phase(dc)
  return {
    frequency,
    magnitude: found.map((value) => decibels(magnitude(value) / magnitude(dc))),
    phase: unwrap(found.map((value) => (phase(value) - start) * DEGREES)),
    band: bandOf(network, frequency, tolerances(design, network)),
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

interface Box {
  ref: string
  kind: 'resistor' | 'capacitor'
  value: number
  reach: number
}

/** Parts of the filter that are bought, with how far they go over temperature. */
function tolerances(design: Design, network: Network): Box[] {
  const span = temperatureSpan(design)
  return network.elements.flatMap((e): Box[] => {
    if ((e.kind !== 'resistor' && e.kind !== 'capacitor') || e.fixed || e.stage !== 'filter') return []
    const reach = Math.min(e.tolerance + e.drift * span, 0.99)
    return reach > 0 ? [{ ref: e.ref, kind: e.kind, value: e.value, reach }] : []
  })
}

/** Parts of which every vertex is drawn; with more, each class moves as one. */
const MOST_CORNERS = 4

/**
 * Lowest and highest magnitude over the vertices of the filter's parts, relative to DC; of a filter of more than four
 * parts over the four vertices of its two classes, all resistors and all capacitors together.
 */
function bandOf(network: Network, frequency: readonly number[], boxes: readonly Box[]): BodePlot['band'] {
  if (boxes.length === 0) return null
  const groups =
    boxes.length <= MOST_CORNERS
      ? boxes.map((box) => [box])
      : (['resistor', 'capacitor'] as const).map((kind) => boxes.filter((box) => box.kind === kind))
  let sets: ValueSet[] = [{}]
  for (const group of groups.filter((some) => some.length > 0))
    sets = sets.flatMap((set) =>
      [-1, 1].map((side) => ({
        ...set,
        ...Object.fromEntries(group.map(({ ref, value, reach }) => [ref, value * (1 + side * reach)])),
      })),
    )
  const low = frequency.map(() => Infinity)
  const high = frequency.map(() => -Infinity)
  for (const set of sets) {
    const respond = prepareResponse(network, { model: 'real', set })
    const dc = magnitude(respond(0))
    frequency.forEach((f, i) => {
      const level = decibels(magnitude(respond(f)) / dc)
      low[i] = Math.min(low[i] ?? Infinity, level)
      high[i] = Math.max(high[i] ?? -Infinity, level)
    })
  }
  return { low, high }
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
