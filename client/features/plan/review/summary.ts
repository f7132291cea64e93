import type { Candidate, FilterPlan } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import { toRkm } from '#shared/units/rkm.ts'
import { getAt, textAt, type DraftDocument } from '../draft/paths.ts'
import { appliesTo } from '../form/companions.ts'
import { fieldAt, isAsked, leavesOf, type FieldSpec } from '../form/introspect.ts'
import { choiceLabel } from '../form/labels.ts'
import { stepOfPath, steps, type StepId } from '../words/steps.ts'

export interface SummaryLine {
  path: string
  label: string
  text: string
  /** False where the value is the schema's or the plan's. */
  given: boolean
}

export interface SummaryGroup {
  step: StepId
  lines: SummaryLine[]
}

/** Sections whose every key is listed; of the amplifiers' many figures only those that were given. */
const sections = [
  'name',
  'sensor',
  'target',
  'temperature',
  'converter',
  'rails',
  'shiftReference',
  'rules',
  'calibration',
  'analysis',
  'parts',
]

/** All answers by step, in the order of the steps: what was given, and the defaults that matter as much. */
export function toSummary(
  document: DraftDocument,
  design: Design | null,
  candidate: Candidate | null,
): SummaryGroup[] {
  const kind = textAt(document, 'sensor.kind') || 'voltage'
  const lines = sections
    .flatMap((section) => leavesOf(fieldAt(section, kind)))
    .filter((spec) => isListed(spec, kind, document))
    .map((spec): SummaryLine => {
      const given = getAt(document, spec.path)
      const used = given ?? (design ? getAt(design as unknown as DraftDocument, spec.path) : undefined)
      return {
        path: spec.path,
        label: spec.label,
        text: valueText(spec, used, document),
        given: given !== undefined,
      }
    })
  lines.push(...chosenLines(document, candidate))
  return steps
    .map(({ id }) => ({ step: id, lines: lines.filter((line) => stepOfPath(line.path) === id) }))
    .filter((group) => group.lines.length > 0)
}

function isListed(spec: FieldSpec, kind: string, document: DraftDocument): boolean {
  if (getAt(document, spec.path) !== undefined) return true
  if (!appliesTo(spec.path, document)) return false
  return isAsked(spec, kind, document) || alwaysListed.has(spec.path)
}

const alwaysListed = new Set([
  'sensor.sourceResistance',
  'sensor.bandwidth',
  'rails.negative',
  'rails.tolerance',
  'temperature.low',
  'temperature.high',
  'rules.room',
  'parts.resistors.series',
  'parts.resistors.tolerance',
])

export function valueText(spec: FieldSpec, value: unknown, document: DraftDocument): string {
  if (value === undefined) return ''
  if (spec.control === 'number' && typeof value === 'number') {
    const own = textAt(document, 'sensor.quantity.unit')
    const isMeasurand = spec.path.startsWith('sensor.quantity.') || spec.label.startsWith('Measurand')
    const isTarget = spec.path === 'target.limit'
    const perSpan = isTarget && (textAt(document, 'target.per') || 'span') === 'span'
    return formatQuantity(value, isMeasurand || (isTarget && !perSpan) ? own : spec.unit, {
      digits: 12,
      display: perSpan ? 'percent' : spec.display,
    })
  }
  if (typeof value === 'boolean') return value ? 'yes' : 'no'
  if (typeof value === 'string') return spec.control === 'choice' ? choiceLabel(value) : value
  if (Array.isArray(value)) {
    if (value.length === 0) return 'none'
    if (spec.path !== 'calibration.points') return `${value.length} values`
    const unit = textAt(document, 'sensor.quantity.unit')
    return (value as number[]).map((point) => formatQuantity(point, unit, { digits: 12 })).join(' and ')
  }
  return ''
}

/** What was chosen by hand, and what the plan chose in its place. */
function chosenLines(document: DraftDocument, candidate: Candidate | null): SummaryLine[] {
  const asked = getAt(document, 'choose.arrangement')
  const lines: SummaryLine[] = [
    {
      path: 'choose.arrangement',
      label: 'Arrangement',
      text: candidate?.title ?? '',
      given: asked !== undefined,
    },
  ]
  for (const part of candidate?.components ?? [])
    if (part.chosen && part.value !== undefined)
      lines.push({
        path: `choose.values.${part.ref}`,
        label: `${part.ref}, ${part.sets}`,
        text: toRkm(part.value, part.kind === 'capacitor' ? 'F' : 'Ω'),
        given: true,
      })
  if (candidate?.filter)
    lines.push({
      path: 'choose.filter',
      label: 'Filter',
      text: filterText(candidate.filter),
      given: getAt(document, 'choose.filter') !== undefined,
    })
  return lines
}

function filterText({ kind, order, response, corner }: FilterPlan): string {
  if (kind === 'none') return 'no filter'
  const at = `corner ${formatQuantity(corner, 'Hz')}`
  return order > 1
    ? `${order} poles, ${choiceLabel(response).split(':')[0] ?? response}, ${choiceLabel(kind)}, ${at}`
    : `${choiceLabel('rc')}, ${at}`
}
