import { ValueField } from '#client/components/value-field.tsx'
import { numberAt, textAt } from '../draft/paths.ts'
import { SchemaField } from '../form/schema-field.tsx'
import { faultText } from '../form/use-field.ts'
import { usePlanner } from '../planner-context.tsx'
import { fieldId } from '../words/steps.ts'

/** The limit is counted as a share of the span or in the measurand's unit; without a limit there is no target. */
export function TargetFields() {
  const { state, dispatch, quantity, readOnly, faults } = usePlanner()
  const path = 'target.limit'
  const limit = numberAt(state.document, path)
  const per = textAt(state.document, 'target.per') || 'span'
  const typed = state.typed[path]
  const fault = faults.get(path)
  const label = 'Target uncertainty'
  return (
    <fieldset className="plan-group" id={fieldId('target')}>
      <legend>Target</legend>
      <p className="field-note">Left empty, nothing is required; the note then states what is reached.</p>
      <div className="plan-fields">
        <ValueField
          // Another unit reads the same text as another value: the field starts anew with it.
          key={per}
          id={fieldId(path)}
          label={label}
          unit={per === 'span' ? '' : quantity.unit}
          display={per === 'span' ? 'percent' : 'plain'}
          value={limit}
          disabled={readOnly !== null}
          {...(typed ? { text: typed.text } : {})}
          {...(fault ? { error: faultText(fault) } : {})}
          onChange={(value, text) =>
            value === null
              ? dispatch({ type: 'set', changes: [{ path: 'target', value: undefined }], label, path })
              : dispatch({ type: 'type', path, value, text, label })
          }
          onInvalid={(text, reason) => dispatch({ type: 'misread', path, text, reason, label })}
          onBlur={() => dispatch({ type: 'leave', path })}
        />
        {limit !== null && (
          <>
            <SchemaField path="target.per" />
            <SchemaField path="target.state" />
            <SchemaField path="target.coverage" />
          </>
        )}
      </div>
    </fieldset>
  )
}
