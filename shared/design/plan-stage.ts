import type { Arrangement, Need } from '#shared/amplifiers/define.ts'
import { arrangements } from '#shared/amplifiers/index.ts'
import { formRefs } from '#shared/amplifiers/picker/index.ts'
import { oriented } from '#shared/amplifiers/place.ts'
import { askedArrangement } from './asked.ts'
import { requirementOf } from './requirement.ts'
import type { Design } from './schema.ts'
import { settleChain, settleWith, type SizeChain, type TrialResult } from './settle.ts'
import { sizeStage } from './size-stage.ts'

/** Considers one arrangement as the only stage. */
export function trySingle(design: Design, arrangement: Arrangement): TrialResult {
  const { need: base } = requirementOf(design)
  const size: SizeChain = (target) => {
    const need: Need = { ...base, target }
    const stage = sizeOne(design, arrangement, need, '', design.choose.pick ?? 0)
    return stage.ok
      ? { ok: true, stages: [{ ref: 'S1', arrangement, sized: stage.sized, need }] }
      : { ok: false, reasons: [stage.reason] }
  }
  const { id, title } = arrangement
  if (!isGiven(design, arrangement, { ...base, target: design.converter.input }))
    return settleChain(design, id, title, size)
  // A circuit that exists moves with no guard band: it is judged against the target that a free choice would have had.
  const { values: _given, ...choose } = design.choose
  const free = trySingle({ ...design, choose }, arrangement)
  const start = design.converter.guard ?? (free.ok ? free.trial.guard : { low: 0, high: 0 })
  return settleWith(design, id, title, size, { keep: null, start }, 'every-board')
}

/** True where a person fixed every value that the arrangement's equations would choose. */
export function isGiven(design: Design, arrangement: Arrangement, need: Need): boolean {
  const fixed = design.choose.values ?? {}
  const anatomy = arrangement.anatomy(need, fixed)
  if (!anatomy?.form) return false
  const copies = Object.entries(anatomy.copies ?? {})
  return formRefs(anatomy.form).every(
    (ref) => fixed[ref] !== undefined || copies.some(([copy, of]) => of === ref && fixed[copy] !== undefined),
  )
}

/** Ideal-model existence, then standard values. */
export function sizeOne(design: Design, arrangement: Arrangement, need: Need, suffix: string, pick: number) {
  const considered = arrangement.consider(need)
  if (!considered.ok) {
    const anatomy =
      suffix === '' && askedArrangement(design) === arrangement.id && isGiven(design, arrangement, need)
        ? arrangement.anatomy(need, design.choose.values ?? {})
        : null
    if (!anatomy) return { ok: false as const, reason: considered.reason }
    // The equations would not ask for it, yet it exists: the analyses say what it does.
    const sizing = { ...anatomy, target: oriented(need, arrangement.inverting ? -1 : 1), dropsOffset: false }
    return sizeStage(design, arrangement, need, sizing, suffix, pick)
  }
  return sizeStage(design, arrangement, need, considered.sizing, suffix, pick)
}

/** Arrangements that take the kind of signal a sensor gives. */
export function arrangementsFor(differential: boolean): Arrangement[] {
  return arrangements.filter((a) => (a.signal === 'differential') === differential)
}
