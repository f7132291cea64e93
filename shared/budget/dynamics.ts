import { prepareResponse } from '#shared/analysis/ac.ts'
import { solveDc } from '#shared/analysis/dc.ts'
import { findCrossover } from '#shared/analysis/stability.ts'
import {
  findOvershoot,
  findSettling,
  prepareStep,
  type StepResponse,
} from '#shared/analysis/step-response.ts'
import { buildChain, type Chain, type ChainSpec } from '#shared/design/chain.ts'
import type { Dynamics } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import type { ControlledVoltageSource, Network } from '#shared/network/types.ts'
import { magnitude } from '#shared/numerics/complex.ts'
import { sincMagnitude } from '#shared/numerics/sinc.ts'
import { digitalFilterOf } from './noise.ts'
import { responseChain } from './response-chain.ts'

/** Frequencies between which the bandwidth of a chain is looked for, Hz. */
const LOWEST = 1e-3
const HIGHEST = 1e10
/** Pace of a response whose bandwidth lies beyond, Hz. */
const FASTEST = 1e9

/**
 * How the chain moves: −3 dB bandwidth from the sensor to the converter, loss of amplitude at the signal bandwidth,
 * bandwidth of each amplifier's loop, largest frequency at which the full span is not slewed, SR/(2π·Vp) with each
 * amplifier's own span (method: slew), and the time a full-span step takes to stay within `rules.settling` codes, from
 * the network's own response with all its poles.
 */
export function computeDynamics(design: Design, spec: ChainSpec): Dynamics {
  const low = responseChain(design, spec)
  const high = buildChain(design, spec, design.sensor.quantity.high)
  const { network } = low
  const respond = prepareResponse(network)
  const passes = (frequency: number) => magnitude(respond(frequency))
  const bandwidth = findBandwidth(passes)
  const sinc = digitalFilterOf(design)
  const digital = (frequency: number) => (sinc ? sincMagnitude(sinc, frequency) : 1)
  const wanted = design.sensor.bandwidth
  const fullPower = findFullPower(design, low, high)
  const step = prepareStep(network, { pace: bandwidth ?? FASTEST })
  const settling = findSettling(step, settlingBand(design, low, high, step))
  return {
    bandwidth,
    amplifiers: loopBandwidths(network),
    droopAtBandwidth: wanted === undefined ? null : 1 - (digital(wanted) * passes(wanted)) / passes(0),
    // A digital filter holds as many results as it has orders until nothing of the old level is left in them.
    settling: settling === null || !sinc ? settling : settling + sinc.order / sinc.outputRate,
    fullPower,
    followsSignal: wanted === undefined || fullPower === null || wanted <= fullPower,
    overshoot: settling === null ? null : findOvershoot(step, settling),
  }
}

/**
 * Half width of the settling band for a unit step, V: `rules.settling` codes of a step over the span of y. The chain is
 * linear, so that the unit step differs from the span's by a factor only.
 */
function settlingBand(design: Design, low: Chain, high: Chain, step: StepResponse): number {
  const { input, bits } = design.converter
  const lsb = (input.high - input.low) / 2 ** bits
  const span = Math.abs(outputOf(high) - outputOf(low))
  return ((design.rules.settling * lsb) / span) * Math.abs(step.final)
}

const outputOf = (chain: Chain): number => solveDc(chain.network, { model: 'real' }).output

/** Lowest frequency at which the response falls to 1/√2 of that at DC, Hz; null where it never does below 10 GHz. */
export function findBandwidth(passes: (frequency: number) => number): number | null {
  const limit = passes(0) * Math.SQRT1_2
  const ratio = 10 ** 0.4
  let low = LOWEST
  while (passes(low * ratio) > limit) {
    low *= ratio
    if (low > HIGHEST) return null
  }
  let [x0, x1] = [Math.log(low), Math.log(low * ratio)]
  for (let turn = 0; turn < 40 && x1 - x0 > 1e-7; turn++) {
    const middle = (x0 + x1) / 2
    if (passes(Math.exp(middle)) > limit) x0 = middle
    else x1 = middle
  }
  return Math.exp((x0 + x1) / 2)
}

/**
 * Crossover of each loop. An integrated part goes by its name: its halves lean on each other, so that neither loop says
 * anything by itself; its bandwidth is that of the difference which they make.
 */
function loopBandwidths(network: Network): Dynamics['amplifiers'] {
  return network.elements.flatMap((e) => {
    if (e.kind === 'amplifier' && !e.macro) {
      const crossover = findCrossover(network, e.ref)
      return crossover ? [{ amplifier: e.ref, bandwidth: crossover.frequency }] : []
    }
    if (e.kind !== 'controlled-voltage-source') return []
    const macro = macroOf(network, e)
    if (!macro) return []
    const respond = prepareResponse({ ...network, output: { p: e.cp, n: e.cn } })
    const bandwidth = findBandwidth((frequency) => magnitude(respond(frequency)))
    return bandwidth === null ? [] : [{ amplifier: macro, bandwidth }]
  })
}

/** The integrated part whose output a controlled source is; null for others. */
function macroOf(network: Network, source: ControlledVoltageSource): string | null {
  const half = network.elements.find((e) => e.kind === 'amplifier' && e.macro && source.ref === `E${e.macro}`)
  return half?.kind === 'amplifier' ? (half.macro ?? null) : null
}

/** The smallest of the amplifiers, each at its own output; null without amplifiers. */
function findFullPower(design: Design, low: Chain, high: Chain): number | null {
  const [a, b] = [low, high].map((chain) => solveDc(chain.network, { model: 'real' }))
  const limits = low.network.elements.flatMap((e) => {
    if (e.kind !== 'amplifier' || !a || !b) return []
    const driver = low.network.elements.find((o) => o.ref === `E${e.macro}`)
    const out = e.macro && driver?.kind === 'controlled-voltage-source' ? driver.p : e.out
    const slewRate = e.macro ? design.parts.instrumentation.slewRate : e.part.slewRate
    const peak = Math.abs(b.voltage(out) - a.voltage(out)) / 2
    // a buffer of a level does not move: nothing there to slew
    return peak > 1e-9 ? [slewRate / (2 * Math.PI * peak)] : []
  })
  return limits.length > 0 ? Math.min(...limits) : null
}
