import type { Ends, Equation, Reason } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import type { ValueForm } from './picker/index.ts'
import type { StageBuilder } from './stage-builder.ts'

/** What a stage has to do: signal in, target out, and what it may use. Volts. */
export interface Need {
  /** Signal at quantity.low and quantity.high. */
  signal: Ends
  differential: boolean
  commonMode: Ends | null
  /** Ω per leg. */
  sourceResistance: number
  floating: boolean
  /** Output wanted at quantity.low and quantity.high. An arrangement that inverts gives them crosswise. */
  target: Ends
  /** Shift reference: voltage, its output resistance, whether it may stand at a reference leg as it is. */
  reference: { voltage: number; resistance: number; buffered: boolean } | null
  rails: { positive: number; negative: number }
  parts: Design['parts']
  /** Level at the reference leg asked for by a person; null: chosen. */
  level: number | null
}

/** How the reference leg of a differential stage is fed. */
export type LevelFeed = { kind: 'ground' } | { kind: 'reference' } | { kind: 'divider' }

/** What an arrangement makes of a need: where the ends land and what the picker has to search. */
export interface Sizing {
  /** Ends it aims at, in the order of the measurand; inside `need.target`. */
  target: Ends
  /** Null where there is no value to pick. */
  form: ValueForm | null
  pairs?: {
    refs: [string, string]
    minimumSum?: number
    minimumParallel?: number
    maximumParallel?: number
  }[]
  /** Values of refs that copy another: `R3: 'R1'` is a matched pair. */
  copies?: Record<string, string>
  /** Values set by rule, not searched. */
  preset?: Record<string, number>
  level?: LevelFeed
  /** True where the exact offset was given up for fewer parts. */
  dropsOffset: boolean
}

/** A sizing without its aim. */
export type Anatomy = Omit<Sizing, 'target' | 'dropsOffset'>

export type Consideration = { ok: true; sizing: Sizing } | { ok: false; reason: Reason }

export interface Arrangement {
  id: string
  title: string
  signal: 'single-ended' | 'differential'
  inverting: boolean
  /** Number of amplifiers, without a buffer for the level. */
  amplifiers: number
  /** What each resistor does, for the parts list. */
  roles: Record<string, string>
  /** Whether it exists for this need by its ideal-model equations. */
  consider(need: Need): Consideration
  /**
   * What it is made of, whether or not it suits the need: for a circuit that exists. `fixed` are the values known, Ω by
   * ref. Null where it cannot be built at all, for want of a reference.
   */
  anatomy(need: Need, fixed: Record<string, number>): Anatomy | null
  /** Adds its elements; values in Ω by ref. */
  build(stage: StageBuilder, values: Record<string, number>, sizing: Sizing, need: Need): void
  /** Its gain and offset equations with the numbers put in. */
  equations(values: Record<string, number>, sizing: Sizing, need: Need): Equation[]
}

export const slope = (need: Need, target: Ends = need.target): number =>
  (target.high - target.low) / (need.signal.high - need.signal.low)

/** Offset of the straight line through both ends: output at zero signal. */
export const intercept = (need: Need, target: Ends = need.target): number =>
  target.low - slope(need, target) * need.signal.low

/** A target with its ends exchanged: what an inverting stage aims at. */
export const crosswise = (target: Ends): Ends => ({ low: target.high, high: target.low })

export const refuse = (code: string, text: string, numbers: Record<string, number> = {}): Consideration => ({
  ok: false,
  reason: { code, text, numbers },
})

/** The anatomy of an arrangement that is known to exist for the need. */
export function anatomyOf(arrangement: Arrangement, need: Need): Anatomy {
  const anatomy = arrangement.anatomy(need, {})
  if (!anatomy) throw new RangeError(`${arrangement.id} has no reference to be built with`)
  return anatomy
}
