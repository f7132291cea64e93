import type { ReactNode } from 'react'
import { faultText } from '../form/use-field.ts'
import { usePlanner } from '../planner-context.tsx'
import { fieldId } from '../words/steps.ts'
import { SchemaField } from '../form/schema-field.tsx'

/** Heading of a step, with one line about it. */
export function StepHead({ title, say, tools }: { title: string; say?: ReactNode; tools?: ReactNode }) {
  return (
    <div className="step-head">
      <h1>{title}</h1>
      {say !== undefined && <p>{say}</p>}
      {tools !== undefined && <div className="step-tools no-print">{tools}</div>}
    </div>
  )
}

interface FieldsProps {
  title: string
  paths: readonly string[]
  /** Path of the group, so that findings about it lead here. */
  group?: string
  say?: ReactNode
  children?: ReactNode
}

/** A ruled group of fields. */
export function Fields({ title, paths, group, say, children }: FieldsProps) {
  return (
    <fieldset className="plan-group" {...(group ? { id: fieldId(group) } : {})}>
      <legend>{title}</legend>
      {say !== undefined && <p className="field-note">{say}</p>}
      <GroupFault path={group} />
      <div className="plan-fields">
        {paths.map((path) => (
          <SchemaField key={path} path={path} nested />
        ))}
        {children}
      </div>
    </fieldset>
  )
}

/** The same, folded until it is needed or led to. */
export function FoldedFields({ title, paths, group, say }: FieldsProps) {
  if (paths.length === 0) return null
  return (
    <details className="plan-fold" {...(group ? { id: fieldId(group) } : {})}>
      <summary>{title}</summary>
      {say !== undefined && <p className="field-note">{say}</p>}
      <GroupFault path={group} />
      <div className="plan-fields">
        {paths.map((path) => (
          <SchemaField key={path} path={path} nested />
        ))}
      </div>
    </details>
  )
}

/** What is wrong with a group as a whole: its guard bands meet. */
function GroupFault({ path }: { path: string | undefined }) {
  const { faults } = usePlanner()
  const fault = path === undefined ? undefined : faults.get(path)
  return fault ? <p className="plan-fault">{faultText(fault)}</p> : null
}

/** Cautions beside the inputs that raise them. */
export function Cautions({ codes }: { codes?: (code: string) => boolean }) {
  const { planning } = usePlanner()
  const cautions = (planning.planned?.plan.cautions ?? []).filter(({ code }) => codes?.(code) ?? true)
  if (cautions.length === 0) return null
  return (
    <ul className="plan-cautions" aria-label="Cautions">
      {cautions.map((caution) => (
        <li key={caution.code}>{caution.text}</li>
      ))}
    </ul>
  )
}

/** A table that scrolls sideways inside its own region where the page is narrow. */
export function TableRegion({ label, children }: { label: string; children: ReactNode }) {
  return (
    <div className="plan-table-region" role="region" aria-label={label} tabIndex={0}>
      {children}
    </div>
  )
}

/** Stands where a step has nothing to show yet. */
export function NotYet({ children }: { children: ReactNode }) {
  return <p className="plan-none">{children}</p>
}
