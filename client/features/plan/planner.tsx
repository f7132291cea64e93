import {
  memo,
  useCallback,
  useEffect,
  useMemo,
  useRef,
  useState,
  useSyncExternalStore,
  type ReactNode,
} from 'react'
import { useLocation, useNavigate } from 'react-router-dom'
import { LevelDiagram } from '#client/components/drawings/level-diagram.tsx'
import { Awaited, Failure } from '#client/components/states.tsx'
import { TitleBlock, type TitleCell } from '#client/components/title-block.tsx'
import { usePageTitle } from '#client/hooks/use-page-title.ts'
import { announce } from '#client/lib/messages.ts'
import type { Candidate, Plan } from '#shared/design/plan.ts'
import { CompareView } from './compare/compare-view.tsx'
import { useCompared } from './compare/use-compared.ts'
import { misreadFields } from './draft/draft-state.ts'
import { numberAt, textAt } from './draft/paths.ts'
import { ActionBar } from './frame/action-bar.tsx'
import { FindingsColumn, findingsInShort } from './frame/findings-column.tsx'
import { focusField } from './frame/focus-field.ts'
import { StepLine } from './frame/step-line.tsx'
import { usePlanKeys } from './frame/use-plan-keys.ts'
import { PlannerProvider, type PlannerValue, type PlanPlace } from './planner-context.tsx'
import type { PlanSession } from './session/plan-session.ts'
import { unknownLevels } from './words/unknown-levels.ts'
import { isOpenQuestion, listFindings, pressing, toDraftPath } from './words/findings.ts'
import { pathOfNode } from './words/nodes.ts'
import { stepNumber, stepOfPath, steps, stepTitle, type StepId } from './words/steps.ts'
import { StepForm } from './steps/step-form.tsx'
import './styles/frame.css'
import './styles/steps.css'
import './styles/quality.css'
import './styles/narrow.css'

interface PlannerProps {
  session: PlanSession
  where: PlanPlace
  /** null: the front page, the whole job in one sentence. */
  step: StepId | null
  stepHref(step: StepId): string
  cells: TitleCell[]
  readOnly: string | null
  /** Stands between the title block and the steps: conflicts, lost connection. */
  notice?: ReactNode
  /** The draft held against its kept variant in place of a step. */
  compares?: boolean
}

/** Most keystrokes change no level: the drawing is laid out again only when one of its own figures did. */
const Diagram = memo(LevelDiagram)

/** The plan with its steps: everything between the title block and the action bar, for visitors and channels alike. */
export function Planner(props: PlannerProps) {
  const { session, where, step, stepHref, cells, readOnly, notice, compares = false } = props
  const value = usePlannerValue({ session, where, step, stepHref, readOnly })
  const compared = useCompared(value, compares)
  const { state, planning, candidate, findings, stale, goTo } = value
  const name = textAt(state.document, 'name')
  usePageTitle(
    compares ? 'Compare' : step ? `Step ${stepNumber(step)} of ${steps.length}: ${stepTitle(step)}` : 'Plan',
    name,
  )
  const keptLevels = compared.found ? chosenOf(compared.found.kept)?.levels : undefined
  usePlanKeys(value)
  useSpokenFindings(value)
  const quantity = useMeasurand(value)
  const levels = candidate?.levels ?? unknownLevels
  const lastStage = levels.at(-2)?.node ?? null
  const handleGo = useCallback(
    (node: string, mark: string) =>
      goTo(pathOfNode(node, mark.endsWith('limit') ? 'region' : 'signal', lastStage)),
    [goTo, lastStage],
  )
  return (
    <PlannerProvider value={value}>
      <TitleBlock cells={cells} />
      {notice}
      <StepLine />
      <div className="plan-sheet sheet">
        <p className="plan-count">
          <a href="#plan-findings">{findingsInShort(findings)}</a>
        </p>
        <div className="plan-main">
          <div className="plan-work">
            {readOnly !== null && <p className="plan-read-only">{readOnly}</p>}
            {compares ? <CompareView compared={compared} /> : <StepForm />}
          </div>
          <div className="plan-diagram">
            {planning.status === 'failed' && (
              <Failure
                title={`The calculation failed: ${planning.message ?? ''}`}
                safe="Nothing that was typed is lost."
                onRetry={() => session.retry()}
              />
            )}
            {!planning.planned && planning.status === 'computing' && (
              <Awaited what="the first plan" onRetry={() => session.retry()} />
            )}
            <Diagram
              levels={levels}
              quantity={quantity}
              editing={value.editing}
              stale={stale}
              {...(keptLevels ? { kept: keptLevels } : {})}
              {...(planning.planned ? { rule: planning.planned.design.rules.room } : {})}
              onGo={handleGo}
            />
          </div>
        </div>
        <div id="plan-findings" className="plan-side">
          <FindingsColumn />
        </div>
      </div>
      <ActionBar />
    </PlannerProvider>
  )
}

const chosenOf = (plan: Plan): Candidate | null =>
  plan.chosen === null ? null : (plan.candidates[plan.chosen] ?? null)

/** Name, unit and span as the diagram needs them: of the plan where there is one, else of the draft. */
function useMeasurand({ state, planning, quantity }: PlannerValue) {
  const planned = planning.planned?.design.sensor.quantity
  const { name, unit } = quantity
  const low = planned?.low ?? numberAt(state.document, 'sensor.quantity.low') ?? 0
  const high = planned?.high ?? numberAt(state.document, 'sensor.quantity.high') ?? 1
  return useMemo(() => ({ name, unit, low, high }), [name, unit, low, high])
}

function usePlannerValue({
  session,
  where,
  step,
  stepHref,
  readOnly,
}: Omit<PlannerProps, 'cells' | 'notice' | 'compares'>): PlannerValue {
  const state = useSyncExternalStore(session.draft.subscribe, session.draft.getState)
  const planning = useSyncExternalStore(session.planning.subscribe, session.planning.get)
  const [editing, setEditing] = useState<string | null>(null)
  const goTo = useGoTo(step, stepHref)
  const sensorKind = textAt(state.document, 'sensor.kind')
  const { planned } = planning
  const chosen = planned?.plan.chosen ?? null
  const candidate = planned ? chosenOf(planned.plan) : null
  const findings = useMemo(
    () => listFindings({ document: state.document, typed: state.typed, planning, candidate, sensorKind }),
    [state.document, state.typed, planning, candidate, sensorKind],
  )
  const faults = useMemo(
    () =>
      new Map(
        planning.faults
          .filter((fault) => !isOpenQuestion(state.document, fault))
          .map((fault) => [toDraftPath(fault.path), fault] as const),
      ),
    [planning.faults, state.document],
  )
  return {
    state,
    dispatch: session.draft.dispatch,
    planning,
    candidate,
    chosen,
    findings,
    faults,
    sensorKind,
    quantity: {
      name: textAt(state.document, 'sensor.quantity.name'),
      unit: textAt(state.document, 'sensor.quantity.unit'),
    },
    stale:
      planned !== null &&
      (planning.status === 'refused' ||
        planning.status === 'failed' ||
        misreadFields(state.typed).length > 0),
    readOnly,
    editing,
    setEditing,
    step,
    stepHref,
    goTo,
    retry: session.retry,
    where,
  }
}

/** Leads to a field: at once where it stands on this page, else by way of its step. */
function useGoTo(step: StepId | null, stepHref: (step: StepId) => string) {
  const navigate = useNavigate()
  const location = useLocation()
  const wanted: unknown = (location.state as { field?: unknown } | null)?.field
  const reached = useRef<string | null>(null)
  useEffect(() => {
    if (typeof wanted !== 'string' || reached.current === location.key) return
    reached.current = location.key
    // The step's fields are there after this commit; the frame lets the route's own focus handling go first.
    const frame = requestAnimationFrame(() => focusField(wanted))
    return () => cancelAnimationFrame(frame)
  }, [wanted, location.key])
  return useCallback(
    (path: string) => {
      const home = stepOfPath(path)
      if ((step === home || step === null) && focusField(path)) return
      void navigate(stepHref(home), { state: { field: path } })
    },
    [navigate, step, stepHref],
  )
}

/** Says what changed in the findings, once typing has paused and only if they did. */
function useSpokenFindings({ findings }: PlannerValue) {
  const work = pressing(findings)
  const text = work[0]
    ? `${findingsInShort(findings)}. ${[work[0].title, work[0].text].filter(Boolean).join('. ')}`
    : findingsInShort(findings)
  const said = useRef<string | null>(null)
  useEffect(() => {
    const first = said.current === null
    if (said.current === text) return
    said.current = text
    if (!first) announce(text, 600)
  }, [text])
}
