import type { Candidate } from '#shared/design/plan.ts'
import { formatNumber, formatQuantity, formatRange } from '#shared/units/format-quantity.ts'
import { sensorKinds } from '#shared/sensors/index.ts'
import { getAt, numberAt, textAt, type DraftDocument } from '../draft/paths.ts'
import { totalText } from '../steps/errors/budget-words.ts'
import { pressing, type ShownFinding } from './findings.ts'
import { steps, type StepId } from './steps.ts'

/** What a step says under its name in the step line. */
export interface StepAnswer {
  id: StepId
  text: string
  /** `over` and `open` ask for work; `noted` has something that should be known; `done` is complete. */
  state: 'done' | 'over' | 'open' | 'tight' | 'noted' | 'awaited'
}

interface Situation {
  document: DraftDocument
  findings: readonly ShownFinding[]
  candidate: Candidate | null
  /** The first plan is still being made. */
  awaited: boolean
}

/** Steps whose answer is the plan's. */
const planned = new Set<StepId>(['stages', 'filter', 'errors'])

export function answerSteps(situation: Situation): StepAnswer[] {
  return steps.map(({ id }) => {
    const own = pressing(situation.findings.filter((finding) => finding.step === id))
    const over = own.filter(({ severity }) => severity === 'over')
    const open = own.filter(({ severity }) => severity === 'open')
    if (situation.awaited && (planned.has(id) || id === 'review'))
      return { id, state: 'awaited', text: 'being planned' }
    if (id === 'review') return reviewAnswer(situation)
    if (over.length > 0) return { id, state: 'over', text: counted(over.length, 'to put right') }
    if (open.length > 0) return { id, state: 'open', text: counted(open.length, 'open') }
    const text = words[id](situation.document, situation.candidate)
    if (text === null) return { id, state: 'open', text: planned.has(id) ? 'needs an arrangement' : 'open' }
    if (own.length > 0) return { id, state: 'tight', text }
    const cautions = situation.findings.filter((f) => f.step === id && f.severity === 'caution').length
    return cautions > 0
      ? { id, state: 'noted', text: `${counted(cautions, 'to note')}: ${text}` }
      : { id, state: 'done', text }
  })
}

const counted = (count: number, what: string): string => `${count} ${what}`

function reviewAnswer({ findings }: Situation): StepAnswer {
  const waits = [
    ...new Set(pressing(findings).map((finding) => steps.findIndex((step) => step.id === finding.step) + 1)),
  ]
  if (waits.length === 0) return { id: 'review', state: 'done', text: 'nothing open' }
  return { id: 'review', state: 'open', text: `waits for ${waits.sort((a, b) => a - b).join(', ')}` }
}

type Words = (document: DraftDocument, candidate: Candidate | null) => string | null

const rangeAt = (document: DraftDocument, path: string, unit: string): string | null => {
  const low = numberAt(document, `${path}.low`)
  const high = numberAt(document, `${path}.high`)
  return low === null || high === null ? null : formatRange(low, high, unit, { unitOnce: true })
}

const percent = (fraction: number): string => formatQuantity(fraction, '', { display: 'percent', digits: 3 })

const words: Record<Exclude<StepId, 'review'>, Words> = {
  measurand: (document) => rangeAt(document, 'sensor.quantity', textAt(document, 'sensor.quantity.unit')),
  sensor(document) {
    const kind = sensorKinds.find((known) => known.kind === getAt(document, 'sensor.kind'))
    if (!kind) return null
    const range = rangeAt(document, 'sensor.output', 'V')
    return range ?? kind.title.toLowerCase()
  },
  converter(document) {
    const range = rangeAt(document, 'converter.input', 'V')
    const bits = numberAt(document, 'converter.bits')
    return range === null || bits === null ? range : `${range}, ${formatNumber(bits)} bit`
  },
  stages: (_, candidate) => candidate?.title ?? null,
  parts(document) {
    const series = textAt(document, 'parts.resistors.series') || 'E96'
    return `${series}, ${percent(numberAt(document, 'parts.resistors.tolerance') ?? 0.001)}`
  },
  filter(_, candidate) {
    if (!candidate?.filter) return null
    const { kind, corner, order } = candidate.filter
    if (kind === 'none') return 'none'
    const poles = order > 1 ? `${order} poles, ` : ''
    return `${poles}corner ${formatQuantity(corner, 'Hz', { digits: 3 })}`
  },
  errors(document, candidate) {
    const budget = candidate?.budget
    if (!budget) return null
    const { target, totals, perQuantity } = budget
    const unit = textAt(document, 'sensor.quantity.unit')
    const total = totals[target?.state ?? 'calibrated'].expanded / perQuantity
    const against = target ? (target.met ? ', target met' : ', target missed') : ''
    return `±${totalText(total, unit)}${against}`
  },
}
