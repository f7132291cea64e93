import { Link, useLocation } from 'react-router-dom'
import { ApiError, messageOf } from '#client/lib/api-client.ts'
import { paths } from '#client/lib/paths.ts'
import { NoPermission, NotFound } from './not-found.tsx'
import { Failure } from './states.tsx'

/** What stands in place of data that could not be had; chosen by the error's code. */
export function QueryFailure({
  error,
  what,
  onRetry,
}: {
  error: unknown
  what: string
  onRetry: () => void
}) {
  const { pathname } = useLocation()
  const code = error instanceof ApiError ? error.code : null
  if (code === 'not_found') return <NotFound />
  if (code === 'forbidden') return <NoPermission what={what} who="another role" />
  const reference = error instanceof ApiError ? error.requestId : null
  return (
    <div className="mx-5 max-sm:mx-3">
      <Failure
        title={`${what} could not be loaded: ${messageOf(error)}`}
        safe="What was saved before is safe."
        onRetry={onRetry}
        {...(code === 'not_signed_in' ? { action: <Link to={paths.signIn(pathname)}>Sign in</Link> } : {})}
        {...(reference === null ? {} : { reference })}
      />
    </div>
  )
}
