import { zodResolver } from '@hookform/resolvers/zod'
import { useForm } from 'react-hook-form'
import type { z } from 'zod'
import { projectCreateSchema } from '#shared/api/projects.ts'
import { Button } from '#client/components/buttons.tsx'
import { ErrorSummary } from '#client/components/error-summary.tsx'
import { Failure } from '#client/components/states.tsx'
import { TextArea, TextField } from '#client/components/text-field.tsx'
import { useFormErrors } from '#client/hooks/use-form-errors.ts'

type Input = z.input<typeof projectCreateSchema>
type Output = z.output<typeof projectCreateSchema>

interface ProjectFormProps {
  values: Input
  submitLabel: string
  pending: boolean
  inactive?: string
  /** Rejects where the server refuses; the form then shows why. */
  onSubmit(values: Output): Promise<void>
}

export function ProjectForm({ values, submitLabel, pending, inactive, onSubmit }: ProjectFormProps) {
  const form = useForm<Input, unknown, Output>({
    resolver: zodResolver(projectCreateSchema),
    defaultValues: values,
    shouldFocusError: false,
  })
  const errors = useFormErrors(form, ['name', 'board', 'description'])
  const submit = form.handleSubmit(async (output) => {
    errors.clear()
    try {
      await onSubmit(output)
    } catch (error) {
      errors.onRefused(error)
    }
  }, errors.onInvalid)
  const disabled = inactive !== undefined
  return (
    <form noValidate onSubmit={(event) => void submit(event)} className="grid gap-4">
      <ErrorSummary errors={errors.summary} attempt={errors.attempt} />
      {errors.general && <Failure title={errors.general} />}
      <TextField
        {...form.register('name')}
        id="name"
        label="Name of the project"
        autoComplete="off"
        disabled={disabled}
        error={errors.messageFor('name')}
      />
      <TextField
        {...form.register('board')}
        id="board"
        label="Board"
        help="The board that carries the channels, with its revision. May stay empty."
        autoComplete="off"
        disabled={disabled}
        error={errors.messageFor('board')}
      />
      <TextArea
        {...form.register('description')}
        id="description"
        label="Description"
        help="May stay empty."
        disabled={disabled}
        error={errors.messageFor('description')}
      />
      <div>
        <Button
          type="submit"
          kind="primary"
          disabled={pending}
          {...(inactive === undefined ? {} : { inactive })}
        >
          {submitLabel}
        </Button>
      </div>
    </form>
  )
}
