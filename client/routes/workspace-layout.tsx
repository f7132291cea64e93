import { Navigate, Outlet, useLocation, useParams } from 'react-router-dom'
import { NotFound } from '#client/components/not-found.tsx'
import { QueryFailure } from '#client/components/query-failure.tsx'
import { Awaited } from '#client/components/states.tsx'
import { useSession } from '#client/features/session/api.ts'
import { paths } from '#client/lib/paths.ts'

/** Lets members through. A workspace of others looks like one that does not exist. */
export function WorkspaceLayout() {
  const { data: session, error, refetch } = useSession()
  const { workspace } = useParams()
  const { pathname, search } = useLocation()
  const retry = () => void refetch()
  if (error && !session) return <QueryFailure error={error} what="Your session" onRetry={retry} />
  if (!session)
    return (
      <div className="mx-5 mt-4">
        <Awaited what="your session" onRetry={retry} />
      </div>
    )
  if (!session.user) return <Navigate to={paths.signIn(pathname + search)} replace />
  if (!session.workspaces.some((w) => w.id === workspace)) return <NotFound />
  return <Outlet />
}
