import { useMemo } from 'react'
import type { Fault } from '#shared/design/plan.ts'
import { getAt } from '../draft/paths.ts'
import { usePlanner } from '../planner-context.tsx'
import { nodeOfPath } from '../words/nodes.ts'
import { fieldId } from '../words/steps.ts'
import { companionsOf } from './companions.ts'
import { fieldAt, type FieldSpec } from './introspect.ts'

/** A key of the design as a control needs it: what it is, what stands in it, what is wrong with it. */
export function useField(path: string) {
  const { state, dispatch, faults, sensorKind, readOnly, setEditing, candidate } = usePlanner()
  const spec: FieldSpec = useMemo(() => fieldAt(path, sensorKind), [path, sensorKind])
  const fault = faults.get(path)
  return {
    spec,
    id: fieldId(path),
    value: getAt(state.document, path),
    typed: state.typed[path],
    error: fault ? faultText(fault) : undefined,
    disabled: readOnly !== null,
    type: (value: unknown, text: string, label: string) =>
      dispatch({
        type: 'type',
        path,
        value,
        text,
        label,
        also: companionsOf(path, value, state.document, candidate?.arrangement),
      }),
    misread: (text: string, reason: string, label: string) =>
      dispatch({ type: 'misread', path, text, reason, label }),
    choose: (value: unknown, label: string) =>
      dispatch({
        type: 'set',
        changes: [{ path, value }, ...companionsOf(path, value, state.document)],
        label,
      }),
    enter: () => setEditing(nodeOfPath(path)),
    leave: () => dispatch({ type: 'leave', path }),
  }
}

/** What is wrong and what is accepted, with a true minus before figures. */
export const faultText = ({ reason, accepted }: Fault): string =>
  `${capital(reason)}. Accepted: ${accepted}.`.replace(/(^|[ (])-(?=\d)/g, '$1−')

const capital = (text: string): string => text.charAt(0).toUpperCase() + text.slice(1)
