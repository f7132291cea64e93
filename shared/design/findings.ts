import type { WatchedPin } from '#shared/budget/assess.ts'
import { spanMargin, stateOf, wholeMargin } from '#shared/budget/headroom.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import type { Candidate, Finding, Load, ModelEntry, OverVoltage, Reason } from './plan.ts'
import type { Design } from './schema.ts'

/** Sentences made from codes and numbers, in this one place. Figures are rounded to the side that flatters nothing. */

const volts = (v: number) => formatQuantity(v, 'V', { digits: 4 })
const short = (v: number) => formatQuantity(v, 'V', { digits: 2, rounding: 'up' })

/** A place of the measurand: rounded towards the span, never printed wider than it is. */
function measurand(design: Design, q: number): string {
  const { unit, low, high } = design.sensor.quantity
  const rounding = q >= (low + high) / 2 ? 'down' : 'up'
  return formatQuantity(q, unit, { digits: 4, rounding })
}

/** Why a pin that leaves its region makes the arrangement impossible, as something to act on. */
export function clipReason(design: Design, pin: WatchedPin): Reason {
  const margin = wholeMargin(pin)
  const atLow = margin.low <= margin.high
  const by = -Math.min(margin.low, margin.high)
  const limit = atLow ? pin.allowed.low : pin.allowed.high
  const goes = atLow ? limit - by : limit + by
  const numbers = { goes, limit, short: by }
  if (pin.role === 'converter')
    return {
      code: atLow ? 'converter-low' : 'converter-high',
      text: `The worst board would bring the converter input to ${volts(goes)}, ${short(by)} ${atLow ? 'below' : 'above'} its range: keep a wider guard band or take closer resistors.`,
      numbers,
    }
  const needsNegative = atLow && goes < design.rails.negative + 1e-9 && design.rails.negative >= 0
  const word = pin.role === 'input' ? 'input' : pin.role === 'internal' ? 'internal' : 'swing'
  const rail = atLow ? 'negative' : 'positive'
  const cure = needsNegative
    ? `needs a negative rail: `
    : atLow
      ? `needs a lower negative rail or an amplifier that reaches nearer to it: `
      : `needs a higher positive rail or an amplifier that reaches nearer to it: `
  return {
    code: `${word}-${atLow ? 'low' : 'high'}`,
    text: capital(
      `${cure}${pin.name} would go to ${volts(goes)}; with this ${rail} rail it is linear only ${atLow ? 'down' : 'up'} to ${volts(limit)}, short by ${short(by)}.`,
    ),
    numbers,
  }
}

const capital = (text: string): string => text.charAt(0).toUpperCase() + text.slice(1)

/** Findings about one candidate, worst first. */
export function findingsFor(
  design: Design,
  pins: WatchedPin[],
  rest: { model: ModelEntry[]; loads: Load[]; overVoltage: OverVoltage[]; candidate: Candidate },
): Finding[] {
  const list: Finding[] = []
  for (const pin of pins) list.push(...pinFindings(design, pin))
  for (const load of rest.loads) if (load.state === 'over') list.push(loadFinding(load))
  for (const entry of rest.model) {
    if (entry.state === 'clear') continue
    list.push({
      ...entry.verdict,
      text: `${entry.amplifier}: ${entry.verdict.text}`,
      severity: entry.state === 'over' ? 'over' : 'info',
      place: entry.amplifier,
      path: 'parts.amplifier',
    })
  }
  for (const entry of rest.overVoltage) {
    if (entry.state === 'clear') continue
    list.push(overVoltageFinding(entry))
  }
  list.push(...fixedFindings(rest.candidate))
  const weight = { over: 0, tight: 1, caution: 2, info: 3 } as const
  return list.sort((a, b) => weight[a.severity] - weight[b.severity])
}

function pinFindings(design: Design, pin: WatchedPin): Finding[] {
  const state = stateOf(pin, design.rules)
  if (state === 'clear' || state === 'unknown') return []
  const region = pin.allowed.high - pin.allowed.low
  if (state === 'over') return [overFinding(design, pin)]
  const span = spanMargin(pin)
  return (['low', 'high'] as const)
    .filter(
      (end) => span[end] < (design.rules.room - 1e-6) * region && !(pin.role === 'input' && pin.atRail[end]),
    )
    .map((end) => ({
      code: end === 'low' ? 'tight-low' : 'tight-high',
      severity: 'tight' as const,
      place: pin.name,
      path: pin.role === 'converter' ? 'converter.guard' : 'parts.amplifier',
      text: `${percent(span[end] / region)} room ${end === 'low' ? 'under' : 'over'} ${pin.name}. The rule keeps ${percent(design.rules.room, 'up')}.`,
      numbers: { room: span[end] / region, rule: design.rules.room },
    }))
}

const percent = (x: number, rounding: 'down' | 'up' = 'down') =>
  formatQuantity(x, '', { digits: 2, display: 'percent', rounding })

function overFinding(design: Design, pin: WatchedPin): Finding {
  const reason = clipReason(design, pin)
  const margin = wholeMargin(pin)
  const atLow = margin.low <= margin.high
  const q = atLow ? pin.worstClipsAt.low : pin.worstClipsAt.high
  const { quantity } = design.sensor
  const inside = q !== null && (q - quantity.low) * (q - quantity.high) <= 0
  const clip = q !== null && inside ? `Clips at ${measurand(design, q)}. ` : ''
  return {
    ...reason,
    text: clip + reason.text,
    severity: 'over',
    place: pin.name,
    path: pin.role === 'converter' ? 'converter.guard' : atLow ? 'rails.negative' : 'rails.positive',
  }
}

function loadFinding(load: Load): Finding {
  const amps = (a: number) => formatQuantity(a, 'A', { digits: 3, rounding: 'up' })
  const sinks = load.sink > load.allowed.sink
  const text = sinks
    ? `${load.node === 'vref' ? 'The shift reference' : 'The reference'} would have to take ${amps(load.sink)}; it takes ${amps(load.allowed.sink)}. Buffer it, or use larger resistors.`
    : `${load.node === 'vref' ? 'The shift reference' : 'The reference'} would have to give ${amps(load.source)}; it gives ${amps(load.allowed.source)}. Buffer it, or use larger resistors.`
  return {
    code: sinks ? 'reference-sink' : 'reference-source',
    severity: 'over',
    place: load.node,
    path: load.node === 'vref' ? 'shiftReference' : 'converter.reference',
    text,
    numbers: { source: load.source, sink: load.sink },
  }
}

function overVoltageFinding(entry: OverVoltage): Finding {
  const over = entry.state === 'over'
  const limit = formatQuantity(entry.clampLimit ?? 0, 'A', { digits: 2 })
  const unlimited = entry.clampCurrent === Number.MAX_VALUE
  const current = unlimited ? '' : formatQuantity(entry.clampCurrent, 'A', { digits: 2, rounding: 'up' })
  return {
    code: over ? 'over-voltage' : 'clamp-current',
    severity: over ? 'over' : 'caution',
    place: 'adc',
    path: 'converter.absolute',
    text: `${entry.case}: the converter pin is driven to ${volts(entry.pinVolts.high)}; ${
      unlimited
        ? 'nothing limits the current into its clamp. Add a series resistor.'
        : over
          ? `its clamp would carry ${current}, more than the ${limit} allowed. Raise the series resistor.`
          : `its clamp carries ${current} of the ${limit} allowed.`
    }`,
    numbers: { volts: entry.pinVolts.high, current: entry.clampCurrent },
  }
}

/** What a person fixed is obeyed; how much worse than the plan's own choice it is stands here. */
function fixedFindings(candidate: Candidate): Finding[] {
  const pick = candidate.picks?.[candidate.pick ?? 0]
  const fixed = candidate.components?.some((c) => c.chosen) ?? false
  if (!pick || !fixed || pick.practical) return []
  const error = percent(pick.error, 'up')
  return [
    {
      code: 'fixed-values',
      severity: 'info',
      place: 'S1',
      path: 'choose.values',
      text: `The fixed values are obeyed; an end point is off by ${error} of the span with ideal amplifiers.`,
      numbers: { error: pick.error },
    },
  ]
}
