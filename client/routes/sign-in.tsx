import { zodResolver } from '@hookform/resolvers/zod'
import { useForm } from 'react-hook-form'
import { Link, Navigate } from 'react-router-dom'
import type { z } from 'zod'
import { signInSchema, type SignIn } from '#shared/api/session.ts'
import { Button } from '#client/components/buttons.tsx'
import { ErrorSummary } from '#client/components/error-summary.tsx'
import { FormSheet, PageHead } from '#client/components/page.tsx'
import { Failure } from '#client/components/states.tsx'
import { TextField } from '#client/components/text-field.tsx'
import { useAfterEntry } from '#client/features/session/after-entry.ts'
import { useSession, useSignIn } from '#client/features/session/api.ts'
import { useFormErrors } from '#client/hooks/use-form-errors.ts'
import { usePageTitle } from '#client/hooks/use-page-title.ts'
import { paths } from '#client/lib/paths.ts'

export function SignInPage() {
  const { data: session } = useSession()
  const signIn = useSignIn()
  const enter = useAfterEntry()
  const form = useForm<z.input<typeof signInSchema>, unknown, SignIn>({
    resolver: zodResolver(signInSchema),
    defaultValues: { email: '', password: '' },
    shouldFocusError: false,
  })
  const errors = useFormErrors(form, ['email', 'password'])
  usePageTitle(errors.summary.length > 0 || errors.general ? 'Error: Sign in' : 'Sign in')

  if (session?.user && signIn.isIdle) return <Navigate to={paths.front} replace />

  const submit = form.handleSubmit(async (values) => {
    errors.clear()
    try {
      await enter(await signIn.mutateAsync(values))
    } catch (error) {
      errors.onRefused(error)
    }
  }, errors.onInvalid)

  return (
    <>
      <PageHead
        title="Sign in"
        say={
          session?.signUpOpen && (
            <>
              No account yet? <Link to={paths.join}>Join</Link> and keep what you plan.
            </>
          )
        }
      />
      <FormSheet>
        <form noValidate onSubmit={(event) => void submit(event)} className="grid gap-4">
          <ErrorSummary errors={errors.summary} attempt={errors.attempt} />
          {errors.general && <Failure title={errors.general} />}
          <TextField
            {...form.register('email')}
            id="email"
            label="E-mail address"
            type="email"
            autoComplete="username"
            error={errors.messageFor('email')}
          />
          <TextField
            {...form.register('password')}
            id="password"
            label="Password"
            type="password"
            autoComplete="current-password"
            error={errors.messageFor('password')}
          />
          <div>
            <Button type="submit" kind="primary" disabled={signIn.isPending}>
              {signIn.isPending ? 'Signing in' : 'Sign in'}
            </Button>
          </div>
        </form>
      </FormSheet>
    </>
  )
}
