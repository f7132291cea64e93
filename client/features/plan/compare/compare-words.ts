import type { Cause, Effect } from '#shared/studies/compare.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import type { DraftDocument } from '../draft/paths.ts'
import { fieldAt } from '../form/introspect.ts'
import { valueText } from '../review/summary.ts'

/** Words for the key of an edit: of its field, or the key itself where it has none. */
export function causeLabel(path: string, sensorKind: string): string {
  const value = /^choose\.values\.(\w+)$/.exec(path)
  if (value) return `${value[1] ?? ''} fixed at`
  try {
    return fieldAt(path, sensorKind).label
  } catch {
    return path
  }
}

/** What one side says under that key. */
export function causeText(path: string, value: unknown, document: DraftDocument, sensorKind: string): string {
  if (value === undefined) return unstatedText(path, document, sensorKind)
  if (/^choose\.values\.C/.test(path) && typeof value === 'number') return formatQuantity(value, 'F')
  if (/^choose\.values\./.test(path) && typeof value === 'number') return formatQuantity(value, 'Ω')
  try {
    const text = valueText(fieldAt(path, sensorKind), value, document)
    if (text !== '') return text
  } catch {
    // A key without a field is shown as it stands in the document.
  }
  return typeof value === 'string' ? value : JSON.stringify(value)
}

/** What holds where nothing is said. */
function unstatedText(path: string, document: DraftDocument, sensorKind: string): string {
  try {
    const spec = fieldAt(path, sensorKind)
    const usual = spec.control === 'group' ? '' : valueText(spec, spec.preset, document)
    return usual === '' ? 'not stated' : `${usual}, as usual`
  } catch {
    return 'not stated'
  }
}

/** An answer of one variant. */
export function answerText(effect: Effect, value: Effect['a']): string {
  if (value === null) return 'none'
  if (typeof value === 'string') return value
  if (effect.display === 'codes') return formatQuantity(Math.round(value), '', { digits: 12 })
  return formatQuantity(value, effect.unit, { digits: 4, display: effect.display })
}

/** Direction and amount of a change, and whether it is for the better. */
export function changeText(effect: Effect): string {
  const { change, direction, better, a } = effect
  if (change === null)
    return direction === 'added' ? 'new' : direction === 'removed' ? 'no longer there' : 'changed'
  const size =
    effect.display === 'percent'
      ? `${formatQuantity(Math.abs(change) * 100, '', { digits: 2 })} percentage points`
      : effect.display === 'codes'
        ? answerText(effect, Math.abs(change))
        : formatQuantity(Math.abs(change), effect.unit, { digits: 2 })
  const relative = typeof a === 'number' && a !== 0 ? Math.abs(change / a) : null
  const isRatio = effect.unit !== '' && relative !== null && relative < 10
  const share = isRatio ? `, ${formatQuantity(relative, '', { digits: 2, display: 'percent' })}` : ''
  // Whoever reads "worse" expects that it matters.
  const matters = relative === null || relative >= HARDLY
  const verdict = better === null || !matters ? '' : better ? ': better' : ': worse'
  return `${change > 0 ? 'up' : 'down'} by ${size}${share}${verdict}`
}

/** Relative change from which an answer is called better or worse. */
const HARDLY = 1e-3

/** Whether it is for the better, where it matters; null where neither. */
export const isBetter = (effect: Effect): boolean | null =>
  /: (better|worse)$/.test(changeText(effect)) ? effect.better : null

/** Edits that are shown and those that move nothing. */
export function splitCauses(causes: readonly Cause[]): { shown: Cause[]; idle: Cause[] } {
  return {
    shown: causes.filter(({ idle }) => idle !== true),
    idle: causes.filter(({ idle }) => idle === true),
  }
}

/** Changes too small to be noticed are kept apart: under a thousandth of their figure. */
export function splitEffects(effects: readonly Effect[]): { shown: Effect[]; faint: Effect[] } {
  const isFaint = ({ a, change }: Effect) =>
    change !== null && typeof a === 'number' && a !== 0 && Math.abs(change / a) < HARDLY
  return { shown: effects.filter((effect) => !isFaint(effect)), faint: effects.filter(isFaint) }
}
