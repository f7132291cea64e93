import { zodResolver } from '@hookform/resolvers/zod'
import { useState } from 'react'
import { useForm } from 'react-hook-form'
import { Link, Navigate } from 'react-router-dom'
import type { z } from 'zod'
import { passwordMinimum, signUpSchema, type SignUp } from '#shared/api/session.ts'
import { Button } from '#client/components/buttons.tsx'
import { ErrorSummary } from '#client/components/error-summary.tsx'
import { FormSheet, PageHead } from '#client/components/page.tsx'
import { Failure } from '#client/components/states.tsx'
import { TextField } from '#client/components/text-field.tsx'
import { useAfterEntry } from '#client/features/session/after-entry.ts'
import { useSession, useSignUp } from '#client/features/session/api.ts'
import { useFormErrors } from '#client/hooks/use-form-errors.ts'
import { usePageTitle } from '#client/hooks/use-page-title.ts'
import { paths } from '#client/lib/paths.ts'
import { readVisitorWork } from '#client/lib/visitor-work.ts'

export function JoinPage() {
  const { data: session } = useSession()
  const signUp = useSignUp()
  const enter = useAfterEntry()
  const [work] = useState(() => readVisitorWork(localStorage))
  const form = useForm<z.input<typeof signUpSchema>, unknown, SignUp>({
    resolver: zodResolver(signUpSchema),
    defaultValues: { name: '', email: '', password: '', workspaceName: '' },
    shouldFocusError: false,
  })
  const errors = useFormErrors(form, ['name', 'email', 'password', 'workspaceName'])
  usePageTitle(errors.summary.length > 0 || errors.general ? 'Error: Join' : 'Join')

  if (session?.user && signUp.isIdle) return <Navigate to={paths.front} replace />
  if (session && !session.signUpOpen)
    return (
      <PageHead
        title="Join"
        say="Accounts on this server are made by invitation. Ask an owner of a workspace."
      />
    )

  const submit = form.handleSubmit(async (values) => {
    errors.clear()
    try {
      await enter(await signUp.mutateAsync(values))
    } catch (error) {
      errors.onRefused(error)
    }
  }, errors.onInvalid)

  return (
    <>
      <PageHead
        title="Join"
        say={
          <>
            Makes your account and a workspace that you own. Have one already?{' '}
            <Link to={paths.signIn()}>Sign in</Link>.
          </>
        }
      />
      <FormSheet>
        <form noValidate onSubmit={(event) => void submit(event)} className="grid gap-4">
          <ErrorSummary errors={errors.summary} attempt={errors.attempt} />
          {errors.general && <Failure title={errors.general} safe="Nothing was stored." />}
          {work && (
            <p className="border-l-4 border-verdigris py-0.5 pl-3 text-14">
              “{work.document.name}” from this browser moves into the new workspace.
            </p>
          )}
          <TextField
            {...form.register('name')}
            id="name"
            label="Your name"
            help="As it stands in title blocks and on signatures."
            autoComplete="name"
            error={errors.messageFor('name')}
          />
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
            help={`At least ${passwordMinimum} characters. Spaces count; no other rule.`}
            type="password"
            autoComplete="new-password"
            error={errors.messageFor('password')}
          />
          <TextField
            {...form.register('workspaceName')}
            id="workspaceName"
            label="Name of the workspace"
            help="Your firm or group, as it stands on design notes."
            autoComplete="organization"
            error={errors.messageFor('workspaceName')}
          />
          <div>
            <Button type="submit" kind="primary" disabled={signUp.isPending}>
              {signUp.isPending ? 'Making the account' : 'Join'}
            </Button>
          </div>
        </form>
      </FormSheet>
    </>
  )
}
