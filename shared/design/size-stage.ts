import type { Arrangement, Need, Sizing } from '#shared/amplifiers/define.ts'
import {
  evaluateForm,
  formRefs,
  pickValues,
  wantedValue,
  type Pick,
  type PickResult,
  type ValueForm,
} from '#shared/amplifiers/picker/index.ts'
import { standardValues } from '#shared/parts/series.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import { askedArrangement } from './asked.ts'
import type { PickEntry, Reason } from './plan.ts'
import type { Design } from './schema.ts'

/** A stage with its values chosen. Refs are the arrangement's own, without a stage's suffix. */
export interface SizedStage {
  sizing: Sizing
  values: Record<string, number>
  picks: PickEntry[]
  pick: number
  optimum: { error: number; toleranceError: number } | null
  /** Values that the ideal equations ask for with the others as chosen; computed when asked for. */
  wanted(): Record<string, number>
  /** Refs that a person fixed. */
  chosen: string[]
  /** Output at the two ends with ideal amplifiers, V. */
  ends: [number, number]
}

export type SizeResult = { ok: true; sized: SizedStage } | { ok: false; reason: Reason }

/** The resistor that stands in series with the source, by form. */
const SOURCE_LEG: Partial<Record<ValueForm['kind'], string>> = {
  attenuator: 'R1',
  'level-shift': 'R1',
  'non-inverting-up': 'R1',
  'weighted-difference': 'R3',
  inverting: 'Rg',
  'inverting-up': 'Rg',
  'inverting-down': 'Rg',
  difference: 'R1',
}

/** That resistor is at least this many times the source resistance, which is seldom well known (common practice). */
const SOURCE_RATIO = 10

/** A gain resistor of an integrated part may be smaller than the window of the other resistors, Ω. */
const SMALLEST_GAIN_RESISTOR = 10

/**
 * Picks standard values for a stage. What a person fixed in `choose.values` is obeyed: such a resistor's list has one
 * member. Matched copies follow their original unless fixed themselves.
 */
export function sizeStage(
  design: Design,
  arrangement: Arrangement,
  need: Need,
  sizing: Sizing,
  suffix: string,
  pick: number,
): SizeResult {
  const fixed = fixedValues(design, arrangement, suffix)
  const preset = presetValues(design, sizing, fixed)
  const form = withStageGain(sizing, preset, fixed)
  const target: [number, number] = [sizing.target.low, sizing.target.high]
  if (form === null)
    return {
      ok: true,
      sized: {
        sizing,
        values: {},
        picks: [],
        pick: 0,
        optimum: null,
        wanted: () => ({}),
        chosen: [],
        ends: target,
      },
    }
  const refs = formRefs(form)
  const given: Record<string, number> = {}
  for (const ref of refs) {
    const value = fixed[ref] ?? fixedCopy(sizing, fixed, ref)
    if (value !== undefined) given[ref] = value
  }
  const search = (held: Record<string, number>): PickResult =>
    pickValues({
      form,
      target,
      lists: Object.fromEntries(refs.map((ref) => [ref, listFor(design, form, ref, held[ref])])),
      ...(sizing.pairs ? { pairs: sizing.pairs } : {}),
      tolerance: Object.fromEntries(refs.map((ref) => [ref, design.parts.resistors.tolerance])),
      preferred: design.parts.resistors.preferred,
    })
  const anyFixed = Object.keys(given).length > 0
  const allFixed = refs.every((ref) => given[ref] !== undefined)
  const free = anyFixed ? search({}) : null
  const result = allFixed ? null : search(given)
  const found = allFixed ? [exactly(form, target, given)] : foundIn(result)
  const reached = allFixed ? withoutGainLimits(form) : form
  if (found.length === 0 || (result?.ok === false && !anyFixed))
    return { ok: false, reason: outsideWindow(design, found[0]) }
  const index = Math.min(pick, found.length - 1)
  const taken = found[index]
  if (!taken) return { ok: false, reason: outsideWindow(design, undefined) }
  // What a person fixed is measured against what the whole series would give.
  const best = free?.ok ? free : result?.ok ? result : null
  return {
    ok: true,
    sized: {
      sizing: { ...sizing, form },
      values: spread(sizing, taken.values, preset, fixed),
      picks: found.map((p) => toEntry(p, best?.threshold)),
      pick: index,
      optimum: best ? { error: best.optimum, toleranceError: best.toleranceError } : null,
      wanted: () => wantedValues(form, sizing, target, taken.values, refs),
      chosen: Object.keys(fixed),
      ends: evaluateForm(reached, taken.values),
    },
  }
}

const foundIn = (result: PickResult | null): Pick[] =>
  !result ? [] : result.ok ? merge(result.picks, result.best) : result.closest ? [result.closest] : []

/** A part that is driven past the gains it is specified for still has the gain of its resistor. */
const withoutGainLimits = (form: ValueForm): ValueForm =>
  form.kind === 'gain-single' ? { ...form, gainMinimum: -Infinity, gainMaximum: Infinity } : form

/** The one set of values that is left when a person fixed them all. */
function exactly(form: ValueForm, target: [number, number], values: Record<string, number>): Pick {
  const ends = evaluateForm(withoutGainLimits(form), values)
  const span = Math.abs(target[1] - target[0])
  return {
    values,
    error: Math.max(Math.abs(ends[0] - target[0]), Math.abs(ends[1] - target[1])) / span,
    cost: 0,
    distinct: new Set(Object.values(values)).size,
    practical: false,
    ends,
  }
}

/** Values of `choose.values` that belong to this stage, by the arrangement's own refs. */
function fixedValues(design: Design, arrangement: Arrangement, suffix: string): Record<string, number> {
  const fixed: Record<string, number> = {}
  const asked = askedArrangement(design)?.split('+')
  const own = suffix === '' ? 0 : 1
  // Values of a circuit that exists belong to its arrangement; where none is named, to all that have such a part.
  if (asked && asked[own] !== arrangement.id) return fixed
  for (const ref of Object.keys(arrangement.roles)) {
    const value = design.choose.values?.[ref + suffix]
    if (value !== undefined) fixed[ref] = value
  }
  return fixed
}

/** Values set by rule: the allowed value nearest to what the rule asks for, or what a person fixed. */
function presetValues(design: Design, sizing: Sizing, fixed: Record<string, number>): Record<string, number> {
  const { stock, series, minimum, maximum } = design.parts.resistors
  const allowed = stock.length > 0 ? sorted(stock) : standardValues(series, minimum, maximum)
  const nearest = (value: number) =>
    allowed.reduce(
      (a, b) => (Math.abs(Math.log(b / value)) < Math.abs(Math.log(a / value)) ? b : a),
      allowed[0] ?? value,
    )
  return Object.fromEntries(
    Object.entries(sizing.preset ?? {}).map(([ref, value]) => [ref, fixed[ref] ?? nearest(value)]),
  )
}

/** A copy that a person fixed speaks for its original where that is free. */
function fixedCopy(sizing: Sizing, fixed: Record<string, number>, ref: string): number | undefined {
  const copy = Object.entries(sizing.copies ?? {}).find(
    ([c, original]) => original === ref && fixed[c] !== undefined,
  )
  return copy ? fixed[copy[0]] : undefined
}

function listFor(design: Design, form: ValueForm, ref: string, fixed: number | undefined): readonly number[] {
  if (fixed !== undefined) return [fixed]
  const { stock, series, minimum, maximum } = design.parts.resistors
  const least =
    form.kind === 'gain-single' && ref === 'Rg' ? Math.min(SMALLEST_GAIN_RESISTOR, minimum) : minimum
  // Below this the gain would hang on the source resistance.
  const floor = ref === SOURCE_LEG[form.kind] ? Math.max(minimum, SOURCE_RATIO * (form.source ?? 0)) : least
  const values = stock.length > 0 ? sorted(stock) : standardValues(series, Math.min(floor, maximum), maximum)
  if (form.kind === 'level-shift' && ref === 'R3') return withEnd(values, Infinity)
  if (form.kind === 'non-inverting-up' && ref === 'Rg') return withEnd(values, Infinity)
  if (form.kind === 'non-inverting-up' && ref === 'Rf') return withEnd(values, 0)
  return values
}

const extended = new WeakMap<readonly number[], Map<number, readonly number[]>>()

/** The list with a link or an open place as a further member; kept, so that the picker's own lists are kept too. */
function withEnd(values: readonly number[], end: number): readonly number[] {
  let known = extended.get(values)
  if (!known) extended.set(values, (known = new Map()))
  const found = known.get(end)
  if (found) return found
  const list = end === 0 ? [0, ...values] : [...values, end]
  known.set(end, list)
  return list
}

const sortedStock = new WeakMap<readonly number[], readonly number[]>()

function sorted(stock: readonly number[]): readonly number[] {
  const known = sortedStock.get(stock)
  if (known) return known
  const list = [...new Set(stock)].sort((a, b) => a - b)
  sortedStock.set(stock, list)
  return list
}

/** The second stage of a three-amplifier chain has the gain that its resistors give. */
function withStageGain(
  sizing: Sizing,
  preset: Record<string, number>,
  fixed: Record<string, number>,
): ValueForm | null {
  const { form } = sizing
  if (form?.kind !== 'gain-pair') return form
  const r3 = preset.R3 ?? 1
  return { ...form, stageGain: (fixed.R5 ?? r3) / r3 }
}

/** Picked values, presets and matched copies, in order, so that the copy of a fixed copy follows it. */
function spread(
  sizing: Sizing,
  picked: Record<string, number>,
  preset: Record<string, number>,
  fixed: Record<string, number>,
): Record<string, number> {
  const values: Record<string, number> = { ...preset, ...picked }
  for (const [copy, original] of Object.entries(sizing.copies ?? {})) {
    const value = fixed[copy] ?? values[original]
    if (value !== undefined) values[copy] = value
  }
  return { ...values, ...fixed }
}

function wantedValues(
  form: ValueForm,
  sizing: Sizing,
  target: [number, number],
  values: Record<string, number>,
  refs: readonly string[],
): Record<string, number> {
  const wanted: Record<string, number> = {}
  for (const ref of refs) {
    const value = wantedValue(form, target, values, ref)
    if (value !== null && Number.isFinite(value) && value > 0) wanted[ref] = value
  }
  for (const [copy, original] of Object.entries(sizing.copies ?? {})) {
    const value = wanted[original]
    if (value !== undefined) wanted[copy] = value
  }
  return wanted
}

/** Practical picks first, then those of smallest error that are not among them. */
function merge(picks: Pick[], best: Pick[]): Pick[] {
  const key = (p: Pick) => JSON.stringify(p.values)
  const seen = new Set(picks.map(key))
  return [...picks, ...best.filter((p) => !seen.has(key(p)))]
}

const toEntry = (pick: Pick, threshold: number | undefined): PickEntry => ({
  values: pick.values,
  error: pick.error,
  cost: pick.cost,
  distinct: pick.distinct,
  practical: threshold === undefined ? pick.practical : pick.error <= threshold * (1 + 1e-12),
  ends: { low: pick.ends[0], high: pick.ends[1] },
})

function outsideWindow(design: Design, closest: Pick | undefined): Reason {
  const { minimum, maximum, stock } = design.parts.resistors
  const set =
    stock.length > 0
      ? `the ${stock.length === 1 ? 'one value' : `${stock.length} values`} in stock`
      : `resistors from ${formatQuantity(minimum, 'Ω')} to ${formatQuantity(maximum, 'Ω')}`
  const miss = closest
    ? ` The closest set misses an end point by ${formatQuantity(closest.error, '', { digits: 3, display: 'percent' })} of the span.`
    : ''
  return {
    code: 'outside-window',
    text: `The values that the equations ask for lie outside ${set}: widen the window or take another series.${miss}`,
    numbers: { minimum, maximum, ...(closest ? { error: closest.error } : {}) },
  }
}
