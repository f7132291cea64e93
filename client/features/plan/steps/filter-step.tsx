import { usePlanner } from '../planner-context.tsx'
import { SchemaField } from '../form/schema-field.tsx'
import { fieldId } from '../words/steps.ts'
import { AliasPanel } from './filter/alias-panel.tsx'
import { DrivePanel } from './filter/drive-panel.tsx'
import { FilterFigures } from './filter/filter-figures.tsx'
import { ResponsePlots } from './filter/response-plots.tsx'
import { StabilityPanel } from './filter/stability-panel.tsx'
import { Fields, NotYet, StepHead } from './step-parts.tsx'

/** Step 6: the low-pass before the converter, how fast the pin settles, and whether every amplifier is steady. */
export function FilterStep() {
  return (
    <>
      <StepHead
        title="Filter"
        say="What stands between the last stage and the converter’s pin, how it settles, and how sampling loads it"
      />
      <fieldset className="plan-group" id={fieldId('choose.filter')}>
        <legend>Filter</legend>
        <div className="plan-fields">
          <SchemaField path="choose.filter.kind" absent="by the plan" />
          <SchemaField path="choose.filter.response" absent="Butterworth" />
          <SchemaField path="choose.filter.order" absent="by the plan" />
          <SchemaField path="choose.filter.corner" absent="by the plan" />
          <SchemaField path="rules.aliasAttenuation" absent="one code, at full scale" />
          <SchemaField path="rules.settling" label="Settled within" />
        </div>
      </fieldset>
      <Answers />
      <Fields
        title="At the pin"
        group="choose.drive"
        say="Left empty, both are standard values that bring the corner. The resistor also protects the pin, the capacitor feeds its sampling."
        paths={[]}
      >
        <SchemaField path="choose.drive.resistance" label="Series resistor" absent="by the plan" />
        <SchemaField path="choose.drive.capacitance" label="Capacitor at the pin" absent="by the plan" />
      </Fields>
    </>
  )
}

function Answers() {
  const { candidate, planning } = usePlanner()
  const { planned } = planning
  if (!candidate?.filter || !planned)
    return <NotYet>What the filter does stands here once an arrangement fits.</NotYet>
  const { filter, dynamics, stability, drive } = candidate
  const { design, plan } = planned
  return (
    <>
      <AliasPanel filter={filter} design={design} />
      <FilterFigures filter={filter} dynamics={dynamics ?? null} design={design} />
      <ResponsePlots filter={filter} dynamics={dynamics ?? null} design={design} lsb={plan.lsb} />
      {stability && stability.length > 0 ? (
        <StabilityPanel entries={stability} />
      ) : (
        <NotYet>
          {stability
            ? 'No plain amplifier stands in this chain: there is no loop to judge.'
            : 'This plan says nothing about stability.'}
        </NotYet>
      )}
      {drive ? <DrivePanel drive={drive} /> : <NotYet>This plan says nothing about the drive.</NotYet>}
    </>
  )
}
