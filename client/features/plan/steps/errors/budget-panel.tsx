import { useMemo, useState } from 'react'
import { ErrorList } from '#client/components/drawings/error-list.tsx'
import { RoomMark, roomTone } from '#client/components/marks.tsx'
import type { Budget, Candidate, ErrorState } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import { errorBars } from '#shared/drawings/error-chart.ts'
import { stateWords, toBudgetTable, toTotalsTable, type Scale } from '#shared/note/quality-tables.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import { usePlanner } from '../../planner-context.tsx'
import { leadToPart } from '../../words/lead-to-part.ts'
import { Fold } from '../fold.tsx'
import { NoteTable } from '../note-table.tsx'
import { Segments } from '../segments.tsx'
import { TableRegion } from '../step-parts.tsx'
import { sameDigits } from './totals.ts'
import {
  BUDGET_VERDICT,
  dominantOf,
  judgedState,
  lineDetails,
  totalShare,
  totalText,
  verdictOf,
} from './budget-words.ts'

interface BudgetPanelProps {
  budget: Budget
  scale: Scale
  candidate: Candidate
  design: Design
}

const states = (Object.keys(stateWords) as ErrorState[]).map((value) => ({ value, words: stateWords[value] }))

type ReadAt = 'measurand' | 'converter'

/** Does it meet the target and what dominates; then the terms, in each state and referred to either end. */
export function BudgetPanel({ budget, scale, candidate, design }: BudgetPanelProps) {
  const { goTo } = usePlanner()
  const [state, setState] = useState<ErrorState>(() => judgedState(budget))
  const [readAt, setReadAt] = useState<ReadAt>('measurand')
  const perVolt = readAt === 'converter' ? 1 : 1 / scale.perQuantity
  const unit = readAt === 'converter' ? 'V' : scale.unit
  const chart = useMemo(() => errorBars(budget, state, perVolt), [budget, state, perVolt])
  const lines = useMemo(() => new Map(budget.lines.map((line) => [line.id, line])), [budget])
  const verdict = verdictOf(budget, scale)
  const dominant = dominantOf(budget)
  return (
    <section aria-label="Error budget">
      <div className="verdict-head">
        <p id={BUDGET_VERDICT} tabIndex={-1} className={roomTone(verdict.state)}>
          <RoomMark state={verdict.state} /> <b>{verdict.head}</b>
        </p>
        <p>
          {verdict.text} {dominant}
        </p>
        {budget.zeroingHurts && (
          <p>
            <RoomMark state="tight" /> Zero adjustment alone makes the total larger than as built: a gain
            error about 0 V is moved to the far end. Adjust zero and span, or neither.
          </p>
        )}
      </div>
      <div className="plan-choose">
        <Segments<ErrorState> legend="State shown" value={state} options={states} onChange={setState} />
        <Segments<ReadAt>
          legend="Read at"
          value={readAt}
          options={[
            { value: 'measurand', words: 'At the measurand' },
            { value: 'converter', words: 'At the converter' },
          ]}
          onChange={setReadAt}
        />
      </div>
      <Totals budget={budget} scale={scale} state={state} />
      <ErrorList
        chart={chart}
        unit={unit}
        label={`Terms of the error, ${stateWords[state].toLowerCase()}, largest first`}
        details={(bar) => {
          const line = lines.get(bar.id)
          return line && <small>{lineDetails(line, design.temperature.calibration)}</small>
        }}
        onOpen={(bar) => goTo(bar.path ?? leadToPart(bar.source, candidate.components ?? []))}
      />
      <Fold title="The three states side by side" say={sideBySide(budget, scale)}>
        <NoteTable
          caption="Totals in each state"
          table={sameDigits(toTotalsTable(budget, scale), budget, scale)}
        />
      </Fold>
      <Fold
        title="Every term"
        say={`${budget.lines.filter((line) => line[state] > 0).length} terms ${stateWords[state].toLowerCase()}`}
      >
        <NoteTable
          caption={`Terms ${stateWords[state].toLowerCase()}; shares are those ${stateWords[judgedState(budget)].toLowerCase()}`}
          table={toBudgetTable(budget, state, scale)}
        />
      </Fold>
    </section>
  )
}

const sideBySide = (budget: Budget, { perQuantity, unit }: Scale): string =>
  states
    .map(
      ({ value, words }) =>
        `${words.toLowerCase()} ±${totalText(budget.totals[value].expanded / perQuantity, unit)}`,
    )
    .join(', ')

/** Worst case, root-sum-of-squares and expanded of one state, in every way of saying it. */
function Totals({ budget, scale, state }: { budget: Budget; scale: Scale; state: ErrorState }) {
  const total = budget.totals[state]
  const coverage = formatQuantity(budget.coverage, '', { digits: 3, display: 'percent' })
  const rows = [
    { name: 'Worst case, all limits added', volts: total.worst },
    { name: 'Root sum of squares of the limits', volts: total.rss },
    {
      name: `Expanded, ${coverage}, k = ${formatQuantity(total.k, '', { digits: 3 })}${total.coverageBy === 'quantile' ? ' from the combined distribution' : ''}`,
      volts: total.expanded,
    },
  ]
  return (
    <TableRegion label={`Totals ${stateWords[state].toLowerCase()}`}>
      <table className="plan-table totals-table">
        <caption>
          Totals {stateWords[state].toLowerCase()}, largest at {formatQuantity(total.at, scale.unit)} and{' '}
          {formatQuantity(total.temperature, '°C', { digits: 3 })}
        </caption>
        <thead>
          <tr>
            <th scope="col">Total, ±</th>
            <th scope="col" className="n">
              Measurand
            </th>
            <th scope="col" className="n">
              Converter
            </th>
            <th scope="col" className="n">
              LSB
            </th>
            <th scope="col" className="n">
              Of span
            </th>
          </tr>
        </thead>
        <tbody>
          {rows.map(({ name, volts }) => (
            <tr key={name}>
              <th scope="row">{name}</th>
              <td className="n">{totalText(volts / scale.perQuantity, scale.unit)}</td>
              <td className="n">{totalText(volts, 'V')}</td>
              <td className="n">{totalText(volts / scale.lsb, '')}</td>
              <td className="n">{totalShare(volts / scale.span)}</td>
            </tr>
          ))}
        </tbody>
      </table>
    </TableRegion>
  )
}
