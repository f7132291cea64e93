import { droopWords, lastingDroop } from '#shared/budget/drive.ts'
import { filterFindings } from '#shared/filters/findings.ts'
import { outrunsAcquisition, samplingRate } from '#shared/filters/wish.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import type {
  Budget,
  BudgetLine,
  Drive,
  Dynamics,
  FilterPlan,
  Finding,
  NoiseSummary,
  Reason,
  StabilityEntry,
} from './plan.ts'
import type { Design } from './schema.ts'

/** Sentences about stability, error, noise and drive, from codes and numbers, in this one place. */

const percent = (x: number) => formatQuantity(x, '', { digits: 2, display: 'percent' })
const degrees = (x: number) => formatQuantity(x, '°', { digits: 2, rounding: 'down' })

function stabilityReason(entry: StabilityEntry): Reason {
  const { amplifier, worst, cures } = entry
  const margin = worst ?? 0
  const cure = cures[0]
  return {
    code: 'phase-margin',
    text: `${amplifier} has a phase margin of ${degrees(margin)} in the worst case: ${
      margin <= 0 ? 'it oscillates' : 'it rings, and with a little more capacitance it oscillates'
    }. ${cure ? cure.text : 'Take less capacitance at its output or its inverting input, or a slower amplifier.'}`,
    numbers: { margin, ...(cure ? { cure: cure.value } : {}) },
  }
}

/** What forbids a chain whose amplifier is next to oscillation. */
export const stabilityReasons = (entry: StabilityEntry): Reason[] =>
  entry.state === 'over' ? [stabilityReason(entry)] : []

export function stabilityFindings(entry: StabilityEntry): Finding[] {
  if (entry.state !== 'over' && entry.state !== 'tight') return []
  return [
    {
      ...stabilityReason(entry),
      severity: entry.state,
      place: entry.amplifier,
      path: entry.cures[0]?.kind === 'series-resistor' ? 'choose.drive.resistance' : 'parts.amplifier',
    },
  ]
}

/** What the plan added by itself, and why. `entry` is how the amplifier stood without it. */
export function steadiedFinding(entry: StabilityEntry): Finding {
  const cure = entry.cures.find(({ kind }) => kind === 'feedback-capacitor')
  const ref = cure?.ref ?? ''
  return {
    code: 'steadied',
    severity: 'info',
    place: entry.amplifier,
    path: `choose.values.${ref}`,
    text: `${ref}, ${formatQuantity(cure?.value ?? 0, 'F')} from the output of ${entry.amplifier} to its − input, keeps it steady: without it the phase margin would be ${degrees(entry.worst ?? 0)} in the worst case.`,
    numbers: { margin: entry.worst ?? 0, capacitance: cure?.value ?? 0 },
  }
}

interface Quality {
  budget: Budget
  noise: NoiseSummary
  dynamics: Dynamics
  filter: FilterPlan
  drive: Drive
}

export function qualityFindings(design: Design, quality: Quality): Finding[] {
  return [
    ...targetFindings(design, quality.budget),
    ...filterFindings(design, quality.filter),
    ...dynamicsFindings(design, quality.dynamics),
    ...rateFindings(design),
    ...driveFindings(quality.drive),
    ...droopFindings(design, quality.drive),
  ]
}

const states = {
  asBuilt: 'As built',
  zeroed: 'After zero adjustment',
  calibrated: 'After zero and span adjustment',
} as const

/** The line that makes up most of the variance; null where nothing does. */
const largestOf = ({ lines }: Budget): BudgetLine | null =>
  lines.reduce<BudgetLine | null>((most, line) => (line.share > (most?.share ?? 0) ? line : most), null)

function targetFindings(design: Design, budget: Budget): Finding[] {
  const list: Finding[] = []
  const { target, perQuantity } = budget
  const { unit } = design.sensor.quantity
  const inUnit = (volts: number, rounding: 'up' | 'down') =>
    formatQuantity(volts / perQuantity, unit, { digits: 3, rounding })
  if (target && !target.met) {
    const { expanded } = budget.totals[target.state]
    const largest = largestOf(budget)
    list.push({
      code: 'target',
      severity: 'over',
      place: 'target',
      path: largest?.path ?? 'target.limit',
      text: `${states[target.state]} the expanded uncertainty is ${inUnit(expanded, 'up')}. ${inUnit(target.limit, 'down')} is required: short by ${inUnit(expanded - target.limit, 'up')}.${
        largest ? ` Largest: ${largest.label}, ${percent(largest.share)}.` : ''
      }`,
      numbers: { expanded, limit: target.limit },
    })
  }
  if (budget.zeroingHurts)
    list.push({
      code: 'zeroing-hurts',
      severity: target?.state === 'zeroed' ? 'tight' : 'info',
      place: 'calibration',
      path: 'calibration.points',
      text: `Zero adjustment alone makes the uncertainty larger: ${inUnit(budget.totals.zeroed.expanded, 'up')} instead of ${inUnit(budget.totals.asBuilt.expanded, 'up')}. Adjust zero and span, or neither.`,
      numbers: {
        zeroed: budget.totals.zeroed.expanded,
        asBuilt: budget.totals.asBuilt.expanded,
      },
    })
  return list
}

function dynamicsFindings(design: Design, dynamics: Dynamics): Finding[] {
  if (dynamics.followsSignal || dynamics.fullPower === null) return []
  const hertz = (f: number, rounding: 'up' | 'down') => formatQuantity(f, 'Hz', { digits: 3, rounding })
  return [
    {
      code: 'slew-rate',
      severity: 'tight',
      place: 'amplifiers',
      path: 'parts.amplifier.slewRate',
      text: `The full span is slewed from ${hertz(dynamics.fullPower, 'down')} on; the signal reaches to ${hertz(design.sensor.bandwidth ?? 0, 'up')}. Take a faster amplifier.`,
      numbers: { fullPower: dynamics.fullPower },
    },
  ]
}

function rateFindings(design: Design): Finding[] {
  const { acquisitionTime, architecture, modulatorRate } = design.converter
  const rate = samplingRate(design.converter)
  if (rate === null || acquisitionTime === undefined || !outrunsAcquisition(design)) return []
  const seconds = (t: number, rounding: 'up' | 'down') => formatQuantity(t, 's', { digits: 3, rounding })
  const isModulator = architecture === 'oversampling' && modulatorRate !== undefined
  return [
    {
      code: 'sample-rate',
      severity: 'over',
      place: 'adc',
      path: isModulator ? 'converter.modulatorRate' : 'converter.sampleRate',
      text: `At ${formatQuantity(rate, 'Hz', { digits: 3 })} there is ${seconds(1 / rate, 'down')} between samples; acquisition takes ${seconds(acquisitionTime, 'up')}. Sample at ${formatQuantity(1 / acquisitionTime, 'Hz', { digits: 3, rounding: 'down' })} or less.`,
      numbers: { rate, acquisitionTime },
    },
  ]
}

/** A drive that does not settle says so itself, droop included. */
function droopFindings({ converter }: Design, drive: Drive): Finding[] {
  const lsb = (converter.input.high - converter.input.low) / 2 ** converter.bits
  const codes = lastingDroop(drive, lsb)
  if (drive.average === null || codes <= drive.criterion || drive.state === 'over') return []
  return [
    {
      code: 'drive-droop',
      severity: 'caution',
      place: 'adc',
      path: 'choose.drive',
      text: `${droopWords(drive.average.current, codes)} The error budget does not hold it; a smaller R9 makes it less.`,
      numbers: { current: drive.average.current, droop: codes },
    },
  ]
}

function driveFindings(drive: Drive): Finding[] {
  if (drive.state !== 'over' && drive.state !== 'tight') return []
  return [
    {
      code: 'drive',
      severity: drive.state,
      place: 'adc',
      path: 'choose.drive',
      text: drive.text,
      numbers: {
        needed: drive.needed ?? 0,
        ...(drive.available === null ? {} : { available: drive.available }),
      },
    },
  ]
}
