import { Link } from 'react-router-dom'
import { TextButton } from '#client/components/buttons.tsx'
import { RoomMark, roomTone } from '#client/components/marks.tsx'
import type { FilterPlan } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import { usePlanner } from '../../planner-context.tsx'
import { aliasCures } from '../../words/alias-cures.ts'
import { useTaking } from '../use-taking.ts'

const ALIAS_VERDICT = 'alias-verdict'

/** What folds into the band against what is wanted, and what would do. */
export function AliasPanel({ filter, design }: { filter: FilterPlan; design: Design }) {
  const { stepHref, readOnly } = usePlanner()
  const take = useTaking(ALIAS_VERDICT)
  const { alias } = filter
  if (!alias)
    return (
      <p className="verdict-head">
        <RoomMark state="unknown" /> What folds into the band is known once{' '}
        {design.sensor.bandwidth === undefined ? (
          <Link to={stepHref('sensor')}>the signal bandwidth, step 2</Link>
        ) : (
          <Link to={stepHref('converter')}>the sample rate, step 3</Link>
        )}{' '}
        is stated.
      </p>
    )
  const decibels = (value: number, rounding: 'up' | 'down') =>
    formatQuantity(value, 'dB', { digits: 3, rounding })
  const hertz = formatQuantity(alias.frequency, 'Hz', { digits: 3, rounding: 'down' })
  const cures = aliasCures(filter)
  const enough = alias.state === 'clear'
  return (
    <section aria-label="Alias attenuation" className="verdict-head">
      <p id={ALIAS_VERDICT} tabIndex={-1} className={roomTone(alias.state)}>
        <RoomMark state={alias.state} />{' '}
        <b>
          {decibels(alias.reached, 'down')} of {decibels(alias.wanted, 'up')} wanted
          {enough ? '.' : `: short by ${decibels(alias.wanted - alias.reached, 'up')}.`}
        </b>
      </p>
      <p>
        {hertz} is the lowest frequency that folds into the band of{' '}
        {formatQuantity(design.sensor.bandwidth ?? 0, 'Hz', { digits: 3 })}.{' '}
        {!enough &&
          Object.values(alias.orders).every((order) => order === null) &&
          'Six poles do not reach it at this rate. '}
        {!enough &&
          alias.rateFor === null &&
          'No rate within this converter’s reach does it with this filter. '}
      </p>
      {cures.length > 0 && readOnly === null && (
        <p className="plan-takes">
          {cures.map((cure) => (
            <TextButton key={cure.words} onClick={() => take(cure.changes, cure.label, cure.words)}>
              {cure.words}
            </TextButton>
          ))}
        </p>
      )}
    </section>
  )
}
