import type { FilterKind, FilterResponse, Reason } from '#shared/design/plan.ts'
import type { SectionKind, SectionValues } from './section-values.ts'

/** One second-order section as wanted and as picked. */
export interface SectionSpec {
  /** `F1`, `F2`, `F3`: its stage in the network and the node after it. */
  ref: string
  kind: SectionKind
  wanted: { f0: number; q: number }
  /** By designator, Ω and F: R21, R22, (R23,) C21, C22 in the first section, R31 … in the second. */
  parts: Record<string, number>
  /** What the equations ask for beside the capacitors taken; without those that have no such answer. */
  wantedParts: Record<string, number>
  /** max(|Δf0/f0|, |ΔQ/Q|) of the parts taken, and the smallest possible over the lists. */
  error: number
  optimum: number
}

/** What stands at the + inputs of sections that invert: they turn the signal over about this level. */
export type FilterLevel =
  | { kind: 'ground' }
  | { kind: 'reference' }
  | { kind: 'divider'; upper: number; lower: number; bypass: number }

/**
 * The filter as decided. Sections of second order come first, by rising Q; R9 and C9 stand last, at the converter's
 * pin. With an odd order they are the real pole; with an even one they only drive the pin, far above the corner.
 */
export interface FilterSpec {
  kind: FilterKind
  response: FilterResponse
  /** Poles that were asked for; the drive of an even order is not counted. */
  order: number
  /** −3 dB corner asked for, Hz; 0 for none. */
  wantedCorner: number
  sections: SectionSpec[]
  level: FilterLevel | null
  /** R9 and C9, Ω and F; 0 where there is none. */
  drive: {
    resistance: number
    capacitance: number
    /** What the equation asks for beside the capacitor taken, Ω. */
    wantedResistance: number
    /** Its own corner, Hz, as wanted and as picked. */
    wantedCorner: number
    corner: number
    /** True where it is a pole of the response. */
    isPole: boolean
  }
  /** y = gain·x + offset at 0 Hz, ideal amplifiers: 1 and 0 V unless a section inverts. */
  dc: { gain: number; offset: number }
  /** Why it cannot be built; empty where it can. */
  refusals: Reason[]
}

/** Voltage behind the filter for one before it, and the other way round; V, ideal. */
export const behindFilter = ({ dc }: FilterSpec, volts: number): number => dc.gain * volts + dc.offset
export const beforeFilter = ({ dc }: FilterSpec, volts: number): number => (volts - dc.offset) / dc.gain

/** Designator of a section's part: R21, R22, … in the first, R31, … in the second. */
export const designator = (section: number, name: string): string =>
  `${name.slice(0, 1)}${section + 1}${name.slice(1)}`

/** Values of a section by their own names. */
export function sectionValues({ kind, parts, ref }: SectionSpec): SectionValues {
  const of = (name: string) => parts[designator(Number(ref.slice(1)), name)] ?? 0
  const values = { R1: of('R1'), R2: of('R2'), C1: of('C1'), C2: of('C2') }
  return kind === 'sallen-key' ? values : { ...values, R3: of('R3') }
}

/** Stages of the network that belong to the filter. */
export const isFilterStage = (stage: string): boolean => stage === 'filter' || /^F\d$/.test(stage)

/** Number of the section that a stage is: 1, 2, 3; null for other stages. */
export const sectionNumber = (stage: string): number | null =>
  /^F\d$/.test(stage) ? Number(stage.slice(1)) : null
