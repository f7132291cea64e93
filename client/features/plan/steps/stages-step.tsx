import { Link } from 'react-router-dom'
import { TextButton } from '#client/components/buttons.tsx'
import { Dash } from '#client/components/title-block.tsx'
import { RoomMark } from '#client/components/marks.tsx'
import { count, share } from '#shared/note/figures.ts'
import { sensorKinds } from '#shared/sensors/index.ts'
import { formatNumber, formatQuantity, formatRange } from '#shared/units/format-quantity.ts'
import { toRkm } from '#shared/units/rkm.ts'
import type { Candidate, Level } from '#shared/design/plan.ts'
import { getAt } from '../draft/paths.ts'
import { isAwaited } from '../session/plan-session.ts'
import { SchemaField } from '../form/schema-field.tsx'
import { usePlanner } from '../planner-context.tsx'
import { ArrangementList } from './arrangement-list.tsx'
import { CircuitDrawing } from './circuit-drawing.tsx'
import { StageGain, StageReference } from './stage-fields.tsx'
import { StageSymbol } from './stage-symbol.tsx'
import { StepHead } from './step-parts.tsx'

/** Step 4: the chain as sentences, the arrangements that could do it, the circuit and its equations. */
export function StagesStep() {
  const { candidate } = usePlanner()
  return (
    <>
      <StepHead title="Stages" say="One line per stage, from the sensor down to the converter" />
      <Chain />
      <div className="plan-inline">
        <SchemaField path="rules.room" layout="inline" label="Room to keep at every node" width={10} />
      </div>
      <ArrangementList />
      {candidate?.components && <CircuitDrawing />}
      <Equations candidate={candidate} />
    </>
  )
}

function Chain() {
  const { candidate, planning, stepHref, sensorKind } = usePlanner()
  const { planned } = planning
  const level = (node: string) => candidate?.levels?.find((known) => known.node === node)
  const kind = sensorKinds.find((known) => known.kind === sensorKind)
  const input = planned?.design.converter.input
  return (
    <ol className="chain">
      <li className="ro">
        <span className="tag">From</span>
        <StageSymbol name={sensorKind === 'bridge' ? 'bridge' : 'source'} />
        <div className="sentence">
          <b>{kind?.title ?? 'Sensor'}</b>
          <Link to={stepHref('sensor')}>Edit in step 2</Link>
        </div>
        <LevelRange level={level('sensor')} />
      </li>
      {candidate ? (
        stagesOf(candidate).map((stage, index) => (
          <StageLine
            key={stage.ref}
            candidate={candidate}
            stage={stage}
            index={index}
            level={level(stage.ref)}
          />
        ))
      ) : (
        <li>
          <span className="tag">S1</span>
          <span />
          <div className="sentence">
            {isAwaited(planning) ? <Dash width="14em" /> : <b>No arrangement fits yet.</b>}
          </div>
        </li>
      )}
      {candidate?.filter?.kind === 'rc' && (
        <li className="ro">
          <span className="tag">Filter</span>
          <StageSymbol name="filter" />
          <div className="sentence">
            <b>Low-pass, one pole</b>
            <span>corner {formatQuantity(candidate.filter.corner, 'Hz', { digits: 3 })}</span>
            <span>
              {toRkm(candidate.filter.resistance, 'Ω')} and {toRkm(candidate.filter.capacitance, 'F')}
            </span>
            <Link to={stepHref('filter')}>Edit in step 6</Link>
          </div>
        </li>
      )}
      <li className="ro">
        <span className="tag">To</span>
        <StageSymbol name="converter" />
        <div className="sentence">
          <b>Converter</b>
          {planned && input && (
            <span>
              {formatNumber(planned.design.converter.bits)} bit, {formatRange(input.low, input.high, 'V')}
            </span>
          )}
          <Link to={stepHref('converter')}>Edit in step 3</Link>
        </div>
        <LevelRange level={level('adc')} />
      </li>
    </ol>
  )
}

interface Stage {
  ref: string
  title: string
  gain: number | null
}

/** One stage carries the whole arrangement; two split its gain. */
function stagesOf(candidate: Candidate): Stage[] {
  if (candidate.stages)
    return candidate.stages.map((stage, index) => ({
      ref: stage.ref,
      title: titleOfPart(candidate.title, index),
      gain: stage.gain,
    }))
  const level = candidate.levels?.find((known) => known.node === 'S1')
  const amplifiers = candidate.ranking?.amplifiers ?? 1
  if (amplifiers === 0 && !level) return []
  return [{ ref: 'S1', title: candidate.title, gain: level?.gain ?? null }]
}

/** "First arrangement, then second": the words of one of them. */
function titleOfPart(title: string, index: number): string {
  const part = title.split(', then ')[index] ?? title
  return part.charAt(0).toUpperCase() + part.slice(1)
}

interface StageLineProps {
  candidate: Candidate
  stage: Stage
  index: number
  level: Level | undefined
}

function StageLine({ candidate, stage, index, level }: StageLineProps) {
  const { editing, planning } = usePlanner()
  const parts = (candidate.components ?? []).filter(
    (part) =>
      !part.fixed &&
      part.value !== undefined &&
      (part.stage === stage.ref || (index === 0 && part.stage === 'level')),
  )
  const differential =
    planning.planned?.design.sensor.kind === 'bridge' || isDifferential(planning.planned?.document)
  const two = (candidate.stages?.length ?? 1) > 1
  return (
    <li className={editing === stage.ref ? 'on' : undefined}>
      <span className="tag">{stage.ref}</span>
      <StageSymbol name="amplifier" />
      <div className="sentence">
        <b>{stage.title}</b>
        {two && index === 0 ? (
          <StageGain candidate={candidate} gain={stage.gain} />
        ) : (
          stage.gain !== null && <span>gain {formatNumber(stage.gain)}</span>
        )}
        {index === 0 && differential && <StageReference />}
        {parts.length > 0 && (
          <span className="codes">
            {parts.map((part) => (
              <span key={part.ref}>
                {part.ref} <b>{toRkm(part.value ?? 0, part.kind === 'capacitor' ? 'F' : 'Ω')}</b>
              </span>
            ))}
          </span>
        )}
        <StageAid candidate={candidate} last={index === (candidate.stages?.length ?? 1) - 1} />
      </div>
      <LevelRange level={level} />
    </li>
  )
}

const isDifferential = (document: unknown): boolean =>
  typeof document === 'object' &&
  document !== null &&
  getAt(document as Record<string, unknown>, 'sensor.wiring') === 'differential'

/** What the standard values make of the equations, and the way back from fixed values to the plan's own. */
function StageAid({ candidate, last }: { candidate: Candidate; last: boolean }) {
  const { dispatch, readOnly, stepHref } = usePlanner()
  const pick = candidate.picks?.[candidate.pick ?? 0]
  if (!last || !pick) return null
  const fixed = candidate.components?.some((part) => part.chosen) ?? false
  return (
    <p className="aid">
      <span>
        With these values the ends are off by <b>{share(pick.error)}</b> of the span, with ideal amplifiers.
      </span>
      {fixed && readOnly === null ? (
        <span>
          Some values are fixed.
          <TextButton
            onClick={() =>
              dispatch({
                type: 'set',
                changes: [{ path: 'choose.values', value: undefined }],
                label: 'Fixed values',
              })
            }
          >
            Take the plan’s values
          </TextButton>
        </span>
      ) : (
        <Link to={stepHref('parts')}>Other values in step 5</Link>
      )}
    </p>
  )
}

function LevelRange({ level }: { level: Level | undefined }) {
  if (!level) return <span className="range" />
  return (
    <span className="range">
      {formatRange(level.nominal.low, level.nominal.high, level.unit, { unitOnce: true })}
      <RoomMark state={level.state} label={level.state === 'unknown' ? 'not known' : level.state} />
    </span>
  )
}

function Equations({ candidate }: { candidate: Candidate | null }) {
  if (!candidate?.equations?.length) return null
  const realised = candidate.realised
  return (
    <section aria-label="Equations">
      <h2>Equations</h2>
      <dl className="equations">
        {candidate.equations.map((equation) => (
          <div key={equation.name + equation.symbolic}>
            <dt>{equation.name}</dt>
            <dd>{equation.symbolic}</dd>
            <dd>{equation.numeric}</dd>
          </div>
        ))}
      </dl>
      {realised && (
        <p className="field-note">
          Codes {count(realised.codes.low)} to {count(realised.codes.high)},{' '}
          {count(Math.floor(realised.codesUsed))} used.
        </p>
      )}
    </section>
  )
}
