import type { ReactNode } from 'react'
import { Link } from 'react-router-dom'
import type { Dynamics, FilterPlan } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import { figure, upward } from '#shared/note/figures.ts'
import { toSectionsTable } from '#shared/note/quality-tables.ts'
import { formatQuantity, formatRange } from '#shared/units/format-quantity.ts'
import { toRkm } from '#shared/units/rkm.ts'
import { usePlanner } from '../../planner-context.tsx'
import { NoteTable } from '../note-table.tsx'
import { TableRegion } from '../step-parts.tsx'

interface FilterFiguresProps {
  filter: FilterPlan
  dynamics: Dynamics | null
  design: Design
}

const kinds: Record<FilterPlan['kind'], string> = {
  none: 'none',
  rc: 'one pole, resistor and capacitor at the pin',
  'sallen-key': 'Sallen–Key',
  'multiple-feedback': 'multiple-feedback',
}

const responses = { butterworth: 'Butterworth', bessel: 'Bessel', chebyshev: 'Chebyshev' } as const

/** Corner, droop, settling and bandwidth; the sections; digital filter and mains. */
export function FilterFigures({ filter, dynamics, design }: FilterFiguresProps) {
  const { stepHref } = usePlanner()
  const decibels = (value: number) => formatQuantity(value, 'dB', { digits: 3 })
  const bandwidth = design.sensor.bandwidth
  const active = filter.order > 1
  return (
    <>
      <dl className="figures-list">
        <Figure name="Filter in use">
          {kinds[filter.kind]}
          {active && `, ${filter.order} poles, ${responses[filter.response]}`}
        </Figure>
        {filter.kind !== 'none' && (
          <Figure
            name="Corner"
            small={`over tolerance ${formatRange(filter.band.corner.low, filter.band.corner.high, 'Hz', { digits: 3, rounding: 'outward' })}`}
          >
            {figure(filter.corner, 'Hz')}
            {filter.wantedCorner > 0 && <small> wanted {figure(filter.wantedCorner, 'Hz')}</small>}
          </Figure>
        )}
        {filter.resistance > 0 && (
          <Figure name="At the pin">
            {figure(filter.resistance, 'Ω')} and {figure(filter.capacitance, 'F')}
          </Figure>
        )}
        <Figure
          name={`Loss at the signal bandwidth${bandwidth === undefined ? '' : `, ${figure(bandwidth, 'Hz')}`}`}
          {...(filter.band.droop
            ? {
                small: `over tolerance ${formatRange(filter.band.droop.low, filter.band.droop.high, 'dB', { digits: 3, rounding: 'outward' })}`,
              }
            : {})}
        >
          {filter.droopAtBandwidth === null ? (
            <Link to={stepHref('sensor')}>needs the signal bandwidth, step 2</Link>
          ) : (
            decibels(filter.droopAtBandwidth)
          )}
        </Figure>
        <Figure name="At half the sample rate">
          {filter.atHalfSampleRate === null ? (
            <Link to={stepHref('converter')}>needs the sample rate, step 3</Link>
          ) : (
            decibels(filter.atHalfSampleRate)
          )}
        </Figure>
        {filter.floor && (
          <Figure name="Real amplifiers let it come back to">
            {decibels(filter.floor.attenuation)} at {figure(filter.floor.frequency, 'Hz')}
          </Figure>
        )}
        {dynamics && <DynamicsFigures dynamics={dynamics} criterion={design.rules.settling} />}
      </dl>
      {filter.sections.length > 0 && (
        <NoteTable caption="Sections of the filter" table={toSectionsTable(filter)} />
      )}
      {filter.sections.some(({ parts }) => Object.keys(parts).length > 0) && (
        <p className="field-note">
          Parts:{' '}
          {filter.sections
            .flatMap(({ parts }) => Object.entries(parts))
            .map(([ref, value]) => `${ref} ${toRkm(value, ref.startsWith('C') ? 'F' : 'Ω')}`)
            .join(', ')}
          . <Link to={stepHref('parts')}>Fix any of them in step 5</Link>
        </p>
      )}
      {filter.digital && <Digital digital={filter.digital} />}
      {filter.mains && filter.mains.length > 0 && <Mains mains={filter.mains} unit="V" />}
    </>
  )
}

function Figure({ name, small, children }: { name: string; small?: string; children: ReactNode }) {
  return (
    <div>
      <dt>{name}</dt>
      <dd>{children}</dd>
      {small !== undefined && <dd className="small">{small}</dd>}
    </div>
  )
}

function DynamicsFigures({ dynamics, criterion }: { dynamics: Dynamics; criterion: number }) {
  const { settling } = dynamics
  return (
    <>
      <Figure name={`A full step settles to ${figure(criterion, 'LSB')} in`}>
        {settling === null ? 'not in the time looked at' : upward(settling, 's')}
        {dynamics.overshoot !== null && dynamics.overshoot > 0.0005 && (
          <small>
            {' '}
            overshoot{' '}
            {formatQuantity(dynamics.overshoot, '', { digits: 2, display: 'percent', rounding: 'up' })}
          </small>
        )}
      </Figure>
      <Figure name="Bandwidth, sensor to converter">
        {dynamics.bandwidth === null ? 'beyond what was looked at' : figure(dynamics.bandwidth, 'Hz')}
      </Figure>
      {dynamics.fullPower !== null && (
        <Figure name="Full span without slewing up to">
          {formatQuantity(dynamics.fullPower, 'Hz', { digits: 3, rounding: 'down' })}
          {!dynamics.followsSignal && <small> not enough for the signal bandwidth</small>}
        </Figure>
      )}
      {dynamics.amplifiers.map(({ amplifier, bandwidth }) => (
        <Figure key={amplifier} name={`Closed loop of ${amplifier}`}>
          {formatQuantity(bandwidth, 'Hz', { digits: 3 })}
        </Figure>
      ))}
    </>
  )
}

function Digital({ digital }: { digital: NonNullable<FilterPlan['digital']> }) {
  return (
    <TableRegion label="Digital filter">
      <table className="plan-table">
        <caption>
          Digital filter, {digital.kind}: {figure(digital.modulatorRate, 'Hz')} down to{' '}
          {figure(digital.outputRate, 'Hz')}
        </caption>
        <thead>
          <tr>
            <th scope="col">At</th>
            <th scope="col" className="n">
              Takes
            </th>
          </tr>
        </thead>
        <tbody>
          {digital.droop !== null && (
            <tr>
              <th scope="row">Signal bandwidth</th>
              <td className="n">{formatQuantity(digital.droop, 'dB', { digits: 3 })}</td>
            </tr>
          )}
          {digital.mains.map(({ frequency, rejection }) => (
            <tr key={frequency}>
              <th scope="row">Mains, {figure(frequency, 'Hz')}</th>
              <td className="n">{formatQuantity(rejection, 'dB', { digits: 3, rounding: 'down' })}</td>
            </tr>
          ))}
        </tbody>
      </table>
    </TableRegion>
  )
}

function Mains({ mains, unit }: { mains: NonNullable<FilterPlan['mains']>; unit: string }) {
  return (
    <TableRegion label="Mains common mode">
      <table className="plan-table">
        <caption>Mains as common mode, against the imbalance of source and leads</caption>
        <thead>
          <tr>
            <th scope="col">Frequency</th>
            <th scope="col" className="n">
              Imbalance
            </th>
            <th scope="col" className="n">
              Rejection
            </th>
            <th scope="col" className="n">
              Error at the converter
            </th>
          </tr>
        </thead>
        <tbody>
          {mains.map(({ frequency, imbalance, rejection, error }) => (
            <tr key={frequency}>
              <th scope="row">{figure(frequency, 'Hz')}</th>
              <td className="n">{figure(imbalance, 'Ω')}</td>
              <td className="n">{formatQuantity(rejection, 'dB', { digits: 3, rounding: 'down' })}</td>
              <td className="n">{upward(error, unit)}</td>
            </tr>
          ))}
        </tbody>
      </table>
    </TableRegion>
  )
}
