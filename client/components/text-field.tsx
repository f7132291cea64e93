import { useId, type ComponentProps } from 'react'
import { describedBy, Field, type FieldFrame } from './field.tsx'

type TextFieldProps = FieldFrame & Omit<ComponentProps<'input'>, keyof FieldFrame> & { suffix?: string }

/** One line of text. */
export function TextField(props: TextFieldProps) {
  const {
    label,
    hideLabel,
    layout,
    help,
    error,
    required,
    disabled,
    className,
    suffix,
    id: givenId,
    ...rest
  } = props
  const ownId = useId()
  const id = givenId ?? ownId
  return (
    <Field {...frame({ label, hideLabel, layout, help, error, className })} id={id}>
      <span className="field-box">
        <input
          type="text"
          {...rest}
          id={id}
          required={required}
          disabled={disabled}
          aria-invalid={error ? true : undefined}
          aria-describedby={describedBy(id, { help: help !== undefined, error: Boolean(error) })}
        />
        {suffix !== undefined && <span className="flex-none text-12 text-ink-3">{suffix}</span>}
      </span>
    </Field>
  )
}

type TextAreaProps = FieldFrame & Omit<ComponentProps<'textarea'>, keyof FieldFrame>

/** Several lines of text. */
export function TextArea(props: TextAreaProps) {
  const { label, hideLabel, layout, help, error, required, disabled, className, id: givenId, ...rest } = props
  const ownId = useId()
  const id = givenId ?? ownId
  return (
    <Field {...frame({ label, hideLabel, layout, help, error, className })} id={id}>
      <span className="field-box">
        <textarea
          rows={3}
          {...rest}
          id={id}
          required={required}
          disabled={disabled}
          aria-invalid={error ? true : undefined}
          aria-describedby={describedBy(id, { help: help !== undefined, error: Boolean(error) })}
        />
      </span>
    </Field>
  )
}

type Defined<T> = { [K in keyof T]: Exclude<T[K], undefined> }

/** Leaves out what is undefined, so that optional props stay absent. */
function frame<T extends object>(parts: T): Defined<T> {
  return Object.fromEntries(Object.entries(parts).filter(([, value]) => value !== undefined)) as Defined<T>
}
