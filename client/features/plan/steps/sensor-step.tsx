import { TextButton } from '#client/components/buttons.tsx'
import { sensorKinds } from '#shared/sensors/index.ts'
import { getAt } from '../draft/paths.ts'
import { fieldAt, type FieldSpec } from '../form/introspect.ts'
import { SchemaField } from '../form/schema-field.tsx'
import { usePlanner } from '../planner-context.tsx'
import { Cautions, FoldedFields, StepHead } from './step-parts.tsx'

/** Keys of every sensor that other steps ask for. */
const elsewhere = new Set(['kind', 'quantity'])

/** Step 2: kind of sensor and what it gives. The fields follow from the kind's own schema. */
export function SensorStep() {
  const { sensorKind } = usePlanner()
  const kind = sensorKinds.find((known) => known.kind === sensorKind)
  return (
    <>
      <StepHead title="Sensor" say="What it gives over the required span, and what can happen to it" />
      <KindPicker />
      {kind && <KindFields key={kind.kind} kind={kind.kind} first={kind.form} title={kind.title} />}
      <Cautions codes={(code) => code === 'hazardous-voltage'} />
    </>
  )
}

function KindPicker() {
  const { state, dispatch, sensorKind, readOnly } = usePlanner()
  const choose = (kind: string) => {
    const sensor = changeKind(getAt(state.document, 'sensor'), kind)
    dispatch({
      type: 'set',
      changes: [{ path: 'sensor', value: sensor }],
      label: 'Sensor kind',
      path: 'sensor.kind',
    })
  }
  return (
    <fieldset className="plan-group" id="field-sensor-kind">
      <legend>Kind</legend>
      <div className="plan-choices">
        {sensorKinds.map((kind) => (
          <label key={kind.kind}>
            <input
              type="radio"
              name="sensor-kind"
              value={kind.kind}
              checked={kind.kind === sensorKind}
              disabled={readOnly !== null}
              onChange={() => choose(kind.kind)}
            />
            <span>
              <b>{kind.title}</b>
              <small>{kind.summary}</small>
            </span>
          </label>
        ))}
      </div>
    </fieldset>
  )
}

interface KindFieldsProps {
  kind: string
  /** Keys that the kind asks for first. */
  first: readonly string[]
  title: string
}

function KindFields({ kind, first, title }: KindFieldsProps) {
  const { state, dispatch, readOnly } = usePlanner()
  const group = fieldAt('sensor', kind)
  const keys = group.control === 'group' ? group.fields : []
  const isFirst = (spec: FieldSpec) => first.includes(keyOf(spec)) || spec.required
  const asked = keys
    .filter((spec) => !elsewhere.has(keyOf(spec)) && isFirst(spec))
    .sort((a, b) => place(first, a) - place(first, b))
  const rest = keys.filter((spec) => !elsewhere.has(keyOf(spec)) && !isFirst(spec))
  const example = sensorKinds.find((known) => known.kind === kind)?.example
  const open = asked.some((spec) => spec.required && getAt(state.document, spec.path) === undefined)
  return (
    <>
      <fieldset className="plan-group">
        <legend>{title}</legend>
        {open && example && readOnly === null && (
          <p className="field-note">
            Nothing is filled in yet.{' '}
            <TextButton
              onClick={() =>
                dispatch({
                  type: 'set',
                  changes: [
                    {
                      path: 'sensor',
                      value: {
                        ...example,
                        quantity: getAt(state.document, 'sensor.quantity') ?? example.quantity,
                      },
                    },
                  ],
                  label: 'Typical figures',
                })
              }
            >
              Start from typical figures
            </TextButton>
          </p>
        )}
        <div className="plan-fields">
          {asked.map((spec) => (
            <SchemaField key={spec.path} path={spec.path} nested />
          ))}
        </div>
      </fieldset>
      <FoldedFields title="Wiring, leads and accuracy" paths={rest.map((spec) => spec.path)} />
    </>
  )
}

const keyOf = (spec: FieldSpec): string => spec.path.slice(spec.path.lastIndexOf('.') + 1)

function place(first: readonly string[], spec: FieldSpec): number {
  const index = first.indexOf(keyOf(spec))
  return index < 0 ? first.length : index
}

/** The sensor as another kind: the measurand and every key that both kinds know stay, the rest is asked anew. */
export function changeKind(sensor: unknown, kind: string): Record<string, unknown> {
  const known = fieldAt('sensor', kind)
  const specs = known.control === 'group' ? known.fields : []
  const kept: Record<string, unknown> = { kind }
  if (typeof sensor !== 'object' || sensor === null) return kept
  const from = fieldAt('sensor', String((sensor as Record<string, unknown>).kind ?? kind))
  const before = from.control === 'group' ? from.fields : []
  for (const spec of specs) {
    const key = keyOf(spec)
    const value = (sensor as Record<string, unknown>)[key]
    const same = before.find((other) => keyOf(other) === key)
    // A key of the same name may mean another thing in another kind (`beyond` in volts or in the measurand).
    if (key !== 'kind' && value !== undefined && same && sameMeaning(same, spec)) kept[key] = value
  }
  return kept
}

function sameMeaning(a: FieldSpec, b: FieldSpec): boolean {
  if (a.control !== b.control) return false
  if (a.control === 'number' && b.control === 'number') return a.unit === b.unit
  if (a.control === 'group' && b.control === 'group')
    return (
      a.fields.length === b.fields.length &&
      a.fields.every((field, index) => {
        const other = b.fields[index]
        return other !== undefined && keyOf(field) === keyOf(other) && sameMeaning(field, other)
      })
    )
  return true
}
