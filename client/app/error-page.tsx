import { isRouteErrorResponse, useRouteError } from 'react-router-dom'
import { ApiError, messageOf } from '#client/lib/api-client.ts'
import { Failure } from '#client/components/states.tsx'
import { NotFound } from '#client/components/not-found.tsx'

/** What stands in place of a page that failed. `framed`: the frame itself failed, so a way to the front is shown. */
export function ErrorPage({ framed = false }: { framed?: boolean }) {
  const error = useRouteError()
  if (isRouteErrorResponse(error) && error.status === 404) return <NotFound />
  const reference = error instanceof ApiError ? error.requestId : null
  return (
    <div className="mx-5 my-6 max-sm:mx-3">
      <Failure
        title={`This page failed: ${messageOf(error)}`}
        safe="What was saved before is safe."
        onRetry={() => window.location.reload()}
        {...(reference === null ? {} : { reference })}
        {...(framed ? { action: <a href="/">Go to the front page</a> } : {})}
      />
    </div>
  )
}
