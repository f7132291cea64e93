import { RoomMark, roomTone } from '#client/components/marks.tsx'
import type { Drive } from '#shared/design/plan.ts'
import { figure, sentence, upward } from '#shared/note/figures.ts'
import { toDriveTable } from '#shared/note/quality-tables.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import { Link } from 'react-router-dom'
import { usePlanner } from '../../planner-context.tsx'
import { NoteTable } from '../note-table.tsx'

/** What sampling does to the pin, and whether it is over in time. */
export function DrivePanel({ drive }: { drive: Drive }) {
  const { stepHref } = usePlanner()
  return (
    <section aria-label="Drive of the converter">
      <h2>Drive of the converter</h2>
      <p>
        <RoomMark state={drive.state} /> <b className={roomTone(drive.state)}>{sentence(drive.text)}</b>{' '}
        {drive.state === 'unknown' && (
          <Link to={stepHref('converter')}>Sampling capacitance and acquisition time, step 3</Link>
        )}
      </p>
      {drive.criteria.length > 0 && (
        <NoteTable caption="Settling within the acquisition time" table={toDriveTable(drive)} />
      )}
      <dl className="figures-list">
        {drive.kick > 0 && (
          <div>
            <dt>Step at the pin as sampling begins</dt>
            <dd>{upward(drive.kick, 'V')}</dd>
          </div>
        )}
        {drive.settled !== null && (
          <div>
            <dt>Left at the end of the acquisition</dt>
            <dd>{formatQuantity(drive.settled, 'LSB', { digits: 2, rounding: 'up' })}</dd>
          </div>
        )}
        {drive.largestSource !== null && (
          <div>
            <dt>Largest source that settles without a buffer</dt>
            <dd>{formatQuantity(drive.largestSource, 'Ω', { digits: 3, rounding: 'down' })}</dd>
          </div>
        )}
        {drive.average && (
          <div>
            <dt>Drawn by sampling on average</dt>
            <dd>
              {upward(drive.average.current, 'A')}
              <small> {upward(drive.average.droop, 'V')} across the series resistance</small>
            </dd>
          </div>
        )}
        {drive.multiplexed && (
          <div>
            <dt>
              From the channel before, {drive.multiplexed.channels} channels, a step of{' '}
              {figure(drive.multiplexed.step, 'V')}
            </dt>
            <dd>
              {drive.multiplexed.needed === null
                ? 'never settles'
                : `needs ${upward(drive.multiplexed.needed, 's')}`}
              <small>
                {' '}
                {drive.multiplexed.met === null
                  ? 'acquisition time not stated'
                  : drive.multiplexed.met
                    ? 'in time'
                    : 'too long'}
              </small>
            </dd>
          </div>
        )}
      </dl>
    </section>
  )
}
