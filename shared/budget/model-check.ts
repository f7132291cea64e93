import { openLoop } from '#shared/analysis/ac.ts'
import { solveDc } from '#shared/analysis/dc.ts'
import type { Chain } from '#shared/design/chain.ts'
import type { ModelEntry, Reason } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import type { Amplifier, Network } from '#shared/network/types.ts'
import type { Complex } from '#shared/numerics/complex.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'

/** Frequencies searched for the point where the model stops being good enough, Hz. */
const LOWEST = 1e-3
const HIGHEST = 1e9

/**
 * Is the ideal model good enough here? For every amplifier what the real model leaves over at full scale: volts between
 * the inputs, amperes into them, loop gain T, gain error 1/(1+T) at DC and |1 − |T/(1+T)|/(T0/(1+T0))| at the signal
 * bandwidth (method: finite gain and one-pole amplifier), in LSB of the span that y covers.
 */
export function checkModel(
  design: Design,
  chains: { low: Chain; high: Chain },
  ySpan: number,
  lsb: number,
): ModelEntry[] {
  const low = solveDc(chains.low.network, { model: 'real' })
  const high = solveDc(chains.high.network, { model: 'real' })
  const full = Math.abs(high.output) >= Math.abs(low.output) ? high : low
  const network = chains.high.network
  return amplifiersOf(network).map((u) => {
    const between = full.between(u.p, u.m)
    const current = between / u.part.rin + full.voltage(u.p) / u.part.rcm + u.part.ib
    const loop = openLoop(network, u.ref)
    const dc = loop(0)
    const gainError = -1 / (1 + dc.re)
    const codes = (fraction: number) => (Math.abs(fraction) * Math.abs(ySpan)) / lsb
    const errorAt = (f: number) => magnitudeError(loop, f, dc.re)
    const bandwidth = design.sensor.bandwidth ?? null
    const atBandwidth = bandwidth === null ? null : codes(errorAt(bandwidth))
    const phase = bandwidth === null ? null : residuePhase(loop, bandwidth)
    const allowed = design.rules.modelError
    const dcLsb = codes(gainError)
    const holdsTo = dcLsb > allowed ? null : findLimit((f) => codes(errorAt(f)) > allowed)
    const entry = {
      amplifier: u.macro ? `${u.macro} input stage, ${u.ref.endsWith('A') ? '− side' : '+ side'}` : u.ref,
      inputVolts: between,
      inputAmps: current,
      loopGain: dc.re,
      gainErrorPpm: gainError * 1e6,
      gainErrorLsb: dcLsb,
      atBandwidthLsb: atBandwidth,
      phaseAtBandwidth: phase,
      delayAtBandwidth: phase === null || bandwidth === null ? null : -phase / 360 / bandwidth,
      holdsTo,
    }
    return { ...entry, ...judge(entry, allowed, bandwidth) }
  })
}

const amplifiersOf = (network: Network): Amplifier[] =>
  network.elements.flatMap((e) => (e.kind === 'amplifier' ? [e] : []))

type Loop = (frequency: number) => Complex

/** Change of |T/(1+T)| from its DC value, as a fraction. */
function magnitudeError(loop: Loop, f: number, t0: number): number {
  const t = loop(f)
  const size = Math.hypot(t.re, t.im) / Math.hypot(1 + t.re, t.im)
  return size / (t0 / (1 + t0)) - 1
}

/** Phase of T/(1+T), degrees. */
function residuePhase(loop: Loop, f: number): number {
  const t = loop(f)
  return ((Math.atan2(t.im, t.re) - Math.atan2(t.im, 1 + t.re)) * 180) / Math.PI
}

/** Lowest frequency at which a condition holds, by doubling and then halving the interval on a log scale; HIGHEST at most. */
function findLimit(exceeds: (f: number) => boolean): number {
  let low = LOWEST
  let high = LOWEST
  while (high < HIGHEST && !exceeds(high)) {
    low = high
    high *= 4
  }
  if (high >= HIGHEST && !exceeds(HIGHEST)) return HIGHEST
  for (let i = 0; i < 30; i++) {
    const middle = Math.sqrt(low * high)
    if (exceeds(middle)) high = middle
    else low = middle
  }
  return low
}

type Judged = Pick<ModelEntry, 'verdict' | 'state'>

function judge(
  entry: Omit<ModelEntry, 'verdict' | 'state'>,
  allowed: number,
  bandwidth: number | null,
): Judged {
  const lsb = (x: number) =>
    x < 0.001 ? 'less than 0.001 LSB' : `${formatQuantity(x, '', { digits: 2, rounding: 'up' })} LSB`
  const hertz = (f: number) => formatQuantity(f, 'Hz', { digits: 3, rounding: 'down' })
  const numbers = {
    allowed,
    dc: entry.gainErrorLsb,
    ...(entry.holdsTo !== null ? { holdsTo: entry.holdsTo } : {}),
  }
  const verdict = (code: string, text: string): Reason => ({ code, text, numbers })
  if (entry.holdsTo === null)
    return {
      state: 'tight',
      verdict: verdict(
        'dc-error',
        `Loop gain ${formatQuantity(entry.loopGain, '', { digits: 3 })} leaves a gain error of ${lsb(entry.gainErrorLsb)} at DC, more than the ${lsb(allowed)} allowed. It is constant: calibration of the span removes it.`,
      ),
    }
  if (bandwidth === null)
    return {
      state: 'clear',
      verdict: verdict(
        'holds-to',
        `The ideal model holds within ${lsb(allowed)} up to ${hertz(entry.holdsTo)}. The design states no signal bandwidth to compare.`,
      ),
    }
  if (entry.holdsTo >= bandwidth)
    return {
      state: 'clear',
      verdict: verdict(
        'good-enough',
        `The ideal model holds within ${lsb(allowed)} up to ${hertz(entry.holdsTo)}; the signal goes to ${hertz(bandwidth)}, where the error is ${lsb(entry.atBandwidthLsb ?? 0)}.`,
      ),
    }
  return {
    state: 'over',
    verdict: verdict(
      'too-slow',
      `The ideal model holds within ${lsb(allowed)} only up to ${hertz(entry.holdsTo)}; at ${hertz(bandwidth)} the error is ${lsb(entry.atBandwidthLsb ?? 0)}. Take a faster amplifier, or less gain in this stage.`,
    ),
  }
}
