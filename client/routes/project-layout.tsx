import { useQuery } from '@tanstack/react-query'
import { Link, Outlet } from 'react-router-dom'
import { QueryFailure } from '#client/components/query-failure.tsx'
import { Awaited } from '#client/components/states.tsx'
import { TitleBlock } from '#client/components/title-block.tsx'
import { boardFacts } from '#client/features/channels/board-facts.ts'
import { channelsQuery } from '#client/features/channels/api.ts'
import { projectQuery } from '#client/features/projects/api.ts'
import { useRouteIds } from '#client/hooks/use-route-ids.ts'
import { paths } from '#client/lib/paths.ts'
import { usePreferences } from '#client/lib/preferences.ts'

/** Title block of a board; its pages stand under it. */
export function ProjectLayout() {
  const { workspaceId, projectId } = useRouteIds()
  const { decimalSign = '.' } = usePreferences()
  const { data: project, error, refetch } = useQuery(projectQuery(workspaceId, projectId))
  const { data: channels } = useQuery(channelsQuery(workspaceId, projectId))
  const retry = () => void refetch()
  if (error && !project) return <QueryFailure error={error} what="The project" onRetry={retry} />
  const facts = channels ? boardFacts(channels, decimalSign) : null
  return (
    <>
      <TitleBlock
        cells={[
          {
            label: 'Project',
            value: project && (
              <Link to={paths.channels(workspaceId, projectId)} className="no-underline hover:underline">
                {project.name}
              </Link>
            ),
          },
          { label: 'Board', value: project && (project.board || 'not named') },
          { label: 'Converters', value: facts?.converters ?? null },
          { label: 'Supply', value: facts?.supply ?? null },
          { label: 'Channels', value: channels ? String(channels.length) : null },
          { label: 'Released', value: channels ? `0 of ${channels.length}` : null },
          { label: 'Least room kept', value: facts?.rule ?? null },
          { label: 'Last change', value: facts?.lastChange ?? null },
        ]}
      />
      {project ? (
        <Outlet />
      ) : (
        <div className="mx-5 mt-4 max-sm:mx-3">
          <Awaited what="the project" onRetry={retry} />
        </div>
      )}
    </>
  )
}
