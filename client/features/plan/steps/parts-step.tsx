import { TextButton } from '#client/components/buttons.tsx'
import type { Component } from '#shared/design/plan.ts'
import type { ResistorSeries } from '#shared/design/schema.ts'
import { share } from '#shared/note/figures.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import { toRkm } from '#shared/units/rkm.ts'
import { getAt } from '../draft/paths.ts'
import { fieldAt, leavesOf } from '../form/introspect.ts'
import { SchemaField } from '../form/schema-field.tsx'
import { usePlanner } from '../planner-context.tsx'
import { fixedRefs, nearestOther, refusedPart } from '../words/fixed-parts.ts'
import { fieldId } from '../words/steps.ts'
import { PickTable } from './pick-table.tsx'
import { Fields, FoldedFields, NotYet, StepHead, TableRegion } from './step-parts.tsx'

/** Step 5: values from a series or fixed by hand, and what the amplifiers are made of. */
export function PartsStep() {
  return (
    <>
      <StepHead
        title="Parts"
        say="Standard values for the equations; any of them can be fixed to what is on the board"
      />
      <Fields
        title="Resistors"
        group="parts.resistors"
        paths={['series', 'tolerance', 'minimum', 'maximum', 'preferred'].map(
          (key) => `parts.resistors.${key}`,
        )}
      />
      <PartsTable />
      <PickTable />
      <PartGroups />
    </>
  )
}

function PartsTable() {
  const { state, dispatch, candidate, readOnly } = usePlanner()
  const parts = (candidate?.components ?? []).filter((part) => !part.fixed)
  const fixed = fixedRefs(state.document)
  // What is fixed can always be freed, also where nothing fits because of it.
  const others = fixed.filter((ref) => !parts.some((part) => part.ref === ref))
  const freeAll = () =>
    dispatch({
      type: 'set',
      changes: [{ path: 'choose.values', value: undefined }],
      label: 'All parts freed',
    })
  if (parts.length + others.length === 0)
    return <NotYet>The parts are listed once an arrangement fits.</NotYet>
  return (
    <TableRegion label="Parts and their values">
      <table className="plan-table parts-table" id={fieldId('choose.values')}>
        <caption>Parts in use</caption>
        <thead>
          <tr>
            <th scope="col">Part</th>
            <th scope="col">Sets</th>
            <th scope="col" className="n">
              Wanted
            </th>
            <th scope="col" className="n">
              In use
            </th>
            <th scope="col">Fix at</th>
          </tr>
        </thead>
        <tbody>
          {parts.map((part) => (
            <PartRow key={part.ref} part={part} />
          ))}
          {others.map((ref) => (
            <tr key={ref}>
              <th scope="row">{ref}</th>
              <td>{candidate ? 'Not in this arrangement' : 'No arrangement fits'}</td>
              <td />
              <td />
              <td className="fix">
                <FixField part={{ ref }} unit={/^C/i.test(ref) ? 'F' : 'Ω'} />
              </td>
            </tr>
          ))}
        </tbody>
      </table>
      {fixed.length > 0 && readOnly === null && (
        <TextButton onClick={freeAll}>Free all fixed parts</TextButton>
      )}
    </TableRegion>
  )
}

function PartRow({ part }: { part: Component }) {
  const isPassive = part.kind === 'resistor' || part.kind === 'capacitor'
  const unit = part.kind === 'capacitor' ? 'F' : 'Ω'
  return (
    <tr>
      <th scope="row">{part.ref}</th>
      <td>{part.sets}</td>
      <td className="n" data-label="Wanted">
        {part.wanted === undefined ? '' : formatQuantity(part.wanted, unit)}
      </td>
      <td className="n" data-label="In use">
        {isPassive && part.value !== undefined ? <b>{toRkm(part.value, unit)}</b> : <b>{part.name}</b>}
        {isPassive && part.tolerance !== undefined && part.tolerance > 0 && (
          <small>{share(part.tolerance)}</small>
        )}
      </td>
      <td className="fix">{isPassive && <FixField part={part} unit={unit} />}</td>
    </tr>
  )
}

/** Typing a value fixes the part; emptying the field hands it back to the plan. */
function FixField({ part, unit }: { part: Pick<Component, 'ref' | 'value'>; unit: 'Ω' | 'F' }) {
  const { state, planning, dispatch, readOnly } = usePlanner()
  const path = `choose.values.${part.ref}`
  const fixed = getAt(state.document, path)
  const parts = planning.planned?.design.parts
  const series: ResistorSeries | undefined = unit === 'F' ? parts?.capacitors.series : parts?.resistors.series
  const near = typeof fixed === 'number' && series ? nearestOther(fixed, series) : null
  return (
    <span className="fix-field">
      <SchemaField
        path={path}
        label={`Fix ${part.ref} at`}
        hideLabel
        unit={unit}
        absent={part.value === undefined ? 'by the plan' : toRkm(part.value, unit)}
        width={9}
        {...(series ? { series } : {})}
        refuse={(value) => refusedPart(value, unit)}
      />
      {fixed !== undefined && readOnly === null && (
        <TextButton
          onClick={() =>
            dispatch({ type: 'set', changes: [{ path, value: undefined }], label: `${part.ref} freed` })
          }
        >
          Free<span className="sr-only"> {part.ref}</span>
        </TextButton>
      )}
      {near !== null && (
        <small>
          Not in {series}; nearest {toRkm(near, unit)}
        </small>
      )}
    </span>
  )
}

/** Keys that stand in the open group above. */
const shownAbove = new Set(['series', 'tolerance', 'minimum', 'maximum', 'preferred'])

/** Groups of the amplifiers' figures, in the order in which a data sheet gives them. */
const amplifierGroups: readonly (readonly [title: string, keys: readonly string[]])[] = [
  [
    'limits of inputs and output',
    [
      'name',
      'inputLow',
      'inputHigh',
      'outputLow',
      'outputHigh',
      'outputResistanceLow',
      'outputResistanceHigh',
      'outputCurrent',
      'phaseReversal',
      'internalLow',
      'internalHigh',
    ],
  ],
  [
    'gain and speed',
    [
      'k',
      'gainMinimum',
      'gainMaximum',
      'gainError',
      'gainDrift',
      'nonlinearity',
      'gbw',
      'a0',
      'phaseMargin',
      'minimumGain',
      'bandwidth',
      'slewRate',
      'rout',
    ],
  ],
  [
    'offset and bias',
    [
      'vos',
      'vosDrift',
      'vosCommonMode',
      'vosIn',
      'vosOut',
      'vosInDrift',
      'vosOutDrift',
      'ib',
      'ios',
      'ibDoubling',
      'cmrr',
      'psrr',
    ],
  ],
  ['input network', ['rin', 'rcm', 'cin', 'refResistance']],
  ['noise', ['en', 'enCorner', 'in', 'inCorner', 'enIn', 'enOut']],
  ['supply and absolute limits', ['supplyCurrent', 'minimumSupply', 'maximumSupply', 'absolute', 'channels']],
]

const keyOf = (path: string): string => path.slice(path.lastIndexOf('.') + 1)

function PartGroups() {
  const { sensorKind, candidate } = usePlanner()
  const keysOf = (section: string) => {
    const group = fieldAt(`parts.${section}`, sensorKind)
    // `typical` holds free figures without a field of their own.
    return group.control === 'group'
      ? group.fields.filter((spec) => leavesOf(spec).length > 0).map((spec) => spec.path)
      : []
  }
  const integrated = candidate?.components?.some((part) => part.kind === 'instrumentation-amplifier') ?? false
  const amplifier = candidate?.components?.some((part) => part.kind === 'amplifier') ?? true
  return (
    <>
      <FoldedFields
        title="Resistors: drift, ratings, stock"
        paths={keysOf('resistors').filter((path) => !shownAbove.has(keyOf(path)))}
      />
      <FoldedFields title="Capacitors" group="parts.capacitors" paths={keysOf('capacitors')} />
      <PartData
        title={`Amplifiers${amplifier ? '' : ' (none in use)'}`}
        section="amplifier"
        paths={keysOf('amplifier')}
      />
      <PartData
        title={`Integrated instrumentation amplifier${integrated ? '' : ' (none in use)'}`}
        section="instrumentation"
        paths={keysOf('instrumentation')}
      />
    </>
  )
}

function PartData({ title, section, paths }: { title: string; section: string; paths: readonly string[] }) {
  const placed = new Set(amplifierGroups.flatMap(([, keys]) => keys))
  const others = paths.filter((path) => !placed.has(keyOf(path)))
  return (
    <section className="part-data" id={fieldId(`parts.${section}`)}>
      <h2>{title}</h2>
      {amplifierGroups.map(([words, keys]) => (
        <FoldedFields
          key={words}
          title={words.charAt(0).toUpperCase() + words.slice(1)}
          paths={paths.filter((path) => keys.includes(keyOf(path)))}
        />
      ))}
      <FoldedFields title="More" paths={others} />
    </section>
  )
}
