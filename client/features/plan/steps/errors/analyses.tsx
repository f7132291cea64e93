import { RoomMark } from '#client/components/marks.tsx'
import type { Candidate, Ends, Plan, RoomState } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import {
  toHeadroomTable,
  toLoadTable,
  toModelTable,
  toOverVoltageTable,
  toVerdicts,
} from '#shared/note/analysis-tables.ts'
import { count, figure, reached, signed } from '#shared/note/figures.ts'
import { stateWords, worstState } from '#shared/note/span.ts'
import type { Table } from '#shared/note/types.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import { Fold } from '../fold.tsx'
import { NoteTable } from '../note-table.tsx'

interface AnalysesProps {
  candidate: Candidate
  design: Design
  plan: Plan
}

/** End points of the nominal board and of every board. */
export function EndPoints({ candidate, design, plan }: AnalysesProps) {
  return <NoteTable caption="End points" table={endPointTable(candidate, design, plan)} />
}

/** Ideal model, headroom, loads and over-voltage: each folded, with its worst state beside its name. */
export function Analyses({ candidate, design }: Omit<AnalysesProps, 'plan'>) {
  const { quantity } = design.sensor
  const worst = (list: readonly { state: RoomState }[]) =>
    stateWords[worstState(list.map(({ state }) => state))]
  return (
    <>
      {candidate.model && candidate.model.length > 0 && (
        <Fold title="Is the ideal model good enough here?" say={worst(candidate.model)}>
          <NoteTable
            caption="Real amplifiers against the ideal model"
            table={toModelTable(candidate.model)}
          />
          <ul className="verdicts">
            {toVerdicts(candidate.model).map((verdict) => (
              <li key={verdict.text}>
                <RoomMark state={verdict.state} /> {verdict.text}
              </li>
            ))}
          </ul>
        </Fold>
      )}
      {candidate.headroom && candidate.headroom.length > 0 && (
        <Fold title="Headroom at every pin, every board" say={worst(candidate.headroom)}>
          <NoteTable
            caption="Headroom at every pin, every board"
            table={toHeadroomTable(candidate.headroom, quantity)}
          />
          {candidate.bound && <p className="field-note">{boundWords(candidate.bound)}</p>}
        </Fold>
      )}
      {candidate.loads && candidate.loads.length > 0 && (
        <Fold title="What the references carry" say={worst(candidate.loads)}>
          <NoteTable caption="What the references carry" table={toLoadTable(candidate.loads)} />
        </Fold>
      )}
      {candidate.overVoltage && candidate.overVoltage.length > 0 ? (
        <Fold title="Over-voltage at the converter’s pin" say={worst(candidate.overVoltage)}>
          <NoteTable
            caption="Over-voltage at the converter’s pin"
            table={toOverVoltageTable(candidate.overVoltage)}
          />
        </Fold>
      ) : (
        <p className="field-note">
          Over-voltage at the converter’s pin is computed once its absolute limits are stated in step 3.
        </p>
      )}
    </>
  )
}

const boundWords = ({ proven, vertices, resistors }: NonNullable<Candidate['bound']>): string =>
  proven
    ? `Exact: all ${count(vertices)} combinations of the limits of ${resistors} resistors were computed.`
    : `Not proven: with ${resistors} resistors only ${count(vertices)} combinations were computed.`

/** Wanted and reached at both ends: volts, LSB, the measurand, codes, and the range over every board. */
function endPointTable(candidate: Candidate, design: Design, plan: Plan): Table {
  const { realised } = candidate
  if (!realised) return { columns: [], rows: [] }
  const { unit } = design.sensor.quantity
  const target: Ends = candidate.target ?? plan.required.target
  const row = (end: 'low' | 'high') => {
    const worst = realised.worst[end]
    return {
      cells: [
        formatQuantity(design.sensor.quantity[end], unit),
        figure(realised.converter[end] - realised.endpointError[end], 'V'),
        figure(realised.converter[end], 'V'),
        signed(realised.endpointError[end], largest(realised.endpointError), 'V'),
        `${signed(realised.endpointErrorLsb[end], largest(realised.endpointErrorLsb), '')} LSB`,
        signed(realised.endpointErrorQuantity[end], largest(realised.endpointErrorQuantity), unit),
        count(realised.codes[end]),
        reached(worst, 'V'),
      ],
    }
  }
  return {
    columns: [
      { title: design.sensor.quantity.name, share: 14, strong: true },
      {
        title: `Aimed at, of ${figure(target.low, 'V')} to ${figure(target.high, 'V')}`,
        share: 14,
        align: 'right',
      },
      { title: 'Nominal', share: 12, align: 'right' },
      { title: 'Off by', share: 12, align: 'right' },
      { title: 'In codes', share: 10, align: 'right' },
      { title: 'In the measurand', share: 12, align: 'right' },
      { title: 'Code', share: 10, align: 'right' },
      { title: 'Every board', share: 20, align: 'right' },
    ],
    rows: [row('low'), row('high')],
  }
}

const largest = (ends: Ends): number => Math.max(Math.abs(ends.low), Math.abs(ends.high))
