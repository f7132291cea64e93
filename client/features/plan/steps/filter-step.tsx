import { Link } from 'react-router-dom'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import { numberAt } from '../draft/paths.ts'
import { SchemaField } from '../form/schema-field.tsx'
import { usePlanner } from '../planner-context.tsx'
import { fieldId } from '../words/steps.ts'
import { Fields, NotYet, StepHead } from './step-parts.tsx'

/** Step 6: the low-pass before the converter and how fast the pin settles. */
export function FilterStep() {
  return (
    <>
      <StepHead title="Filter" say="What stands between the last stage and the converter’s pin" />
      <fieldset className="plan-group" id={fieldId('choose.filter')}>
        <legend>Filter</legend>
        <div className="plan-fields">
          <SchemaField path="choose.filter.kind" absent="by the plan" />
          <SchemaField path="choose.filter.corner" absent="by the plan" />
        </div>
      </fieldset>
      <Fields
        title="Its parts"
        group="choose.drive"
        say="Left empty, both are standard values that bring the corner. The resistor also protects the pin, the capacitor feeds its sampling."
        paths={[]}
      >
        <SchemaField path="choose.drive.resistance" label="Series resistor" absent="by the plan" />
        <SchemaField path="choose.drive.capacitance" label="Capacitor at the pin" absent="by the plan" />
        <SchemaField path="rules.settling" label="Settled within" />
      </Fields>
      <FilterAnswers />
    </>
  )
}

function FilterAnswers() {
  const { candidate, state, stepHref } = usePlanner()
  const filter = candidate?.filter
  if (!filter) return <NotYet>What the filter does stands here once an arrangement fits.</NotYet>
  const bandwidth = numberAt(state.document, 'sensor.bandwidth')
  const rate = numberAt(state.document, 'converter.sampleRate')
  const decibels = (value: number) => formatQuantity(value, 'dB', { digits: 3 })
  return (
    <dl className="figures-list">
      {filter.kind === 'none' ? (
        <div>
          <dt>Filter</dt>
          <dd>none</dd>
        </div>
      ) : (
        <>
          <div>
            <dt>Corner</dt>
            <dd>{formatQuantity(filter.corner, 'Hz')}</dd>
          </div>
          <div>
            <dt>Made of</dt>
            <dd>
              {formatQuantity(filter.resistance, 'Ω')} and {formatQuantity(filter.capacitance, 'F')}
            </dd>
          </div>
          <div>
            <dt>
              Loss at the signal bandwidth{bandwidth === null ? '' : `, ${formatQuantity(bandwidth, 'Hz')}`}
            </dt>
            <dd>
              {filter.droopAtBandwidth === null ? (
                <Link to={stepHref('sensor')}>Needs the signal bandwidth, step 2</Link>
              ) : (
                decibels(filter.droopAtBandwidth)
              )}
            </dd>
          </div>
          <div>
            <dt>
              Attenuation at half the sample rate{rate === null ? '' : `, ${formatQuantity(rate / 2, 'Hz')}`}
            </dt>
            <dd>
              {filter.atHalfSampleRate === null ? (
                <Link to={stepHref('converter')}>Needs the sample rate, step 3</Link>
              ) : (
                decibels(filter.atHalfSampleRate)
              )}
            </dd>
          </div>
          <div>
            <dt>Time to settle after a step over the whole range</dt>
            <dd>{formatQuantity(filter.settling, 's', { digits: 3, rounding: 'up' })}</dd>
          </div>
        </>
      )}
    </dl>
  )
}
