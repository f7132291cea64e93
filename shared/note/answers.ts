import type { Candidate, Plan } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import { formatQuantity, formatRange } from '#shared/units/format-quantity.ts'
import { count, figure, NONE, room, share, uncapital, upward } from './figures.ts'
import { stateWords } from './quality-tables.ts'
import { findLeastRoom, toLinearSpan, toSlope, toWorstEndError, type Span } from './span.ts'
import type { Answer } from './types.ts'

/** The four answers on the first sheet. Headlines hold for the worst board; figures of nominal parts are smaller. */
export function toAnswers(design: Design, plan: Plan, candidate: Candidate): Answer[] {
  return [
    linearOver(design, candidate),
    leastRoom(design, candidate),
    errorAsBuilt(design, plan, candidate),
    oneCode(design, plan, candidate),
  ]
}

function linearOver(design: Design, candidate: Candidate): Answer {
  const { quantity } = design.sensor
  const required = formatRange(quantity.low, quantity.high, quantity.unit)
  const label = 'Linear over, worst case'
  if (!candidate.levels?.length) return { label, figure: NONE, small: [`Required: ${required}`] }
  const worst = toLinearSpan(candidate.levels, quantity, true)
  const nominal = toLinearSpan(candidate.levels, quantity, false)
  const direction = quantity.high > quantity.low ? 1 : -1
  const short =
    (worst.low !== null && (worst.low - quantity.low) * direction > 0) ||
    (worst.high !== null && (quantity.high - worst.high) * direction > 0)
  return {
    label,
    figure: spanText(worst, quantity.unit, direction),
    small: [`Required: ${required}`, `Nominal parts: ${spanText(nominal, quantity.unit, direction)}`],
    ...(short ? { state: 'over' as const } : {}),
  }
}

/** Both ends rounded inward; an end at which nothing clips is said in words. */
export function spanText(span: Span, unit: string, direction: number): string {
  const { low, high } = span
  if (low !== null && high !== null) return formatRange(low, high, unit, { digits: 4, rounding: 'inward' })
  if (high !== null)
    return `up to ${formatQuantity(high, unit, { digits: 4, rounding: direction > 0 ? 'down' : 'up' })}`
  if (low !== null)
    return `from ${formatQuantity(low, unit, { digits: 4, rounding: direction > 0 ? 'up' : 'down' })}`
  return 'no limit met'
}

function leastRoom(design: Design, candidate: Candidate): Answer {
  const rule = `Rule: ${share(design.rules.room)}`
  const least = findLeastRoom(candidate.levels ?? [], candidate.headroom)
  if (!least) return { label: 'Least room, worst case', figure: NONE, small: [rule] }
  const nominal = least.level.nominalRoom[least.side]
  return {
    label: 'Least room, worst case',
    figure: room(least.fraction),
    small: [
      `${least.pinSide === 'low' ? 'Below' : 'Above'}, ${uncapital(least.pin)}`,
      `Rule: ${share(design.rules.room)}. Nominal parts: ${room(nominal)}`,
    ],
    ...(least.level.state === 'over' || least.level.state === 'tight' ? { state: least.level.state } : {}),
  }
}

function errorAsBuilt(design: Design, plan: Plan, candidate: Candidate): Answer {
  const { unit } = design.sensor.quantity
  const slope = toSlope(candidate, design.sensor.quantity)
  const nominal = candidate.realised
    ? Math.max(
        Math.abs(candidate.realised.endpointErrorQuantity.low),
        Math.abs(candidate.realised.endpointErrorQuantity.high),
      )
    : null
  const small = nominal === null ? [] : [`Nominal parts miss the end points by ${upward(nominal, unit)}`]
  if (slope === null) return { label: 'Error as built, worst case', figure: NONE, small }
  if (candidate.budget) {
    const { totals, target, perQuantity } = candidate.budget
    const state = target?.state ?? 'calibrated'
    const expanded = upward(totals[state].expanded / perQuantity, unit)
    return {
      label: `Expanded uncertainty, ${uncapital(stateWords[state])}`,
      figure: `±${expanded}`,
      small: [
        target
          ? `Required: ±${formatQuantity(target.limit / perQuantity, unit, { digits: 3 })}`
          : 'No target is stated',
        `As built, worst case: ±${upward(totals.asBuilt.worst / perQuantity, unit)}`,
      ],
      ...(target && !target.met ? { state: 'over' as const } : {}),
    }
  }
  const ends = toWorstEndError(candidate, plan)
  return {
    label: 'End-point error, worst case',
    figure: ends === null ? NONE : `±${upward(ends / slope, unit)}`,
    small,
  }
}

function oneCode(design: Design, plan: Plan, candidate: Candidate): Answer {
  const { unit } = design.sensor.quantity
  const slope = toSlope(candidate, design.sensor.quantity)
  const codes = 2 ** design.converter.bits
  const needed = candidate.realised ? Math.floor(Math.abs(candidate.realised.codesUsed)) : null
  const used =
    needed === null
      ? `${count(codes)} codes`
      : needed > codes
        ? `The span asks for ${count(needed)} of ${count(codes)} codes`
        : `${count(needed)} of ${count(codes)} codes used`
  const corner = candidate.filter?.kind === 'rc' ? [`Corner ${figure(candidate.filter.corner, 'Hz')}`] : []
  return {
    label: 'One code',
    figure: slope === null ? NONE : formatQuantity(Math.abs(plan.lsb / slope), unit, { digits: 2 }),
    small: [used, ...corner],
  }
}
