import { ButtonLink } from '#client/components/buttons.tsx'
import { toAssumptions } from '#shared/note/conditions.ts'
import { sentence } from '#shared/note/figures.ts'
import { Link } from 'react-router-dom'
import { paths } from '#client/lib/paths.ts'
import { FindingList } from '../frame/findings-column.tsx'
import { usePlanner } from '../planner-context.tsx'
import { CheckPanel } from '../review/check-panel.tsx'
import { Downloads } from '../review/downloads.tsx'
import { toSummary } from '../review/summary.ts'
import { fieldId, stepTitle } from '../words/steps.ts'
import { Cautions, NotYet, StepHead } from './step-parts.tsx'

/** Step 8: all answers in one place, what is open, what is assumed, and everything that can be taken away. */
export function ReviewStep() {
  const { planning, candidate, findings, where } = usePlanner()
  const { planned } = planning
  return (
    <>
      <StepHead title="Review" say="All that was decided, what is open, and what can be taken away" />
      {where.kind === 'visitor' && (
        <p className="plan-keep">
          <ButtonLink to={paths.join}>Keep this plan</ButtonLink>
          <span>
            It is kept in this browser only. Join to keep it in a workspace of your own; it moves along.
          </span>
        </p>
      )}
      <Downloads />
      <CheckPanel />
      <section aria-label="Findings">
        <h2>Findings</h2>
        {findings.length === 0 ? <NotYet>Nothing is wrong.</NotYet> : <FindingList findings={findings} />}
      </section>
      <Summary />
      {planned && (
        <section aria-label="What it rests on">
          <h2>What it rests on</h2>
          <ul className="plan-lines">
            {toAssumptions(planned.design, candidate).map((line) => (
              <li key={line}>{sentence(line)}</li>
            ))}
          </ul>
        </section>
      )}
      <section aria-label="Cautions">
        <h2>Cautions</h2>
        <Cautions />
      </section>
    </>
  )
}

/** Each answer with a way back to its field; what was left to the plan is said so. */
function Summary() {
  const { state, planning, candidate, goTo } = usePlanner()
  const groups = toSummary(state.document, planning.planned?.design ?? null, candidate)
  return (
    <section aria-label="Answers">
      <h2>Answers</h2>
      {groups.map((group) => (
        <div key={group.step} className="summary">
          <h3>{stepTitle(group.step)}</h3>
          <dl>
            {group.lines.map((line) => (
              <div key={line.path}>
                <dt>{line.label}</dt>
                <dd>
                  {line.text}
                  {!line.given && <small> {line.text === '' ? 'open' : 'not stated: as usual'}</small>}
                </dd>
                <dd className="change">
                  <Link
                    to={`#${fieldId(line.path)}`}
                    onClick={(event) => {
                      event.preventDefault()
                      goTo(line.path)
                    }}
                  >
                    Change<span className="sr-only"> {line.label}</span>
                  </Link>
                </dd>
              </div>
            ))}
          </dl>
        </div>
      ))}
    </section>
  )
}
