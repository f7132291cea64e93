import { useId, type ReactNode } from 'react'
import { describedBy, Field, type FieldFrame } from './field.tsx'

export interface SelectOption<T extends string> {
  value: T
  label: string
  /** Shown but not to be chosen. */
  disabled?: boolean
}

interface SelectFieldProps<T extends string> extends FieldFrame {
  id?: string
  value: T
  options: readonly SelectOption<NoInfer<T>>[]
  onChange(value: NoInfer<T>): void
  notes?: ReactNode
}

/** The browser's own list: it works with every keyboard, reader and touch screen. */
export function SelectField<T extends string>(props: SelectFieldProps<T>) {
  const { value, options, onChange, id: givenId, required, disabled, ...frame } = props
  const ownId = useId()
  const id = givenId ?? ownId
  return (
    <Field {...frame} id={id}>
      <span className="field-box relative">
        <select
          id={id}
          value={value}
          required={required}
          disabled={disabled}
          aria-invalid={frame.error ? true : undefined}
          aria-describedby={describedBy(id, { help: frame.help !== undefined, error: Boolean(frame.error) })}
          onChange={(event) => {
            const chosen = options.find((option) => option.value === event.target.value)
            if (chosen) onChange(chosen.value)
          }}
        >
          {options.map((option) => (
            <option key={option.value} value={option.value} disabled={option.disabled}>
              {option.label}
            </option>
          ))}
        </select>
        <Chevron className="pointer-events-none absolute right-2.5" />
      </span>
    </Field>
  )
}

export function Chevron({ className }: { className?: string }) {
  return (
    <svg width="9" height="6" viewBox="0 0 9 6" aria-hidden="true" className={`flex-none ${className ?? ''}`}>
      <path d="M.5.5l4 4 4-4" fill="none" stroke="currentColor" strokeWidth="1.4" />
    </svg>
  )
}
