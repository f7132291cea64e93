import type { ReactNode } from 'react'

export interface FieldFrame {
  label: ReactNode
  /** The label is read out but not shown; where the sentence around it says it. */
  hideLabel?: boolean
  /** `inline`: label before the field, for sentences. */
  layout?: 'stacked' | 'inline'
  help?: ReactNode
  error?: ReactNode
  required?: boolean
  disabled?: boolean
  className?: string
}

interface FrameProps extends FieldFrame {
  id: string
  children: ReactNode
  /** Lines under the field: how it was read, nearest values. */
  notes?: ReactNode
}

/**
 * Label, control, and what stands under it, in elements that may also stand inside a sentence; `describedBy` names the lines for assistive technology. */
export function Field({
  id,
  label,
  hideLabel,
  layout = 'stacked',
  help,
  error,
  children,
  notes,
  className,
}: FrameProps) {
  const inline = layout === 'inline'
  return (
    <span className={`block min-w-0 ${className ?? ''}`}>
      <span className={inline ? 'inline-flex items-center gap-2' : 'grid gap-1'}>
        <label htmlFor={id} className={hideLabel ? 'sr-only' : inline ? 'text-13 text-ink-2' : 'field-label'}>
          {label}
        </label>
        {help !== undefined && !inline && (
          <span id={`${id}-help`} className="field-note">
            {help}
          </span>
        )}
        {children}
      </span>
      {help !== undefined && inline && (
        <span id={`${id}-help`} className="field-note">
          {help}
        </span>
      )}
      {notes}
      {error !== undefined && error !== null && error !== '' && (
        <span id={`${id}-error`} className="mt-1 block text-12 font-value text-minium">
          {error}
        </span>
      )}
    </span>
  )
}

/** Ids of the lines that belong to a field, for `aria-describedby`. */
export function describedBy(id: string, parts: { help?: boolean; echo?: boolean; error?: boolean }) {
  const ids = (['help', 'echo', 'error'] as const)
    .filter((part) => parts[part])
    .map((part) => `${id}-${part}`)
  return ids.length > 0 ? ids.join(' ') : undefined
}
