import type { Candidate, Fault, Finding, Reason, Severity } from '#shared/design/plan.ts'
import { getAt, type DraftDocument } from '../draft/paths.ts'
import { misreadFields, type Typed } from '../draft/draft-state.ts'
import type { PlanState } from '../session/plan-session.ts'
import { fieldAt, leavesOf } from '../form/introspect.ts'
import { stepOfPath, type StepId } from './steps.ts'

/** A finding as the column shows it: a headline, the rest of the sentence, and where it leads. */
export interface ShownFinding {
  key: string
  severity: Severity | 'open'
  title: string
  text: string
  path: string | null
  step: StepId
}

/** Paths of faults write list items as `stages[0]`; the draft writes them as `stages.0`. */
export const toDraftPath = (path: string): string => path.replace(/\[(\d+)\]/g, '.$1').replace(/^\./, '')

/** The first sentence as a headline; a head before a colon counts as one. */
export function splitHeadline(sentence: string): { title: string; text: string } {
  const text = sentence.trim()
  const first = /^(.+?)\.[ \n]+(?=[^a-z ])/.exec(text)
  if (first?.[1] && first[1].length <= 96) return { title: first[1], text: text.slice(first[0].length) }
  const head = /^([^:.]{4,60}): /.exec(text)
  if (head?.[1]) {
    const rest = text.slice(head[0].length)
    return { title: head[1], text: rest.charAt(0).toUpperCase() + rest.slice(1) }
  }
  return text.length <= 72 ? { title: text.replace(/\.$/, ''), text: '' } : { title: '', text }
}

const labelOfPath = (path: string, sensorKind: string): string => {
  try {
    return fieldAt(path, sensorKind).label
  } catch {
    return path
  }
}

/** Of a whole group that is missing: the answers that it needs; of a single field: what is accepted. */
function neededText(path: string, sensorKind: string, fault: Fault): string {
  const asked = requiredLeaves(path, sensorKind)
  return asked.length > 0 ? `Needed: ${asked.join('; ')}.` : `Accepted: ${signs(fault.accepted)}.`
}

function requiredLeaves(path: string, sensorKind: string): string[] {
  try {
    const spec = fieldAt(path, sensorKind)
    return spec.control === 'group'
      ? leavesOf(spec).flatMap((leaf) => (leaf.required ? [leaf.label.toLowerCase()] : []))
      : []
  } catch {
    return []
  }
}

/** A true minus before figures. */
const signs = (text: string): string => text.replace(/(^|[ (])-(?=\d)/g, '$1−')

/** A key that is simply not there yet is an open question; everything else that is wrong with a value is a fault. */
export const isOpenQuestion = (document: DraftDocument, fault: Fault): boolean =>
  getAt(document, toDraftPath(fault.path)) === undefined

interface Situation {
  document: DraftDocument
  typed: Typed
  planning: PlanState
  candidate: Candidate | null
  sensorKind: string
}

const weight: Record<ShownFinding['severity'], number> = { over: 0, open: 1, tight: 2, caution: 3, info: 4 }

/** Everything that a person should know of the present draft, worst first. */
export function listFindings({
  document,
  typed,
  planning,
  candidate,
  sensorKind,
}: Situation): ShownFinding[] {
  const list: ShownFinding[] = []
  for (const { path, reason } of misreadFields(typed))
    list.push({
      key: `misread ${path}`,
      severity: 'over',
      title: `${labelOfPath(path, sensorKind)} cannot be read`,
      text: reason,
      path,
      step: stepOfPath(path),
    })
  const misread = new Set(list.map((finding) => finding.path))
  for (const fault of planning.faults) {
    const path = toDraftPath(fault.path)
    if (misread.has(path)) continue
    const open = isOpenQuestion(document, fault)
    list.push({
      key: `fault ${path} ${fault.reason}`,
      severity: open ? 'open' : 'over',
      title: open ? `Open: ${labelOfPath(path, sensorKind)}` : capital(fault.reason),
      text: open ? neededText(path, sensorKind, fault) : `Accepted: ${signs(fault.accepted)}.`,
      path,
      step: stepOfPath(path),
    })
  }
  const { planned } = planning
  if (planned) {
    list.push(...planned.plan.findings.map((finding) => shown(finding, null)))
    if (candidate) {
      if (!candidate.feasible) list.push(...candidate.reasons.map((reason) => shownReason(reason)))
      list.push(...(candidate.findings ?? []).map((finding) => shown(finding, candidate)))
    } else if (!planned.plan.findings.some((finding) => finding.severity === 'over')) {
      list.push({
        key: 'nothing feasible',
        severity: 'over',
        title: 'No arrangement can do this',
        text: 'Step 4 says what stands in the way of each.',
        path: 'choose.arrangement',
        step: 'stages',
      })
    }
  }
  const seen = new Set<string>()
  return list
    .filter((finding) => !seen.has(finding.key) && seen.add(finding.key))
    .sort((a, b) => weight[a.severity] - weight[b.severity])
}

function shown(finding: Finding, candidate: Candidate | null): ShownFinding {
  const path = finding.path === null ? null : toDraftPath(finding.path)
  return {
    key: `${candidate ? 'chain' : 'plan'} ${finding.code} ${finding.place} ${finding.text}`,
    severity: finding.severity,
    ...splitHeadline(finding.text),
    path,
    step: path === null ? 'stages' : stepOfPath(path),
  }
}

function shownReason(reason: Reason): ShownFinding {
  return {
    key: `reason ${reason.code} ${reason.text}`,
    severity: 'over',
    ...splitHeadline(reason.text),
    path: 'choose.arrangement',
    step: 'stages',
  }
}

const capital = (text: string): string => text.charAt(0).toUpperCase() + text.slice(1)

/** How many need work: over, open and tight ones. */
export const pressing = (findings: readonly ShownFinding[]): ShownFinding[] =>
  findings.filter(({ severity }) => severity === 'over' || severity === 'open' || severity === 'tight')
