/**
 * What an arrangement's resistors do to a signal, as a closed form of the ideal amplifier. The picker needs nothing
 * else of a circuit: which resistors there are, and where they put the two end points.
 *
 * Fields, SI units: `signal` is the voltage at the low and the high end of the measurand (low may be the larger);
 * `source` the source resistance, Ω (per leg where the signal is differential); `reference` the reference voltage;
 * `referenceResistance` its output resistance, Ω, in series with the resistor that it feeds. Resistances absent are 0.
 * In every divider R1 (or R7) is the upper leg, R2 (R8) the lower or the other.
 */

export type Pair = [number, number]

/** What the reference leg of a differential stage rests on: a fixed voltage, or a buffered divider of a reference. */
export type LevelForm =
  { volts: number } | { reference: number; referenceResistance?: number; upper?: string; lower?: string }

interface FromSource {
  signal: Pair
  source?: number
}

interface FromReference {
  reference: number
  referenceResistance?: number
}

/** u = s/(1 + (R1+rs)/R2). */
export interface AttenuatorForm extends FromSource {
  kind: 'attenuator'
}

/** Signal–R1, Vref–R2 and ground–R3 meet: u = (s + V·x)/(1 + x + y), x = (R1+rs)/(R2+rv), y = (R1+rs)/R3. R3 may be open. */
export interface LevelShiftForm extends FromSource, FromReference {
  kind: 'level-shift'
}

/** u = s·(1 + Rf/Rg). Rg may be open, Rf may be 0. */
export interface NonInvertingForm extends FromSource {
  kind: 'non-inverting'
}

/** Signal–R1 and Vref–R2 meet at (+): u = (s + V·ρ)/(1 + ρ)·(1 + Rf/Rg), ρ = (R1+rs)/(R2+rv). Rg may be open, Rf 0. */
export interface NonInvertingUpForm extends FromSource, FromReference {
  kind: 'non-inverting-up'
}

/** Rg returns to the divider Vref–R1–R2–ground: u = s + N·(s − V·h), h = R2/(R1+rv+R2), N = Rf/(Rg + (R1+rv)∥R2). */
export interface NonInvertingDownForm extends FromSource, FromReference {
  kind: 'non-inverting-down'
}

/** u = s·(1 + R2/(R1+rv))/(1 + (R3+rs)/R4) − V·R2/(R1+rv). */
export interface WeightedDifferenceForm extends FromSource, FromReference {
  kind: 'weighted-difference'
}

/** u = −s·Rf/(Rg+rs). */
export interface InvertingForm extends FromSource {
  kind: 'inverting'
}

/** (+) on the divider Vref–R1–R2–ground: u = −ν·s + V·h·(1+ν), ν = Rf/(Rg+rs), h = R2/(R1+rv+R2). */
export interface InvertingUpForm extends FromSource, FromReference {
  kind: 'inverting-up'
}

/** Vref–Rs into the summing node: u = −s·Rf/(Rg+rs) − V·Rf/(Rs+rv). Rs may be open. */
export interface InvertingDownForm extends FromSource, FromReference {
  kind: 'inverting-down'
}

/** Matched pairs R3 = R1, R4 = R2: u = s·R2/(R1+rs) + level. */
export interface DifferenceForm extends FromSource {
  kind: 'difference'
  level: LevelForm
}

/**
 * Gain of an instrumentation amplifier by two free resistors: u = s·σ·(1 + m·Ra/Rb) + level; σ is the gain of the
 * second stage. Rb may be open.
 */
export interface GainPairForm extends FromSource {
  kind: 'gain-pair'
  /** σ, default 1. */
  stageGain?: number
  /** m, default 2. */
  factor?: number
  /** Ra and Rb, default R1 and Rg. */
  upper?: string
  lower?: string
  level: LevelForm
}

/** Gain by one resistor against a fixed one: u = s·σ·(1 + k/Rg) + level, k in Ω, σ default 1. Rg may be open. */
export interface GainSingleForm extends FromSource {
  kind: 'gain-single'
  k: number
  stageGain?: number
  gainMinimum?: number
  gainMaximum?: number
  level: LevelForm
}

/**
 * Two-amplifier instrumentation amplifier: with Rg (gain above 2) R1 = R2 and u = s·(2 + 2·R2/Rg) + level, refs R2, Rg;
 * without it u = s·(1 + R2/R1) + level, refs R1, R2.
 */
export interface TwoAmplifierForm extends FromSource {
  kind: 'two-amplifier'
  withGainResistor: boolean
  level: LevelForm
}

export type ValueForm =
  | AttenuatorForm
  | LevelShiftForm
  | NonInvertingForm
  | NonInvertingUpForm
  | NonInvertingDownForm
  | WeightedDifferenceForm
  | InvertingForm
  | InvertingUpForm
  | InvertingDownForm
  | DifferenceForm
  | GainPairForm
  | GainSingleForm
  | TwoAmplifierForm

export type FormKind = ValueForm['kind']

/** Refs of the resistors that a form needs a value for, in the order in which ties are settled (by name). */
export function formRefs(form: ValueForm): readonly string[] {
  const refs = gainRefs(form)
  if (!('level' in form) || 'volts' in form.level) return refs
  const { upper, lower } = levelRefs(form.level)
  return [...refs, upper, lower].sort(byName)
}

/** Refs of the divider that makes a level. */
export function levelRefs(level: { upper?: string; lower?: string }): { upper: string; lower: string } {
  return { upper: level.upper ?? 'R7', lower: level.lower ?? 'R8' }
}

/** Refs of a gain pair, upper (Ra) and lower (Rb). */
export function pairRefs(form: GainPairForm): { upper: string; lower: string } {
  return { upper: form.upper ?? 'R1', lower: form.lower ?? 'Rg' }
}

function byName(a: string, b: string): number {
  return a < b ? -1 : a > b ? 1 : 0
}

const R12 = ['R1', 'R2']
const R123 = ['R1', 'R2', 'R3']
const FEEDBACK = ['Rf', 'Rg']
const DIVIDER_AND_FEEDBACK = ['R1', 'R2', 'Rf', 'Rg']

function gainRefs(form: ValueForm): readonly string[] {
  switch (form.kind) {
    case 'attenuator':
    case 'difference':
      return R12
    case 'level-shift':
      return R123
    case 'non-inverting':
    case 'inverting':
      return FEEDBACK
    case 'non-inverting-up':
    case 'non-inverting-down':
    case 'inverting-up':
      return DIVIDER_AND_FEEDBACK
    case 'weighted-difference':
      return [...R123, 'R4']
    case 'inverting-down':
      return [...FEEDBACK, 'Rs']
    case 'gain-pair': {
      const { upper, lower } = pairRefs(form)
      return [upper, lower].sort(byName)
    }
    case 'gain-single':
      return ['Rg']
    case 'two-amplifier':
      return form.withGainResistor ? ['R2', 'Rg'] : R12
  }
}
