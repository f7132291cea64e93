import { SchemaField } from '../form/schema-field.tsx'
import { usePlanner } from '../planner-context.tsx'
import { Cautions, Fields, StepHead } from './step-parts.tsx'
import { TargetFields } from './target-fields.tsx'

/** Step 1: what is measured, over which span, how well, and in which climate. */
export function MeasurandStep() {
  return (
    <>
      <StepHead title="Measurand" say="What is read, from where to where, and how well" />
      <Fields
        title="What is measured"
        paths={['name', 'sensor.quantity.name', 'sensor.quantity.unit']}
        group="sensor.quantity"
      >
        <QuantityEnd end="low" />
        <QuantityEnd end="high" />
      </Fields>
      <Cautions codes={(code) => code !== 'scope' && code !== 'hazardous-voltage'} />
      <TargetFields />
      <Fields
        title="Temperature of the electronics"
        group="temperature"
        paths={['temperature.low', 'temperature.high', 'temperature.calibration']}
      />
    </>
  )
}

function QuantityEnd({ end }: { end: 'low' | 'high' }) {
  const { quantity } = usePlanner()
  return (
    <SchemaField
      path={`sensor.quantity.${end}`}
      label={end === 'low' ? 'Required span, from' : 'to'}
      unit={quantity.unit}
    />
  )
}
