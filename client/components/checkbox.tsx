import { useId, type ReactNode } from 'react'

interface CheckboxProps {
  id?: string
  label: ReactNode
  checked: boolean
  onChange(checked: boolean): void
  disabled?: boolean
  help?: ReactNode
}

export function Checkbox({ id: givenId, label, checked, onChange, disabled, help }: CheckboxProps) {
  const ownId = useId()
  const id = givenId ?? ownId
  return (
    <div>
      <label htmlFor={id} className="inline-flex min-h-6 items-center gap-2 text-13 pointer-coarse:min-h-11">
        <input
          id={id}
          type="checkbox"
          className="size-4 accent-ink"
          checked={checked}
          disabled={disabled}
          aria-describedby={help === undefined ? undefined : `${id}-help`}
          onChange={(event) => onChange(event.target.checked)}
        />
        {label}
      </label>
      {help !== undefined && (
        <p id={`${id}-help`} className="field-note ml-6">
          {help}
        </p>
      )}
    </div>
  )
}
