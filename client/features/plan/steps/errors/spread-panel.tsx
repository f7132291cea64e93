import { SpreadFigure } from '#client/components/drawings/spread-figure.tsx'
import { Button } from '#client/components/buttons.tsx'
import type { Budget, Candidate } from '#shared/design/plan.ts'
import { count, figure } from '#shared/note/figures.ts'
import { stateWords, toSpreadTable, toYieldWords, type Scale } from '#shared/note/quality-tables.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import type { Spread } from '#shared/studies/types.ts'
import { SchemaField } from '../../form/schema-field.tsx'
import { usePlanner } from '../../planner-context.tsx'
import { NoteTable } from '../note-table.tsx'
import { useSpread } from './use-spread.ts'

interface SpreadPanelProps {
  budget: Budget
  scale: Scale
  candidate: Candidate
}

/** Many boards built at random: how many meet the target, and how far the budget is from it. */
export function SpreadPanel({ budget, scale, candidate }: SpreadPanelProps) {
  const { planning } = usePlanner()
  const { state, run, stop } = useSpread(candidate)
  const ready = planning.planned !== null && planning.status === 'current'
  return (
    <section aria-label="Spread of boards" className="spread-panel">
      <h2>Spread of boards</h2>
      <p className="field-note">
        Every uncertain input of each board is drawn within its limits, the whole network solved, adjusted and
        read. The same seed gives the same figures.
      </p>
      <div className="plan-choose">
        {state.running ? (
          <Button onClick={stop}>Stop</Button>
        ) : (
          <Button
            onClick={run}
            inactive={ready ? undefined : 'Fields have to be put right first: see the findings.'}
          >
            {state.spread ? 'Build again' : 'Build boards'}
          </Button>
        )}
        <p role="status">{progressWords(state.running, state.spread, state.outdated)}</p>
      </div>
      {/* Below the button: a field that says how it was read grows, and would move the button from under a press. */}
      <div className="plan-fields">
        <SchemaField path="analysis.boards" />
        <SchemaField path="analysis.seed" />
      </div>
      {state.failure !== null && <p className="plan-fault">The boards could not be built: {state.failure}</p>}
      {state.spread && state.spread.boards > 0 && (
        <div className={state.outdated ? 'd-stale' : undefined}>
          <Results spread={state.spread} budget={budget} scale={scale} />
        </div>
      )}
    </section>
  )
}

function progressWords(running: boolean, spread: Spread | null, outdated: boolean): string {
  if (!spread) return running ? 'The first boards are being built.' : 'No boards have been built yet.'
  const built = `${count(spread.boards + spread.clipped)} of ${count(spread.wanted)} boards, seed ${spread.seed}`
  if (running) return `${built}, still building.`
  if (outdated) return `${built}. The design has changed since: these are the figures of the earlier one.`
  return spread.finished
    ? `${built}.`
    : `${built}: stopped; the figures are those of the boards built by then.`
}

function Results({ spread, budget, scale }: { spread: Spread; budget: Budget; scale: Scale }) {
  const { unit } = scale
  const target = budget.target ? budget.target.limit / scale.perQuantity : null
  const words = toYieldWords(spread)
  const figures = (value: number) => formatQuantity(value, unit, { digits: 3 })
  return (
    <>
      <p className="verdict-line">
        <b>{words ? `${words}.` : 'No target is stated, so that there is no yield.'}</b>{' '}
        {spread.clipped > 0 &&
          `${count(spread.clipped)} boards clip somewhere in the span: they count as outside and are left out of the figures below. `}
        {stateWords[spread.state]}, at {figure(spread.at.quantity, unit)} and{' '}
        {formatQuantity(spread.at.temperature, '°C', { digits: 3 })}; limits {spread.distribution}.
      </p>
      <SpreadFigure spread={spread} unit={unit} target={target}>
        <NoteTable caption="Error of the reading" table={toSpreadTable(spread, unit)} />
      </SpreadFigure>
      <p>
        Standard deviation: {figures(spread.deviation)} over these boards, {figures(spread.budget.deviation)}{' '}
        by the budget; the run differs by {formatQuantity(spread.budget.difference, '', { digits: 2 })}
        {' %'}.
      </p>
    </>
  )
}
