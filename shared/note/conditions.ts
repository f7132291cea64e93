import type { Candidate, Plan } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import { formatQuantity, formatRange } from '#shared/units/format-quantity.ts'
import { figure, sentence, share } from './figures.ts'

/** What has to be true for the first sheet to hold, in short lines. */
export function toConditions(design: Design, candidate: Candidate): string[] {
  const { temperature, rails, parts, sensor, converter } = design
  const lines = [
    `the electronics stay between ${formatRange(temperature.low, temperature.high, '°C').replace(' to ', ' and ')}`,
    railsLine(rails),
    `resistors keep ±${share(parts.resistors.tolerance)} and ±${figure(parts.resistors.drift, '1/K')}`,
  ]
  if (sensor.sourceResistance > 0)
    lines.push(
      `the source has ${figure(sensor.sourceResistance, 'Ω')}${sensor.leadResistance > 0 ? ` and its leads ${figure(sensor.leadResistance, 'Ω')}` : ''}`,
    )
  const { reference } = converter
  if (reference)
    lines.push(
      `the converter's ${figure(reference.voltage, 'V')} reference keeps ±${share(reference.tolerance)}`,
    )
  const shift = design.shiftReference
  if (
    shift &&
    shift.same === undefined &&
    shift.voltage !== undefined &&
    candidate.components?.some((c) => c.nodes.includes('vref'))
  )
    lines.push(`the ${figure(shift.voltage, 'V')} shift reference keeps ±${share(shift.tolerance)}`)
  const shared = sharedSource(design)
  if (shared) lines.push(shared)
  const { points, interval } = design.calibration
  if (points.length > 0)
    lines.push(
      `the channel is set at ${points.map((p) => figure(p, sensor.quantity.unit)).join(' and ')}, every ${formatQuantity(interval, '', { digits: 3 })} ${interval === 1 ? 'year' : 'years'}`,
    )
  return lines
}

function railsLine(rails: Design['rails']): string {
  const limit = rails.tolerance > 0 ? ` within ±${share(rails.tolerance)}` : ' exactly'
  return rails.negative === 0
    ? `the supply is ${figure(rails.positive, 'V')}${limit}`
    : `the supplies are ${formatRange(rails.negative, rails.positive, 'V').replace(' to ', ' and ')}${limit}`
}

function sharedSource(design: Design): string | null {
  const { sensor, shiftReference } = design
  const excitation = sensor.kind === 'bridge' ? sensor.excitation : null
  const same = excitation && typeof excitation === 'object' ? excitation.same : undefined
  if (same) return `the excitation and the ${sourceName[same]} come from one source`
  if (shiftReference?.same)
    return `the shift reference and the ${sourceName[shiftReference.same]} are one source`
  return null
}

const sourceName = {
  converter: "converter's reference",
  shift: 'shift reference',
  positive: 'positive rail',
} as const

/** What the figures of the later sheets rest on, and what they leave out. */
export function toAssumptions(design: Design, candidate: Candidate | null): string[] {
  const { parts, temperature } = design
  const lines = [
    'Nominal figures are those of the whole network: source and divider resistances, the load of the next stage and the finite gain, input resistance and bias current of each amplifier are in it.',
    `Worst case takes every resistor at either limit (initial tolerance plus ±${figure(parts.resistors.drift, '1/K')} over ${formatRange(temperature.low, temperature.high, '°C')}), together with offset, offset current, common-mode and supply rejection, references and rails at theirs.`,
  ]
  if (candidate?.bound)
    lines.push(
      candidate.bound.proven
        ? `The headroom bound is exact: all ${candidate.bound.vertices} combinations of the limits of ${candidate.bound.resistors} resistors were computed.`
        : `The headroom bound is not proven: with ${candidate.bound.resistors} resistors only ${candidate.bound.vertices} combinations were computed.`,
    )
  lines.push(
    'Part figures are guaranteed limits at 25 °C, except open-loop gain, gain-bandwidth product and output resistance, which are typical.',
    'Levels, clip points and room are printed rounded inward, errors rounded up: no figure here is better than what was computed.',
    'Not covered by this note: protection and interference, layout, leakage of the board, and what a sensor does that its figures do not say.',
  )
  return lines
}

const scopeOfPlan =
  'Spandrel plans the analog path only. Isolation, intrinsic safety, surge protection and functional safety follow the local codes and a licensed or certified practitioner.'

/** What the plan warns of; at least the limits of what is planned. */
export function toCautions(plan: Plan): string[] {
  const texts = plan.cautions.map((caution) => sentence(caution.text))
  return texts.length > 0 ? [...new Set(texts)] : [scopeOfPlan]
}
