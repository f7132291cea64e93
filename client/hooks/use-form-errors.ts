import { useState } from 'react'
import type { FieldErrors, FieldValues, Path, UseFormReturn } from 'react-hook-form'
import { ApiError, messageOf } from '#client/lib/api-client.ts'
import type { FormError } from '#client/components/error-summary.tsx'

/**
 * Errors of a form in the order of its fields, from its schema and from the server, for the summary. Fields have the
 * ids of their names.
 */
export function useFormErrors<V extends FieldValues, O>(
  form: UseFormReturn<V, unknown, O>,
  order: readonly Path<V>[],
) {
  const [attempt, setAttempt] = useState(0)
  const [general, setGeneral] = useState<string | null>(null)
  const errors: FieldErrors<V> = form.formState.errors
  const summary: FormError[] = order.flatMap((name) => {
    const message = errors[name]?.message
    return typeof message === 'string' ? [{ id: name, message }] : []
  })
  return {
    summary,
    attempt,
    /** What belongs to no field. */
    general,
    messageFor: (name: Path<V>) => {
      const message = errors[name]?.message
      return typeof message === 'string' ? message : undefined
    },
    onInvalid: () => setAttempt((n) => n + 1),
    clear: () => setGeneral(null),
    /** Puts what the server refused beside the fields that it names. */
    onRefused: (error: unknown) => {
      const fields = error instanceof ApiError ? error.fields : {}
      const named = order.filter((name) => fields[name] !== undefined)
      for (const name of named) form.setError(name, { message: fields[name] ?? '' })
      setGeneral(named.length > 0 ? null : messageOf(error))
      setAttempt((n) => n + 1)
    },
  }
}
