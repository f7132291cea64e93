import { Link } from 'react-router-dom'
import { Dash } from '#client/components/title-block.tsx'
import { Menu, MenuItem, MenuRule } from '#client/components/menu.tsx'
import { announce } from '#client/lib/messages.ts'
import { sensorKinds } from '#shared/sensors/index.ts'
import { toRkm } from '#shared/units/rkm.ts'
import { emptyDocument, examples } from '../examples.ts'
import { fieldAt, leavesOf } from '../form/introspect.ts'
import { SchemaField } from '../form/schema-field.tsx'
import { isAwaited } from '../session/plan-session.ts'
import { usePlanner } from '../planner-context.tsx'

/** The front page: one sentence with the fields that decide everything, and the chain that follows from it. */
export function WholeJob() {
  const { quantity } = usePlanner()
  return (
    <>
      <div className="step-head">
        <h1>From a sensor’s span to a converter’s range</h1>
        <p>
          Change any figure: the chain between them is planned again, with standard values, the room that is
          left at every node on every board, and where it clips.
        </p>
        <div className="step-tools no-print">
          <StartMenu />
        </div>
      </div>
      <div className="job">
        <p>
          <SchemaField path="sensor.quantity.name" hideLabel label="Measurand" width={18} />
          <span>from</span>
          <SchemaField
            path="sensor.quantity.low"
            hideLabel
            label="Required span, low end"
            unit={quantity.unit}
            width={11}
          />
          <span>to</span>
          <SchemaField
            path="sensor.quantity.high"
            hideLabel
            label="Required span, high end"
            unit={quantity.unit}
            width={11}
          />
        </p>
        <p>
          <SensorWords />
        </p>
        <p>
          <span>Converter, from</span>
          <SchemaField path="converter.input.low" hideLabel width={10} />
          <span>to</span>
          <SchemaField path="converter.input.high" hideLabel width={10} />
          <span>in</span>
          <SchemaField path="converter.bits" hideLabel width={6} />
          <span>bits</span>
        </p>
        <p>
          <span>Rails at</span>
          <SchemaField path="rails.negative" hideLabel width={10} />
          <span>and</span>
          <SchemaField path="rails.positive" hideLabel width={10} />
          <span>resistors from</span>
          <SchemaField path="parts.resistors.series" hideLabel />
          <span>at</span>
          <SchemaField path="parts.resistors.tolerance" hideLabel width={11} />
        </p>
      </div>
      <Outcome />
    </>
  )
}

/** What the sensor gives: its output where the kind has one, else the first figures that the kind asks for. */
function SensorWords() {
  const { sensorKind, stepHref } = usePlanner()
  const kind = sensorKinds.find((known) => known.kind === sensorKind)
  if (!kind) return <Link to={stepHref('sensor')}>Choose a sensor in step 2</Link>
  const asked = kind.form.includes('output')
    ? ['sensor.output.low', 'sensor.output.high']
    : kind.form.slice(0, 2).flatMap((key) => {
        const first = leavesOf(fieldAt(`sensor.${key}`, kind.kind))[0]
        return first ? [first.path] : []
      })
  return (
    <>
      <span>{kind.title}</span>
      {asked.map((path, index) => (
        <span key={path} className="pair">
          <span>
            {kind.form.includes('output')
              ? index === 0
                ? 'from'
                : 'to'
              : fieldAt(path, kind.kind).label.toLowerCase()}
          </span>
          <SchemaField path={path} hideLabel width={10} />
        </span>
      ))}
      <span>behind</span>
      <SchemaField path="sensor.sourceResistance" hideLabel width={10} />
      <Link to={stepHref('sensor')}>another sensor</Link>
    </>
  )
}

/** The chain in one line. */
function Outcome() {
  const { candidate, planning, stepHref } = usePlanner()
  const parts = (candidate?.components ?? []).filter((part) => !part.fixed && part.value !== undefined)
  return (
    <p className="outcome">
      {candidate ? (
        <>
          <b>{candidate.title}</b>
          {parts.map((part) => (
            <span key={part.ref}>
              {part.ref} <b>{toRkm(part.value ?? 0, part.kind === 'capacitor' ? 'F' : 'Ω')}</b>
            </span>
          ))}
        </>
      ) : (
        <b>{isAwaited(planning) ? <Dash width="16em" /> : 'Nothing fits yet.'}</b>
      )}
      <Link to={stepHref('stages')}>Why this one, and what else would do</Link>
    </p>
  )
}

function StartMenu() {
  const { dispatch } = usePlanner()
  const start = (document: Record<string, unknown>, label: string) => {
    dispatch({ type: 'replace', document, label })
    announce(`${label}. Undo brings back what was there.`)
  }
  return (
    <Menu label="Start from" size="small" align="end">
      {examples.map((example) => (
        <MenuItem key={example.title} onSelect={() => start({ ...example.document }, example.title)}>
          {example.title}
        </MenuItem>
      ))}
      <MenuRule />
      <MenuItem onSelect={() => start(emptyDocument, 'Start empty')}>Start empty</MenuItem>
    </Menu>
  )
}
