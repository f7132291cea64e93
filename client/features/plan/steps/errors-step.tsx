import { RoomMark } from '#client/components/marks.tsx'
import type { Candidate, Ends, Plan } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import {
  toHeadroomTable,
  toLoadTable,
  toModelTable,
  toOverVoltageTable,
  toToleranceTable,
  toVerdicts,
} from '#shared/note/analysis-tables.ts'
import { count, figure, reached, signed } from '#shared/note/figures.ts'
import { toSlope } from '#shared/note/span.ts'
import type { Table } from '#shared/note/types.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import { SchemaField } from '../form/schema-field.tsx'
import { usePlanner } from '../planner-context.tsx'
import { NoteTable } from './note-table.tsx'
import { NotYet, StepHead } from './step-parts.tsx'
import { TransferDrawing } from './transfer-drawing.tsx'

/** Step 7: how far off the chain is, and why. */
export function ErrorsStep() {
  const { candidate, planning } = usePlanner()
  const { planned } = planning
  return (
    <>
      <StepHead
        title="Errors"
        say="End points, what each part adds, every pin, and how good the ideal model is"
      />
      {planned && candidate?.realised ? (
        <Analyses candidate={candidate} design={planned.design} plan={planned.plan} />
      ) : (
        <NotYet>Errors are computed once an arrangement fits.</NotYet>
      )}
      <div className="plan-inline">
        <SchemaField path="rules.modelError" layout="inline" width={10} />
      </div>
    </>
  )
}

interface AnalysesProps {
  candidate: Candidate
  design: Design
  plan: Plan
}

function Analyses({ candidate, design, plan }: AnalysesProps) {
  const { quantity } = design.sensor
  const slope = toSlope(candidate, quantity)
  return (
    <>
      <NoteTable caption="End points" table={endPointTable(candidate, design, plan)} />
      <TransferDrawing />
      {candidate.tolerance && candidate.tolerance.lines.length > 0 && slope !== null && (
        <NoteTable
          caption={`Worst case as built, first order, in ${quantity.unit || 'the measurand'}`}
          table={toToleranceTable(candidate.tolerance, slope, quantity.unit)}
          lead={(row) => <Bar share={shareOf(candidate, row)} />}
        />
      )}
      {candidate.model && candidate.model.length > 0 && (
        <>
          <NoteTable caption="Is the ideal model good enough here?" table={toModelTable(candidate.model)} />
          <ul className="verdicts">
            {toVerdicts(candidate.model).map((verdict) => (
              <li key={verdict.text}>
                <RoomMark state={verdict.state} /> {verdict.text}
              </li>
            ))}
          </ul>
        </>
      )}
      {candidate.headroom && candidate.headroom.length > 0 && (
        <>
          <NoteTable
            caption="Headroom at every pin, every board"
            table={toHeadroomTable(candidate.headroom, quantity)}
          />
          {candidate.bound && <p className="field-note">{boundWords(candidate.bound)}</p>}
        </>
      )}
      {candidate.loads && candidate.loads.length > 0 && (
        <NoteTable caption="What the references carry" table={toLoadTable(candidate.loads)} />
      )}
      {candidate.overVoltage && candidate.overVoltage.length > 0 ? (
        <NoteTable
          caption="Over-voltage at the converter’s pin"
          table={toOverVoltageTable(candidate.overVoltage)}
        />
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

/** Length of a line's bar: its size over that of the largest. */
function shareOf(candidate: Candidate, row: number): number {
  const size = (line: Ends | undefined) => (line ? largest(line) : 0)
  const sorted = [...(candidate.tolerance?.lines ?? [])].sort((a, b) => size(b) - size(a))
  // Only single lines have a bar: the sums below them would dwarf it.
  return row < Math.min(16, sorted.length) ? size(sorted[row]) / (size(sorted[0]) || 1) : 0
}

function Bar({ share }: { share: number }) {
  if (share <= 0) return null
  return (
    <svg className="bar" viewBox="0 0 100 4" preserveAspectRatio="none" aria-hidden="true">
      <rect width={100 * share} height="4" />
    </svg>
  )
}
