import { SchemaField } from '../form/schema-field.tsx'
import { Fields, FoldedFields, StepHead } from './step-parts.tsx'

const c = (...keys: string[]): string[] => keys.map((key) => `converter.${key}`)

/** Step 3: the converter, its reference, the rails and the reference that shifts levels. */
export function ConverterStep() {
  return (
    <>
      <StepHead title="Converter and supplies" say="What the firmware reads, and what the stages live on" />
      <Fields
        title="Converter"
        group="converter"
        paths={c('input.low', 'input.high', 'bits', 'coding', 'wiring', 'sampleRate')}
      />
      <Fields title="Rails" group="rails" paths={['rails.positive', 'rails.negative', 'rails.tolerance']} />
      <Fields
        title="Reference of the converter"
        group="converter.reference"
        say="The input range scales with it: an error of the reference moves every code."
        paths={c('reference.voltage', 'reference.tolerance', 'reference.drift')}
      >
        <SchemaField path="converter.reference.same" only={['positive']} absent="a source of its own" />
      </Fields>
      <Fields
        title="Reference that shifts levels"
        group="shiftReference"
        say="Needed where the signal has to be moved up or down. It may be the converter’s own reference."
        paths={['shiftReference.voltage', 'shiftReference.tolerance', 'shiftReference.drift']}
      >
        <SchemaField
          path="shiftReference.same"
          only={['converter', 'positive']}
          absent="a source of its own"
        />
      </Fields>
      <Fields
        title="Guard bands"
        group="converter.guard"
        say="Share of the input range kept free at each end. Left empty, the plan keeps what the worst board needs."
        paths={c('guard.low', 'guard.high')}
      />
      <FoldedFields
        title="What the references can drive"
        paths={[
          ...c(
            'reference.outputResistance',
            'reference.source',
            'reference.sink',
            'reference.noise',
            'reference.buffered',
            'reference.ageing',
          ),
          'shiftReference.outputResistance',
          'shiftReference.source',
          'shiftReference.sink',
          'shiftReference.noise',
          'shiftReference.buffered',
          'shiftReference.ageing',
        ]}
      />
      <FoldedFields
        title="Errors of the converter"
        paths={c('offsetError', 'gainError', 'inl', 'noise', 'offsetDrift', 'gainDrift')}
      />
      <FoldedFields
        title="Sampling: kind of converter, multiplexer, digital filter"
        paths={c(
          'architecture',
          'modulatorRate',
          'digitalFilter',
          'outputRate',
          'multiplexed.channels',
          'multiplexed.resistance',
        )}
      />
      <FoldedFields
        title="Input network and supply of the converter"
        paths={c(
          'supply',
          'inputResistance',
          'inputCurrent',
          'acquisitionTime',
          'samplingCapacitance',
          'switchResistance',
          'commonMode',
        )}
      />
      <FoldedFields
        title="Absolute limits at the pin"
        group="converter.absolute"
        paths={c('absolute.low', 'absolute.high', 'absolute.clampCurrent')}
      />
      <FoldedFields title="Ripple of the rails" paths={['rails.ripple', 'rails.rippleFrequency']} />
    </>
  )
}
