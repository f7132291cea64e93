import type { Candidate } from '#shared/design/plan.ts'
import { count } from '#shared/note/figures.ts'
import { formatNumber } from '#shared/units/format-quantity.ts'
import type { Change } from '../draft/draft-state.ts'
import { textAt } from '../draft/paths.ts'
import { isAwaited } from '../session/plan-session.ts'
import { usePlanner } from '../planner-context.tsx'
import { fieldId } from '../words/steps.ts'
import { NotYet } from './step-parts.tsx'

/** What could do the job, best first, each with what it takes and gives up; what cannot, each with its reason. */
export function ArrangementList() {
  const { state, dispatch, planning, chosen, readOnly } = usePlanner()
  const { planned } = planning
  const asked = textAt(state.document, 'choose.arrangement')
  if (isAwaited(planning)) return <NotYet>The arrangements are being tried.</NotYet>
  if (!planned) return <NotYet>The arrangements are listed once the first three steps are filled in.</NotYet>
  const listed = planned.plan.candidates.map((candidate, index) => ({ candidate, index }))
  const possible = listed.filter(({ candidate }) => candidate.feasible)
  const others = listed.filter(({ candidate }) => !candidate.feasible)
  const best = possible[0]?.candidate
  const take = (arrangement: string | undefined, label: string) => {
    const changes: Change[] = [
      { path: 'choose.arrangement', value: arrangement },
      // Values and splits belong to the arrangement that they were fixed for.
      { path: 'choose.pick', value: undefined },
      { path: 'choose.stages', value: undefined },
    ]
    dispatch({ type: 'set', changes, label, path: 'choose.arrangement' })
  }
  const option = ({ candidate, index }: { candidate: Candidate; index: number }) => (
    <ArrangementOption
      key={`${candidate.arrangement} ${index}`}
      candidate={candidate}
      checked={asked === candidate.arrangement}
      inUse={index === chosen}
      disabled={readOnly !== null}
      onTake={() => take(candidate.arrangement, 'Arrangement')}
    />
  )
  return (
    <fieldset className="plan-group arrangements" id={fieldId('choose.arrangement')}>
      <legend>Arrangement</legend>
      <label className="arrangement">
        <input
          type="radio"
          name="arrangement"
          checked={asked === ''}
          disabled={readOnly !== null}
          onChange={() => take(undefined, 'Arrangement')}
        />
        <span>
          <b>Let the plan choose</b>
          <small>{best ? `Now: ${best.title}.` : 'Nothing fits at present.'}</small>
        </span>
      </label>
      {possible.map(option)}
      {others.length > 0 && (
        <details
          className="plan-fold"
          open={
            possible.length === 0 ||
            others.some(({ candidate }) => candidate.arrangement === asked) ||
            undefined
          }
        >
          <summary>
            {possible.length === 0 ? 'None is possible here' : `${others.length} not possible here`}, with the
            reasons
          </summary>
          {others.map(option)}
        </details>
      )}
    </fieldset>
  )
}

interface OptionProps {
  candidate: Candidate
  checked: boolean
  inUse: boolean
  disabled: boolean
  onTake(): void
}

function ArrangementOption({ candidate, checked, inUse, disabled, onTake }: OptionProps) {
  const { ranking } = candidate
  return (
    <label className="arrangement" data-feasible={candidate.feasible}>
      <input type="radio" name="arrangement" checked={checked} disabled={disabled} onChange={onTake} />
      <span>
        <b>{candidate.title}</b>
        {inUse && <em> in use</em>}
        {candidate.stages && (
          <small>
            {candidate.stages.map((stage) => `${stage.ref} gain ${formatNumber(stage.gain)}`).join(', ')}
          </small>
        )}
        {candidate.feasible && ranking && <small>{ranking.text}</small>}
        {!candidate.feasible &&
          candidate.reasons.map((reason) => <small key={reason.code + reason.text}>{reason.text}</small>)}
      </span>
      {candidate.feasible && ranking && (
        <span className="figures" aria-hidden="true">
          <span>
            {ranking.parts} <small>parts</small>
          </span>
          <span>
            {count(ranking.codesLost)} <small>codes given up</small>
          </span>
        </span>
      )}
    </label>
  )
}
