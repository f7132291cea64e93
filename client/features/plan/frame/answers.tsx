import { roomTone } from '#client/components/marks.tsx'
import { Dash } from '#client/components/title-block.tsx'
import { toAnswers } from '#shared/note/answers.ts'
import { isAwaited } from '../session/plan-session.ts'
import { usePlanner } from '../planner-context.tsx'

/** The answers of the design note, from the same function: page and note never differ. */
export function PlanAnswers() {
  const { planning, candidate, stale } = usePlanner()
  const { planned } = planning
  if (!planned || !candidate)
    return (
      <p className="plan-none">
        {isAwaited(planning) ? <Dash width="10em" /> : 'Answers stand here once an arrangement fits.'}
      </p>
    )
  return (
    <dl className={`answers${stale ? ' is-stale' : ''}`} data-testid="answers">
      {toAnswers(planned.design, planned.plan, candidate).map((answer) => (
        <div key={answer.label}>
          <dt>{answer.label}</dt>
          <dd className={answer.state ? roomTone(answer.state) : undefined}>{answer.figure}</dd>
          {answer.small.map((line) => (
            <dd key={line} className="small">
              {line}
            </dd>
          ))}
        </div>
      ))}
    </dl>
  )
}
