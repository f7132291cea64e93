import type { Candidate, Plan } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import type { Spread } from '#shared/studies/types.ts'
import { responseNames } from '#shared/filters/prototypes.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import { figure, sentence, upward } from './figures.ts'
import {
  stateWords,
  toBudgetTable,
  toCheckTable,
  toDriveTable,
  toNoiseTable,
  toSectionsTable,
  toSpreadTable,
  toStabilityTable,
  toTotalsTable,
  toYieldWords,
  type Scale,
} from './quality-tables.ts'
import type { Block, Section, Statement } from './types.ts'

/** Sections about how good a channel is: error terms, spread, noise, filter, drive, independent check. */

export interface QualityInput {
  design: Design
  plan: Plan
  candidate: Candidate
  spread: Spread | null
  /** Number of the next table. */
  number: () => number
}

const section = (id: string, title: string, blocks: Block[], aside?: string): Section => ({
  id,
  title,
  blocks,
  ...(aside ? { aside } : {}),
})

export function toQualitySections(input: QualityInput): (Section | null)[] {
  return [
    budget(input),
    spreadSection(input),
    noise(input),
    filter(input),
    stability(input),
    drive(input),
    check(input),
  ]
}

export function toScale({ design, plan, candidate }: Omit<QualityInput, 'spread' | 'number'>): Scale | null {
  const ends = candidate.realised?.converter
  const perQuantity = candidate.budget?.perQuantity
  if (!ends || perQuantity === undefined) return null
  return {
    lsb: plan.lsb,
    span: Math.abs(ends.high - ends.low),
    perQuantity,
    unit: design.sensor.quantity.unit,
  }
}

function budget(input: QualityInput): Section | null {
  const { candidate, number } = input
  const found = candidate.budget
  const scale = toScale(input)
  if (!found || !scale) return null
  const state = found.target?.state ?? 'calibrated'
  const total = found.totals[state]
  const inUnit = (volts: number) =>
    formatQuantity(volts / scale.perQuantity, scale.unit, { digits: 3, rounding: 'outward' })
  const statements: Statement[] = [
    found.target
      ? {
          state: found.target.met ? 'clear' : 'over',
          text: `${stateWords[state]} the expanded uncertainty is ${inUnit(total.expanded)}; the target is ${formatQuantity(found.target.limit / scale.perQuantity, scale.unit, { digits: 3 })}${found.target.met ? '' : ': not met'}.`,
        }
      : {
          state: 'unknown',
          text: `${stateWords[state]} the expanded uncertainty is ${inUnit(total.expanded)}. No target is stated.`,
        },
  ]
  if (found.zeroingHurts)
    statements.push({
      state: 'tight',
      text: 'Zeroing alone makes the total larger than as built: a gain error about another point is moved to the far end. Adjust zero and span, or neither.',
    })
  const blocks: Block[] = [
    { type: 'statements', items: statements },
    { type: 'table', table: toTotalsTable(found, scale) },
    { type: 'figure', draws: 'errors' },
    { type: 'table', table: toBudgetTable(found, state, scale) },
  ]
  const better = found.improvements.map((i) => sentence(i.text))
  if (better.length > 0) blocks.push({ type: 'list', items: better })
  const points = found.points.map((p) => figure(p, scale.unit)).join(' and ')
  return section(
    'errors',
    `Table ${number()}. Error budget`,
    blocks,
    `lines ${stateWords[state].toLowerCase()}; adjusted at ${points}, ${figure(input.design.temperature.calibration, '°C')}, looked at up to ${figure(input.design.calibration.interval, '')} years later`,
  )
}

function spreadSection(input: QualityInput): Section | null {
  const { spread, design, number } = input
  if (!spread) return null
  const { unit } = design.sensor.quantity
  const value = (x: number) => formatQuantity(x, unit, { digits: 3 })
  const words = toYieldWords(spread)
  const items = [
    ...(words ? [sentence(words)] : []),
    `Mean ${value(spread.mean)}, standard deviation ${value(spread.deviation)}; the first-order budget has ${value(spread.budget.deviation)}, so that the run differs by ${formatQuantity(spread.budget.difference, '', { digits: 2 })} %.`,
    spread.clipped === 0
      ? 'No board clips anywhere in the span.'
      : `${formatQuantity(spread.clipped, '', { digits: 7 })} ${spread.clipped === 1 ? 'board clips' : 'boards clip'} somewhere in the span: counted as outside, and left out of the figures.`,
  ]
  return section(
    'spread',
    `Table ${number()}. Spread of boards`,
    [
      { type: 'list', items },
      { type: 'figure', draws: 'spread' },
      { type: 'table', table: toSpreadTable(spread, unit) },
    ],
    `${formatQuantity(spread.boards, '', { digits: 7 })} boards, seed ${spread.seed}, ${spread.distribution}; reading at ${value(spread.at.quantity)}, ${figure(spread.at.temperature, '°C')}, ${stateWords[spread.state].toLowerCase()}`,
  )
}

function noise({ candidate, number }: QualityInput): Section | null {
  const found = candidate.noise
  if (!found) return null
  const bits = (x: number) => formatQuantity(x, '', { digits: 3, rounding: 'down' })
  return section(
    'noise',
    `Table ${number()}. Noise`,
    [
      {
        type: 'text',
        text: `Together ${upward(found.rms, 'V')} rms at the converter, of which the circuit makes ${upward(found.circuit, 'V')}: signal to noise ${formatQuantity(found.snr, 'dB', { digits: 3, rounding: 'down' })}, ${bits(found.effectiveBits)} effective bits, ${bits(found.noiseFreeBits)} noise-free bits. Largest source: ${found.dominant}.`,
      },
      { type: 'figure', draws: 'noise' },
      { type: 'table', table: toNoiseTable(found) },
    ],
    `from ${figure(found.from, 'Hz')} over the real response, at ${figure(found.temperature, 'K')}`,
  )
}

const kinds = {
  none: 'No filter',
  rc: 'RC low-pass',
  'sallen-key': 'Sallen–Key low-pass',
  'multiple-feedback': 'Multiple-feedback low-pass',
} as const

function filter({ candidate, design, number }: QualityInput): Section | null {
  const { filter: found, dynamics } = candidate
  if (!found || (found.kind === 'none' && !dynamics)) return null
  const lines: string[] = []
  if (found.kind !== 'none')
    lines.push(
      `${kinds[found.kind]}${found.order > 1 ? ` of order ${found.order}, ${responseNames[found.response]}` : ''}: corner ${figure(found.corner, 'Hz')}, over tolerance ${figure(found.band.corner.low, 'Hz')} to ${figure(found.band.corner.high, 'Hz')}.`,
    )
  if (found.resistance > 0)
    lines.push(`At the pin ${figure(found.resistance, 'Ω')} and ${figure(found.capacitance, 'F')}.`)
  if (found.droopAtBandwidth !== null)
    lines.push(
      `At the signal's bandwidth it takes ${formatQuantity(Math.abs(found.droopAtBandwidth), 'dB', { digits: 3 })}.`,
    )
  if (found.alias)
    lines.push(
      `From ${figure(found.alias.frequency, 'Hz')} on, what folds into the band is weakened by ${formatQuantity(found.alias.reached, 'dB', { digits: 3, rounding: 'down' })}; wanted: ${formatQuantity(found.alias.wanted, 'dB', { digits: 3 })}.`,
    )
  if (dynamics) {
    lines.push(
      dynamics.settling === null
        ? 'A step over the whole span never comes to rest: see the stability of the amplifiers.'
        : `A step over the whole span stays within ${figure(design.rules.settling, 'LSB')} after ${upward(dynamics.settling, 's')}.`,
    )
    if (dynamics.bandwidth !== null)
      lines.push(`Sensor to converter the band is ${figure(dynamics.bandwidth, 'Hz')} wide.`)
    if (dynamics.fullPower !== null)
      lines.push(`The full span is not slewed up to ${figure(dynamics.fullPower, 'Hz')}.`)
  }
  const blocks: Block[] = [
    { type: 'list', items: lines },
    { type: 'figure', draws: 'response' },
  ]
  if (found.sections.length > 0) blocks.push({ type: 'table', table: toSectionsTable(found) })
  return section(
    'filter',
    found.sections.length > 0 ? `Table ${number()}. Filter and settling` : 'Filter and settling',
    blocks,
    'through the network, with the standard parts and real amplifiers',
  )
}

function stability({ candidate, number }: QualityInput): Section | null {
  const entries = candidate.stability
  if (!entries || entries.length === 0) return null
  const cures = entries.flatMap((e) => (e.state === 'clear' ? [] : e.cures.map((c) => sentence(c.text))))
  return section(
    'stability',
    `Table ${number()}. Stability of each amplifier`,
    [
      { type: 'table', table: toStabilityTable(entries) },
      ...(cures.length > 0 ? [{ type: 'list' as const, items: cures }] : []),
    ],
    'loop opened in the real network, worst over the tolerance of capacitors; under 45° is tight, under 30° over',
  )
}

function drive({ candidate, number }: QualityInput): Section | null {
  const found = candidate.drive
  if (!found) return null
  const blocks: Block[] = [
    { type: 'statements', items: [{ state: found.state, text: sentence(found.text) }] },
    { type: 'table', table: toDriveTable(found) },
  ]
  const lines: string[] = []
  if (found.average)
    lines.push(
      `Sampling draws ${upward(found.average.current, 'A')} on average: ${upward(found.average.droop, 'V')} across the series resistance.`,
    )
  if (found.largestSource !== null)
    lines.push(
      `Without a buffer a source of up to ${formatQuantity(found.largestSource, 'Ω', { digits: 3, rounding: 'down' })} still settles.`,
    )
  if (found.multiplexed)
    lines.push(
      `Multiplexed over ${found.multiplexed.channels} channels: a step of ${figure(found.multiplexed.step, 'V')} ${found.multiplexed.needed === null ? 'never settles' : `needs ${upward(found.multiplexed.needed, 's')}`}.`,
    )
  if (lines.length > 0) blocks.push({ type: 'list', items: lines })
  return section('drive', `Table ${number()}. Drive of the converter`, blocks)
}

function check({ candidate, number }: QualityInput): Section | null {
  const found = candidate.check
  if (!found) return null
  return section(
    'check',
    `Table ${number()}. Independent check`,
    found.lines.length > 0
      ? [{ type: 'table', table: toCheckTable(found) }]
      : [{ type: 'list', items: ['The simulator gave no answer: nothing was compared.'] }],
    `the netlist of this note run in ${found.simulator}; it shares the connections with the plan, not the arithmetic`,
  )
}
