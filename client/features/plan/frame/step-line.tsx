import { Link } from 'react-router-dom'
import { RoomMark, TickMark } from '#client/components/marks.tsx'
import { usePlanner } from '../planner-context.tsx'
import { isAwaited } from '../session/plan-session.ts'
import { answerSteps } from '../words/step-answers.ts'
import { stepNumber, steps, stepTitle } from '../words/steps.ts'

/** The eight steps with what each has answered so far. On a narrow page only the present one, with the list folded. */
export function StepLine() {
  const { state, planning, findings, candidate, step, stepHref } = usePlanner()
  const answers = answerSteps({ document: state.document, findings, candidate, awaited: isAwaited(planning) })
  const list = (
    <ol className="step-line">
      {answers.map((answer) => (
        <li key={answer.id} data-state={answer.state} aria-current={answer.id === step ? 'step' : undefined}>
          <Link to={stepHref(answer.id)}>
            <span className="n">{stepNumber(answer.id)}</span>
            <span className="name">{stepTitle(answer.id)}</span>
            {answer.state === 'done' && (
              <>
                <TickMark />
                <span className="sr-only">complete</span>
              </>
            )}
            {answer.state === 'noted' && <RoomMark state="tight" />}
            <small>{answer.text}</small>
          </Link>
        </li>
      ))}
    </ol>
  )
  return (
    <>
      <nav aria-label="Steps" className="step-line-wide">
        {list}
      </nav>
      <details className="step-line-narrow">
        <summary>
          {step
            ? `Step ${stepNumber(step)} of ${steps.length}: ${stepTitle(step)}`
            : `All ${steps.length} steps`}
        </summary>
        <nav aria-label="Steps">{list}</nav>
      </details>
    </>
  )
}
