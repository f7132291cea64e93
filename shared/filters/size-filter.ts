import type { Reason } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import { designator, sectionValues, type FilterSpec, type SectionSpec } from './filter-spec.ts'
import { levelVoltage, sizeLevel, type LevelSource } from './level.ts'
import { pickPole } from './pick-pole.ts'
import { pickSection } from './pick-section.ts'
import { prototypeSections } from './prototypes.ts'
import { capacitorValues, driveLists, resistorValues, sizeRc } from './rc.ts'
import {
  sectionError,
  sectionOf,
  wantedResistors,
  type SectionKind,
  type SectionValues,
} from './section-values.ts'
import { filterWish, type FilterWish } from './wish.ts'

/** The drive of an even order has its corner this many times above the filter's, so that it hardly counts as a pole. */
const DRIVE_RATIO = 20

const known = new WeakMap<Design, FilterSpec>()

/**
 * The filter of a design with all its values: what a person fixed is obeyed, the rest is picked (see each file).
 * `reference` makes the level of sections that invert.
 */
export function sizeFilter(design: Design, reference: LevelSource | null): FilterSpec {
  const found = known.get(design)
  if (found) return found
  const spec = size(design, filterWish(design), reference)
  known.set(design, spec)
  return spec
}

const NO_DRIVE: FilterSpec['drive'] = {
  resistance: 0,
  capacitance: 0,
  wantedResistance: 0,
  wantedCorner: 0,
  corner: 0,
  isPole: false,
}

function size(design: Design, wish: FilterWish, reference: LevelSource | null): FilterSpec {
  const { kind, response, order, corner: wantedCorner } = wish
  const head = { kind, response, order, wantedCorner, level: null, dc: { gain: 1, offset: 0 }, refusals: [] }
  if (kind === 'none') return { ...head, sections: [], drive: NO_DRIVE }
  if (kind === 'rc') {
    const { R, C, wantedR } = sizeRc(design, wantedCorner)
    return { ...head, sections: [], drive: driveOf(R, C, wantedCorner, true, wantedR) }
  }
  const poles = prototypeSections(response, order)
  const refusals: Reason[] = []
  if (design.parts.capacitors.dielectric === 'X7R') refusals.push(classTwoReason)
  const sections = poles.flatMap(({ f0, q }) => (q === null ? [] : [{ f0: f0 * wantedCorner, q }]))
  const sized = sections.map((wanted, i) => sizeSection(design, kind, i + 1, wanted))
  for (const s of sized) if ('reason' in s) refusals.push(s.reason)
  const real = poles.find(({ q }) => q === null)
  const drive = real
    ? poleDrive(design, real.f0 * wantedCorner)
    : farDrive(design, DRIVE_RATIO * wantedCorner)
  const specs = sized.flatMap((s) => ('reason' in s ? [] : [s]))
  const level = kind === 'multiple-feedback' ? sizeLevel(design, reference) : null
  if (level && 'reason' in level) refusals.push(level.reason)
  const placed = level && !('reason' in level) ? level : null
  const dc = dcOf(specs, placed ? levelVoltage(reference, placed) : 0)
  return { ...head, sections: specs, drive, level: placed, dc, refusals }
}

function driveOf(
  R: number,
  C: number,
  wantedCorner: number,
  isPole: boolean,
  wantedR?: number,
): FilterSpec['drive'] {
  return {
    resistance: R,
    capacitance: C,
    wantedResistance: wantedR ?? 1 / (2 * Math.PI * wantedCorner * C),
    wantedCorner,
    corner: 1 / (2 * Math.PI * R * C),
    isPole,
  }
}

function farDrive(design: Design, corner: number): FilterSpec['drive'] {
  const { R, C, wantedR } = sizeRc(design, corner)
  return driveOf(R, C, corner, false, wantedR)
}

function poleDrive(design: Design, corner: number): FilterSpec['drive'] {
  const { resistors, capacitors } = design.parts
  const tolerance = { resistor: resistors.tolerance, capacitor: capacitors.tolerance }
  const { R, C } = pickPole(corner, driveLists(design), tolerance)
  return driveOf(R, C, corner, true)
}

function sizeSection(
  design: Design,
  kind: SectionKind,
  number: number,
  wanted: { f0: number; q: number },
): SectionSpec | { reason: Reason } {
  const names: (keyof SectionValues)[] =
    kind === 'sallen-key' ? ['R1', 'R2', 'C1', 'C2'] : ['R1', 'R2', 'R3', 'C1', 'C2']
  const fixed: Partial<SectionValues> = {}
  for (const name of names) {
    const value = design.choose.values?.[designator(number, name)]
    if (value !== undefined) fixed[name] = value
  }
  const { resistors, capacitors } = design.parts
  const [R, C] = [resistorValues(design), capacitorValues(design)]
  const one = (name: keyof SectionValues, list: readonly number[]) => {
    const value = fixed[name]
    return value === undefined ? list : [value]
  }
  // The two resistors that set H0 = −1 are alike; fixing one fixes both.
  const outer = kind === 'sallen-key' ? fixed.R1 : (fixed.R3 ?? fixed.R1)
  const found = pickSection({
    kind,
    ...wanted,
    lists: {
      A: outer === undefined ? R : [outer],
      B: one('R2', R),
      C1: one('C1', C),
      C2: one('C2', C),
    },
    gain: fixed.R1 !== undefined && fixed.R3 !== undefined ? fixed.R3 / fixed.R1 : 1,
    tolerance: { resistor: resistors.tolerance, capacitor: capacitors.tolerance },
    preferred: resistors.preferred,
  })
  if (!found) return { reason: outsideReason(number, wanted) }
  // A quotient of two fixed values may miss one of them by a rounding.
  const values = { ...found.values, ...fixed }
  const named = (given: Record<string, number | undefined>) =>
    Object.fromEntries(
      Object.entries(given).flatMap(([name, value]) =>
        value === undefined ? [] : [[designator(number, name), value] as const],
      ),
    )
  return {
    ref: `F${number}`,
    kind,
    wanted,
    parts: named(values),
    wantedParts: named(wantedResistors(kind, wanted, values) ?? {}),
    error: sectionError(sectionOf(values), wanted),
    optimum: found.optimum,
  }
}

/** Through each section that inverts: y = V·(1 + h) − h·x with V at the + input and h = R3/R1. */
function dcOf(sections: readonly SectionSpec[], volts: number): FilterSpec['dc'] {
  return sections.reduce(
    ({ gain, offset }, section) => {
      const { R1, R3 } = sectionValues(section)
      if (R3 === undefined) return { gain, offset }
      const h = R3 / R1
      return { gain: -h * gain, offset: volts * (1 + h) - h * offset }
    },
    { gain: 1, offset: 0 },
  )
}

const classTwoReason: Reason = {
  code: 'filter-class-2',
  text: 'Class 2 ceramics (X7R) change by tens of per cent with voltage, temperature and age: an active filter would not keep its corner. Take C0G or film capacitors.',
  numbers: {},
}

function outsideReason(number: number, { f0, q }: { f0: number; q: number }): Reason {
  const hertz = formatQuantity(f0, 'Hz', { digits: 3 })
  return {
    code: 'filter-values',
    text: `No resistors and capacitors of the allowed values give section ${number} of the filter its ${hertz} with a Q of ${formatQuantity(q, '', { digits: 3 })}: widen their windows, or move the corner.`,
    numbers: { f0, q },
  }
}
