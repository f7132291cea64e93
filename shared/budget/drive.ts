import { solveDc } from '#shared/analysis/dc.ts'
import { findSettling, prepareRecovery, type StepResponse } from '#shared/analysis/step-response.ts'
import { averageCurrent, chargeShare, largestSource, timeConstants } from '#shared/converters/drive.ts'
import type { ChainSpec } from '#shared/design/chain.ts'
import type { Drive, Dynamics, RoomState } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import type { Network } from '#shared/network/types.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import { responseChain } from './response-chain.ts'
import { HOLD, withSampling } from './stability.ts'

/** Criteria that makers of converters use, LSB. */
const CRITERIA = [1, 0.5, 0.25]
/** More than this share of the acquisition time in use counts as tight. */
const TIGHT = 0.8
/** What is left of a kick at the end of the acquisition is no line of the budget. */
const UNBUDGETED = 'The error budget does not hold this.'
/** Highest pace of a motion, Hz. */
const FASTEST = 1e9

/**
 * What sampling does to the pin and whether it is over in time (method: converter). The sampling capacitor starts
 * discharged and shares its charge with the reservoir; how the pin comes back follows from the network itself, amplifier
 * included, while the capacitor hangs on it through its switch. A multiplexed converter brings the level of the channel
 * before, at the other end of the range. Times, s; errors in LSB.
 */
export function sizeDrive(design: Design, spec: ChainSpec, dynamics: Dynamics): Drive {
  const { converter, rules } = design
  const { input, bits, samplingCapacitance, switchResistance, multiplexed } = converter
  const lsb = (input.high - input.low) / 2 ** bits
  const { network } = responseChain(design, spec)
  const criterion = rules.settling
  const available = converter.acquisitionTime ?? null
  const step = Math.max(Math.abs(input.low), Math.abs(input.high))
  const kick = step * chargeShare(samplingCapacitance, reservoirOf(network))
  const head = { criterion, kick, available, average: averageOf(design, network, step) }
  if (samplingCapacitance === 0)
    return {
      ...head,
      needed: 0,
      settled: null,
      criteria: [],
      largestSource: null,
      multiplexed: null,
      state: 'unknown',
      text: 'The design states no sampling capacitance: what sampling draws from the pin is not known.',
    }
  const own = recoveryOf(design, network, dynamics, step, 0)
  const timeFor = (recovery: StepResponse, codes: number) => findSettling(recovery, codes * lsb)
  const isMet = (time: number | null) => (available === null ? null : time !== null && time <= available)
  const needed = timeFor(own, criterion)
  const settled = available === null ? null : Math.abs(own.errorAt(available)) / lsb
  const constants = timeConstants(step / (criterion * lsb))
  const drive = {
    ...head,
    needed,
    settled,
    criteria: CRITERIA.map((codes) => {
      const time = timeFor(own, codes)
      return { criterion: codes, needed: time, met: isMet(time) }
    }),
    largestSource:
      available === null ? null : largestSource(available, switchResistance, samplingCapacitance, constants),
    multiplexed: multiplexed
      ? judgeMultiplexed(
          multiplexed.channels,
          input.high - input.low,
          (whole) => timeFor(recoveryOf(design, network, dynamics, whole, multiplexed.resistance), criterion),
          isMet,
        )
      : null,
  }
  const times = [needed, ...(drive.multiplexed ? [drive.multiplexed.needed] : [])]
  const slowest = times.reduce<number | null>(
    (most, t) => (most === null || t === null ? null : Math.max(most, t)),
    0,
  )
  const judged = { ...drive, state: stateOf(slowest, available) }
  return { ...judged, text: sentence(judged, slowest, step, design) }
}

function stateOf(slowest: number | null, available: number | null): RoomState {
  if (slowest === null) return 'over'
  if (available === null) return 'unknown'
  return slowest > available ? 'over' : slowest > TIGHT * available ? 'tight' : 'clear'
}

/** The channel before stands at the other end of the range, and its level comes through the multiplexer. */
function judgeMultiplexed(
  channels: number,
  step: number,
  timeFor: (step: number) => number | null,
  isMet: (time: number | null) => boolean | null,
): NonNullable<Drive['multiplexed']> {
  const needed = timeFor(step)
  return { channels, step, needed, met: isMet(needed) }
}

/** Capacitance of the reservoir at the pin, F. */
function reservoirOf(network: Network): number {
  const { p, n } = network.output
  return network.elements.reduce(
    (sum, e) =>
      e.kind === 'capacitor' && ((e.a === p && e.b === n) || (e.a === n && e.b === p)) ? sum + e.value : sum,
    0,
  )
}

/** How the sampled voltage comes to rest after the capacitor was `step` volts off when the switch closed. */
function recoveryOf(
  design: Design,
  network: Network,
  { bandwidth }: Dynamics,
  step: number,
  further: number,
): StepResponse {
  const { samplingCapacitance } = design.converter
  const series = design.converter.switchResistance + further
  const sampling = withSampling(design, network, further)
  const amplifiers = network.elements.flatMap((e) => (e.kind === 'amplifier' ? [e.part.gbw] : []))
  const own = series > 0 ? 1 / (2 * Math.PI * series * samplingCapacitance) : 0
  const pace = Math.min(FASTEST, Math.max(own, bandwidth ?? FASTEST, ...amplifiers))
  // Without a switch resistance the charge has gone over into the reservoir before anything else moves.
  if (series > 0) return prepareRecovery(sampling, HOLD, step, { pace })
  return prepareRecovery(
    sampling,
    network.output.p,
    step * chargeShare(samplingCapacitance, reservoirOf(network)),
    {
      pace,
    },
  )
}

/** Average current of sampling and what it costs across the resistance that the pin sees; null without a rate. */
function averageOf(design: Design, network: Network, step: number): Drive['average'] {
  const { architecture, sampleRate, modulatorRate, samplingCapacitance } = design.converter
  const rate = architecture === 'oversampling' ? (modulatorRate ?? sampleRate) : sampleRate
  if (rate === undefined || samplingCapacitance === 0) return null
  const current = averageCurrent(samplingCapacitance, step, rate)
  return { current, droop: current * resistanceAt(network) }
}

/** Resistance of the output at DC, Ω. */
function resistanceAt(network: Network): number {
  const amount = 1e-6
  const { p, n } = network.output
  const loaded: Network = {
    ...network,
    elements: [
      ...network.elements,
      { kind: 'current-source', ref: 'ITEST', from: n, to: p, value: amount, stage: 'converter' },
    ],
  }
  const at = (one: Network) => solveDc(one, { model: 'real' }).output
  return (at(loaded) - at(network)) / amount
}

type Standing = Pick<Drive, 'average' | 'kick' | 'criterion' | 'state'>
type Judged = Standing & Pick<Drive, 'available' | 'settled' | 'multiplexed' | 'needed'>

/**
 * What the average current of sampling costs across the series resistance, LSB. A pin that settles within each sample
 * draws its charge there, and nothing lasts; 0 where nothing is known.
 */
export function lastingDroop({ average, kick, criterion, state }: Standing, lsb: number): number {
  const isBack = state === 'clear' || state === 'tight'
  return average === null || (isBack && kick > criterion * lsb) ? 0 : average.droop / lsb
}

/** What that current costs, as a sentence. */
export const droopWords = (current: number, codes: number): string =>
  `Sampling draws ${formatQuantity(current, 'A', { digits: 3, rounding: 'up' })} on average, which costs at most ${formatCodes(codes)} across the series resistance; it is proportional to the level, so that calibration of the span removes it.`

const formatCodes = (x: number) => `${formatQuantity(x, '', { digits: 2, rounding: 'up' })} LSB`

function sentence(drive: Judged, slowest: number | null, step: number, { converter }: Design): string {
  const { kick, criterion, available, settled, average, multiplexed, needed } = drive
  const { input, bits, samplingCapacitance } = converter
  const lsb = (input.high - input.low) / 2 ** bits
  const volts = (v: number) => formatQuantity(v, 'V', { digits: 3, rounding: 'up' })
  const codes = formatCodes
  const time = (t: number) => formatQuantity(t, 's', { digits: 3, rounding: 'up' })
  const other = multiplexed && needed !== null && (multiplexed.needed ?? Infinity) > needed
  const between = other ? ' after the channel before, at the other end of the range,' : ''
  const isBack = available !== null && slowest !== null && slowest <= available
  const second = (): string => {
    if (slowest === null)
      return `The pin never comes to rest: see the stability of its amplifier. ${UNBUDGETED}`
    if (slowest === 0) return `It stays within ${codes(criterion)}.`
    const back = `It is back within ${codes(criterion)}${between} after ${time(slowest)}`
    if (available === null) return `${back}; the design states no acquisition time to compare.`
    if (isBack) return `${back}, of the ${time(available)} there are.`
    const left = settled === null || other ? '' : `: ${codes(settled)} are left`
    const enough = samplingCapacitance * (step / (criterion * lsb) - 1)
    return `It needs ${time(slowest)}${between} to be back within ${codes(criterion)}, and there are ${time(available)}${left}. A reservoir of ${formatQuantity(enough, 'F', { digits: 2, rounding: 'up' })} keeps the pin within that by itself; a smaller series resistor or a longer acquisition lets it settle. ${UNBUDGETED}`
  }
  const droop = lastingDroop(drive, lsb)
  const third = average !== null && droop > 0.01 ? ` ${droopWords(average.current, droop)}` : ''
  return `Sampling pulls the pin by ${volts(kick)} (${codes(kick / lsb)}). ${second()}${third}`
}
