import { findLeastRoom, toLinearSpan } from '#shared/design/headlines.ts'
import { numberAt, textAt, type DraftDocument } from '#shared/design/document-paths.ts'
import type { Candidate, ErrorState, Plan, Severity } from '#shared/design/plan.ts'

/** A channel as it stands, or as it might: its document and the plan of it. */
export interface Variant {
  document: DraftDocument
  plan: Plan
}

/** One answer of a plan, by which two variants are compared. */
export interface VariantAnswer {
  /** `gain`, `room`, `part.R1`: the same answer of another variant has the same id. */
  id: string
  label: string
  /** SI unit or the measurand's own; '' for ratios, counts and words. */
  unit: string
  display: 'plain' | 'percent' | 'codes'
  /** Null where the variant has no such answer, or where nothing limits it. */
  value: number | string | null
  /** Which way is the better one; null where neither is. */
  better: 'more' | 'less' | null
}

const figure = (
  id: string,
  label: string,
  unit: string,
  value: number | string | null | undefined,
  better: VariantAnswer['better'] = null,
  display: VariantAnswer['display'] = 'plain',
): VariantAnswer => ({ id, label, unit, display, value: value ?? null, better })

/** The answers of a variant, in the order in which they are shown. Of the candidate that its plan chose. */
export function answersOf({ document, plan }: Variant): VariantAnswer[] {
  const chosen = plan.chosen === null ? undefined : plan.candidates[plan.chosen]
  return [
    figure('arrangement', 'Arrangement', '', chosen?.title),
    figure('feasible', 'Feasible', '', chosen?.feasible ? 'yes' : 'no'),
    ...findingCounts(plan, chosen),
    ...(chosen ? answersOfCandidate(document, chosen) : []),
  ]
}

function findingCounts(plan: Plan, chosen: Candidate | undefined): VariantAnswer[] {
  const all = [...plan.findings, ...(chosen?.findings ?? [])]
  const count = (severity: Severity) => all.filter((finding) => finding.severity === severity).length
  return [
    figure('findings.over', 'Findings, over', '', count('over'), 'less'),
    figure('findings.tight', 'Findings, tight', '', count('tight'), 'less'),
  ]
}

function answersOfCandidate(document: DraftDocument, chosen: Candidate): VariantAnswer[] {
  const unit = textAt(document, 'sensor.quantity.unit')
  const [low, high] = [numberAt(document, 'sensor.quantity.low'), numberAt(document, 'sensor.quantity.high')]
  const levels = chosen.levels ?? []
  const straight = low === null || high === null ? null : toLinearSpan(levels, { low, high }, true)
  const least = findLeastRoom(levels, chosen.headroom)
  const { realised } = chosen
  return [
    figure('linear.low', 'Linear from, worst case', unit, straight?.low),
    figure('linear.high', 'Linear to, worst case', unit, straight?.high),
    figure('room', 'Least room, worst case', '', least?.fraction, 'more', 'percent'),
    figure('room.at', 'Least room at', '', least ? `${least.pin}, ${wordOf(least.pinSide)}` : null),
    figure('gain', 'Gain, realised', 'V/V', realised?.gain),
    figure('offset', 'Offset, realised', 'V', realised?.offset),
    figure('codes.low', 'Code at the low end', '', realised?.codes.low, null, 'codes'),
    figure('codes.high', 'Code at the high end', '', realised?.codes.high, null, 'codes'),
    figure('codes.used', 'Codes used', '', realised && Math.floor(realised.codesUsed), 'more', 'codes'),
    ...qualityOf(chosen, unit),
    figure('parts', 'Parts', '', chosen.components?.length, 'less'),
    ...partsOf(chosen),
  ]
}

const wordOf = (side: 'low' | 'high'): string => (side === 'low' ? 'below' : 'above')

const states: Record<ErrorState, string> = {
  asBuilt: 'as built',
  zeroed: 'after zero adjustment',
  calibrated: 'after zero and span adjustment',
}

function qualityOf(chosen: Candidate, unit: string): VariantAnswer[] {
  const { budget, noise, dynamics, stability, filter, drive } = chosen
  const margins = stability?.flatMap(({ worst }) => (worst === null ? [] : [worst])) ?? []
  const target = budget?.target
  return [
    ...(Object.keys(states) as ErrorState[]).map((state) =>
      figure(
        `uncertainty.${state}`,
        `Expanded uncertainty, ${states[state]}`,
        unit,
        budget && budget.totals[state].expanded / budget.perQuantity,
        'less',
      ),
    ),
    figure('target', 'Target met', '', target && (target.met ? 'yes' : 'no')),
    figure('noise', 'Noise at the converter', 'V', noise?.rms, 'less'),
    figure('noise.bits', 'Noise-free bits', '', noise?.noiseFreeBits, 'more'),
    figure('bandwidth', 'Bandwidth', 'Hz', dynamics?.bandwidth),
    figure('settling', 'Settling', 's', dynamics?.settling, 'less'),
    figure('margin', 'Least phase margin', '°', margins.length > 0 ? Math.min(...margins) : null, 'more'),
    figure('filter.corner', 'Filter corner', 'Hz', filter?.corner || null),
    figure('filter.alias', 'Alias attenuation', 'dB', filter?.alias?.reached, 'more'),
    figure('drive.needed', 'Converter input settles in', 's', drive?.needed, 'less'),
  ]
}

const unitOf: Partial<Record<string, string>> = { resistor: 'Ω', capacitor: 'F' }

function partsOf({ components = [] }: Candidate): VariantAnswer[] {
  return components.map(({ ref, kind, value, name, sets }) =>
    figure(`part.${ref}`, `${ref}: ${sets}`, unitOf[kind] ?? '', value ?? name ?? kind),
  )
}
