import { TextButton } from '#client/components/buttons.tsx'
import type { Budget } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import { sentence, uncapital } from '#shared/note/figures.ts'
import { stateWords, type Scale } from '#shared/note/quality-tables.ts'
import { usePlanner } from '../../planner-context.tsx'
import { takingOf } from '../../words/take-part.ts'
import { useTaking } from '../use-taking.ts'
import { BUDGET_VERDICT, judgedState, totalText } from './budget-words.ts'

interface ImprovementsProps {
  budget: Budget
  scale: Scale
  design: Design
}

/** What each of the largest terms would have to be, and a control that takes it. */
export function Improvements({ budget, scale, design }: ImprovementsProps) {
  const { readOnly, sensorKind } = usePlanner()
  const take = useTaking(BUDGET_VERDICT)
  if (budget.improvements.length === 0) return null
  const takings = budget.improvements.map((improvement) => {
    const line = budget.lines.find(({ id }) => id === improvement.line)
    return line && readOnly === null ? takingOf(improvement, line, design, sensorKind) : null
  })
  const said = takings.map((taking) => taking?.words)
  return (
    <section aria-label="What would improve it">
      <h2>What would improve it</h2>
      <p className="field-note">
        All of these are for the total {uncapital(stateWords[judgedState(budget)])}
        {budget.target && ', the state of the target'}, whatever state is shown above.
      </p>
      <ul className="plan-lines">
        {budget.improvements.map((improvement, at) => {
          const taking = takings[at] ?? null
          const after = improvement.part?.after ?? improvement.after
          return (
            <li key={improvement.line}>
              {sentence(improvement.text)} The total would then be ±
              {totalText(after / scale.perQuantity, scale.unit)}.{' '}
              {taking && said.indexOf(taking.words) < at && <span>The same control as above takes it.</span>}
              {taking && said.indexOf(taking.words) === at && (
                <TextButton onClick={() => take(taking.changes, taking.label, taking.words)}>
                  {taking.words}
                </TextButton>
              )}
            </li>
          )
        })}
      </ul>
    </section>
  )
}
