import { useCallback, useState, useSyncExternalStore } from 'react'
import { useParams } from 'react-router-dom'
import { Button } from '#client/components/buttons.tsx'
import { NotFound } from '#client/components/not-found.tsx'
import { paths } from '#client/lib/paths.ts'
import { textAt } from '#client/features/plan/draft/paths.ts'
import { draftCells } from '#client/features/plan/frame/title-cells.tsx'
import { Planner } from '#client/features/plan/planner.tsx'
import { visitorSession, type VisitorSaving } from '#client/features/plan/session/visitor-session.ts'
import { isStep, type StepId } from '#client/features/plan/words/steps.ts'
import { savedTime } from '#client/features/plan/words/times.ts'

const place = { kind: 'visitor' } as const

/** The front page and the steps of a visitor's plan, kept in the browser. */
export function VisitorPlanPage() {
  const { step } = useParams()
  const [session] = useState(visitorSession)
  const state = useSyncExternalStore(session.draft.subscribe, session.draft.getState)
  const saving = useSyncExternalStore(session.saving.subscribe, session.saving.get)
  const stepHref = useCallback((id: StepId) => paths.visitorPlan(id), [])
  const compares = step === 'compare'
  if (step !== undefined && !compares && !isStep(step)) return <NotFound />
  return (
    <Planner
      session={session}
      where={place}
      step={isStep(step) ? step : null}
      compares={compares}
      stepHref={stepHref}
      readOnly={null}
      cells={[
        { id: 'channel', label: 'Channel', value: textAt(state.document, 'name') },
        ...draftCells(state.document),
        { id: 'saved', label: 'Kept', value: savingWords(saving) },
      ]}
      notice={
        saving.kind === 'elsewhere' ? (
          <div className="plan-notice" role="alert">
            <p>
              <b>This plan was changed in another tab.</b> What stands here is not kept until you decide.
            </p>
            <div className="plan-notice-acts">
              <Button onClick={() => session.takeElsewhere()}>Take the other tab’s</Button>
              <Button onClick={() => session.keep()}>Keep this one</Button>
            </div>
          </div>
        ) : null
      }
    />
  )
}

function savingWords(saving: VisitorSaving): string {
  if (saving.kind === 'kept') return `in this browser, ${savedTime(saving.at)}`
  if (saving.kind === 'example') return 'an example, not changed yet'
  if (saving.kind === 'elsewhere') return 'another tab kept its own'
  return 'not kept: this browser refuses'
}
