import { ValueField } from '#client/components/value-field.tsx'
import type { Candidate } from '#shared/design/plan.ts'
import { formatNumber } from '#shared/units/format-quantity.ts'
import { numberAt } from '../draft/paths.ts'
import { faultText } from '../form/use-field.ts'
import { usePlanner } from '../planner-context.tsx'
import { fieldId } from '../words/steps.ts'

const FIRST = 'choose.stages.0'

/** How much of the gain the first of two stages takes. Typing it also settles on this pair of arrangements. */
export function StageGain({ candidate, gain }: { candidate: Candidate; gain: number | null }) {
  return (
    <StageValue
      path={`${FIRST}.gain`}
      label="gain"
      unit="V/V"
      {...(gain === null ? {} : { placeholder: formatNumber(gain) })}
      also={[
        { path: `${FIRST}.ref`, value: 'S1' },
        { path: 'choose.arrangement', value: candidate.arrangement },
      ]}
    />
  )
}

/** Voltage to which the stage's reference leg is brought. */
export function StageReference() {
  return (
    <StageValue
      path={`${FIRST}.reference`}
      label="reference leg"
      unit="V"
      placeholder="by the plan"
      also={[{ path: `${FIRST}.ref`, value: 'S1' }]}
    />
  )
}

interface StageValueProps {
  path: string
  label: string
  unit: string
  placeholder?: string
  also: { path: string; value: unknown }[]
}

function StageValue({ path, label, unit, placeholder, also }: StageValueProps) {
  const { state, dispatch, readOnly, setEditing, faults } = usePlanner()
  const typed = state.typed[path]
  const fault = faults.get(path)
  return (
    <ValueField
      id={fieldId(path)}
      label={label}
      layout="inline"
      unit={unit}
      width={14}
      value={numberAt(state.document, path)}
      disabled={readOnly !== null}
      {...(placeholder ? { placeholder } : {})}
      {...(typed ? { text: typed.text } : {})}
      {...(fault ? { error: faultText(fault) } : {})}
      onChange={(value, text) =>
        dispatch({
          type: 'type',
          path,
          value: value ?? undefined,
          text,
          label: `Stage S1, ${label}`,
          also: value === null ? [] : also,
        })
      }
      onInvalid={(text, reason) =>
        dispatch({ type: 'misread', path, text, reason, label: `Stage S1, ${label}` })
      }
      onFocus={() => setEditing('S1')}
      onBlur={() => dispatch({ type: 'leave', path })}
    />
  )
}
