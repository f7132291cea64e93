import type { Stress, WatchedPin } from '#shared/budget/assess.ts'
import { spanMargin, stateOf, wholeMargin } from '#shared/budget/headroom.ts'
import { isFilterStage } from '#shared/filters/filter-spec.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import type { Candidate, Finding, Load, ModelEntry, OverVoltage, Reason, StabilityEntry } from './plan.ts'
import { stabilityFindings } from './quality-findings.ts'
import type { Design } from './schema.ts'

/** Sentences made from codes and numbers, in this one place. Figures are rounded to the side that flatters nothing. */

const volts = (v: number) => formatQuantity(v, 'V', { digits: 4 })
const short = (v: number) => formatQuantity(v, 'V', { digits: 3, rounding: 'up' })

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
  const nominal = atLow
    ? Math.min(...Object.values(pin.nominalMargin).map((m) => m.low))
    : Math.min(...Object.values(pin.nominalMargin).map((m) => m.high))
  // With nominal rails and reference; the worst board is judged against its own.
  const goes = atLow ? limit + nominal : limit - nominal
  const numbers = { goes, limit, short: by }
  const worst = nominal < 0 ? 'the worst board' : 'yet the worst board'
  if (pin.role === 'converter')
    return {
      code: atLow ? 'converter-low' : 'converter-high',
      text: `The converter input would go to ${volts(goes)} on the nominal board; ${worst} leaves its range by ${short(by)}: keep a wider guard band or take closer parts.`,
      numbers,
    }
  const needsNegative = atLow && goes < design.rails.negative + 1e-9 && design.rails.negative >= 0
  const word = pin.role === 'input' ? 'input' : pin.role === 'internal' ? 'internal' : 'swing'
  const cure = needsNegative
    ? `needs a negative rail: `
    : atLow
      ? `needs a lower negative rail or an amplifier that reaches nearer to it: `
      : `needs a higher positive rail or an amplifier that reaches nearer to it: `
  return {
    code: `${word}-${atLow ? 'low' : 'high'}`,
    text: capital(
      `${cure}${pin.name} would go to ${volts(goes)}; it is linear only ${atLow ? 'down' : 'up'} to ${volts(limit)}, and ${worst} is short by ${short(by)}.`,
    ),
    numbers,
  }
}

/** Why a part cannot stand what is asked of it. */
export function stressReasons(stress: Stress): Reason[] {
  const { ref, kind, value, limit } = stress
  const worst = (unit: string) => formatQuantity(value, unit, { digits: 3, rounding: 'up' })
  const most = (unit: string) => formatQuantity(limit, unit, { digits: 3, rounding: 'down' })
  const texts: Record<Stress['kind'], string> = {
    power: `${ref} would dissipate ${worst('W')}; at half its rating it takes ${most('W')}. Take larger resistors or a larger rating.`,
    voltage: `${ref} would stand at ${worst('V')}; at half its rating it takes ${most('V')}. Divide the voltage over several resistors or take a higher rating.`,
    current: `${ref} would have to drive ${worst('A')}; it drives ${most('A')}. Take larger resistors or a stronger amplifier.`,
    gain: `${ref} is stable from a gain of ${most('')} on; its noise gain here is ${formatQuantity(value, '', { digits: 3 })}. Take an amplifier that is stable at this gain.`,
  }
  return [{ code: `stress-${kind}`, text: texts[kind], numbers: { value, limit } }]
}

const capital = (text: string): string => text.charAt(0).toUpperCase() + text.slice(1)

/** Findings about one candidate, worst first. */
export function findingsFor(
  design: Design,
  pins: WatchedPin[],
  rest: {
    model: ModelEntry[]
    loads: Load[]
    overVoltage: OverVoltage[]
    stability: StabilityEntry[]
    candidate: Candidate
  },
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
  list.push(...rest.stability.flatMap(stabilityFindings))
  list.push(...rangeFindings(design, rest.candidate), ...choiceFindings(design, rest.candidate))
  return worstFirst(list)
}

const weight = { over: 0, tight: 1, caution: 2, info: 3 } as const

/** Those that forbid first; in the order found within one weight. */
export const worstFirst = (list: readonly Finding[]): Finding[] =>
  [...list].sort((a, b) => weight[a.severity] - weight[b.severity])

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

/** Why a reference cannot carry what is asked of it, as something to act on. */
export function loadReason(load: Load): Reason {
  const amps = (a: number) => formatQuantity(a, 'A', { digits: 3, rounding: 'up' })
  const sinks = load.sink > load.allowed.sink
  const name = load.node === 'vref' ? 'The shift reference' : 'The reference'
  return {
    code: sinks ? 'reference-sink' : 'reference-source',
    text: sinks
      ? `${name} would have to take ${amps(load.sink)}; it takes ${amps(load.allowed.sink)}. Buffer it, state what it can sink, or use larger resistors.`
      : `${name} would have to give ${amps(load.source)}; it gives ${amps(load.allowed.source)}. Buffer it, or use larger resistors.`,
    numbers: { source: load.source, sink: load.sink },
  }
}

function loadFinding(load: Load): Finding {
  return {
    ...loadReason(load),
    severity: 'over',
    place: load.node,
    path: load.node === 'vref' ? 'shiftReference' : 'converter.reference',
  }
}

function overVoltageFinding(entry: OverVoltage): Finding {
  const over = entry.state === 'over'
  const limit = formatQuantity(entry.clampLimit ?? 0, 'A', { digits: 2 })
  const unlimited = entry.clampCurrent === null
  const current = formatQuantity(entry.clampCurrent ?? 0, 'A', { digits: 2, rounding: 'up' })
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
    numbers: {
      volts: entry.pinVolts.high,
      ...(entry.clampCurrent === null ? {} : { current: entry.clampCurrent }),
    },
  }
}

/** Fewer codes over the span than this are no measurement; under the share of the range something is left unused. */
const FEWEST_CODES = 16
const SMALL_SHARE = 0.25

/** How much of the converter's range the span covers, where that is little. */
function rangeFindings(design: Design, candidate: Candidate): Finding[] {
  const used = candidate.realised?.codesUsed
  const all = 2 ** design.converter.bits
  if (used === undefined || used >= SMALL_SHARE * all) return []
  const codes = formatQuantity(Math.floor(used), '', { digits: 9 })
  const over = used < FEWEST_CODES
  return [
    {
      code: over ? 'span-unresolved' : 'few-codes',
      severity: over ? 'over' : 'caution',
      place: 'Converter input',
      path: 'converter.input',
      text: `The whole span covers ${codes} of ${formatQuantity(all, '', { digits: 9 })} codes${over ? ': it cannot be told apart' : ''}. More gain, a smaller converter range or, where the rails stop the signal, higher rails would use more.`,
      numbers: { used, all },
    },
  ]
}

/** What a person fixed is obeyed; how much worse than the free choice it is, and what had no effect, stands here. */
function choiceFindings(design: Design, candidate: Candidate): Finding[] {
  const list: Finding[] = []
  const info = (code: string, path: string, text: string, numbers: Record<string, number> = {}) =>
    list.push({ code, severity: 'info', place: 'S1', path, text, numbers })
  const pick = candidate.picks?.[candidate.pick ?? 0]
  const { choose } = design
  const fixed =
    candidate.components?.some((c) => c.chosen && c.kind === 'resistor' && !isFilterStage(c.stage)) ?? false
  const best = candidate.optimum?.error
  if (pick && fixed && !pick.practical)
    info(
      'fixed-values',
      'choose.values',
      `The fixed values are obeyed: with them an end point is off by ${percent(pick.error, 'up')} of the span${
        best === undefined ? '' : `; a free choice from the series would be off by ${percent(best, 'up')}`
      }.`,
      { error: pick.error, ...(best === undefined ? {} : { best }) },
    )
  const known = new Set(candidate.components?.map((c) => c.ref) ?? [])
  for (const ref of Object.keys(choose.values ?? {}))
    if (!known.has(ref))
      info(
        'unused-value',
        `choose.values.${ref}`,
        `${ref} is fixed, but this arrangement has no such part: it has no effect.`,
      )
  const stages = choose.stages ?? []
  const two = (candidate.stages?.length ?? 1) > 1
  const levelled = candidate.components?.some((c) => c.stage === 'level') ?? false
  for (const stage of stages) {
    const path = `choose.stages.${stage.ref}`
    if (stage.ref === 'S2' && !two)
      info('unused-choice', path, 'The chain has one stage: what is chosen for S2 has no effect.')
    else if (stage.gain !== undefined && !two)
      info(
        'unused-choice',
        path,
        'With one stage the gain follows from the spans: the gain chosen for it has no effect.',
      )
    if (stage.reference !== undefined && !(stage.ref === 'S1' && levelled))
      info(
        'unused-choice',
        path,
        `${stage.ref} has no reference leg with a level of its own: the level chosen for it has no effect.`,
      )
  }
  const count = candidate.picks?.length ?? 0
  if (choose.pick !== undefined && count > 0 && choose.pick >= count)
    info(
      'pick-beyond',
      'choose.pick',
      `Pick ${choose.pick} does not exist: there are ${count}, counted from 0. The last one is shown.`,
      { count },
    )
  return list
}
