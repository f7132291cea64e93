import { useQuery } from '@tanstack/react-query'
import { Link } from 'react-router-dom'
import type { Project } from '#shared/api/projects.ts'
import { whoMay } from '#shared/api/permissions.ts'
import { Button, ButtonLink } from '#client/components/buttons.tsx'
import { Menu, MenuItem, MenuLink, MenuRule } from '#client/components/menu.tsx'
import { PageHead } from '#client/components/page.tsx'
import { QueryFailure } from '#client/components/query-failure.tsx'
import { Awaited, Empty } from '#client/components/states.tsx'
import { Dash } from '#client/components/title-block.tsx'
import { projectsQuery, useProjectChanges } from '#client/features/projects/api.ts'
import { useMay, useWorkspace } from '#client/features/session/api.ts'
import { usePageTitle } from '#client/hooks/use-page-title.ts'
import { useRouteIds } from '#client/hooks/use-route-ids.ts'
import { notify } from '#client/lib/messages.ts'
import { paths } from '#client/lib/paths.ts'
import { dateOf, timeOf } from '#client/lib/when.ts'

export function ProjectsPage() {
  const { workspaceId } = useRouteIds()
  const workspace = useWorkspace(workspaceId)
  const mayCreate = useMay(workspaceId, 'project.create')
  const { data: projects, error, refetch } = useQuery(projectsQuery(workspaceId))
  usePageTitle('Projects', workspace?.name)
  const retry = () => void refetch()

  const start = mayCreate ? (
    <ButtonLink to={paths.newProject(workspaceId)} kind="primary">
      Start a project
    </ButtonLink>
  ) : (
    <Button kind="primary" inactive={`Starting a project takes ${whoMay('project.create')}.`}>
      Start a project
    </Button>
  )

  if (error && !projects) return <QueryFailure error={error} what="The list of projects" onRetry={retry} />
  return (
    <>
      <PageHead title="Projects" say="A project is one board with its channels." tools={start} />
      <div className="sheet mx-5 mb-6 max-sm:mx-3">
        {projects?.length === 0 ? (
          <Empty actions={start}>
            A project is one board: its channels share rails, references and converters.
          </Empty>
        ) : (
          <ProjectTable projects={projects} workspaceId={workspaceId} />
        )}
      </div>
      {!projects && (
        <div className="mx-5 max-sm:mx-3">
          <Awaited what="the list of projects" onRetry={retry} />
        </div>
      )}
    </>
  )
}

const head =
  'border-b border-frame bg-sunk px-2 py-1 text-start text-12 font-value whitespace-nowrap text-ink-2 cut-label first:pl-3.5'
const cell = 'border-t border-hair px-2 py-1.5 first:pl-3.5'

function ProjectTable({ projects, workspaceId }: { projects: Project[] | undefined; workspaceId: string }) {
  return (
    <div className="relative overflow-x-auto" role="region" aria-label="Projects" tabIndex={0}>
      <table className="w-full min-w-[36rem] border-collapse text-13">
        <thead>
          <tr>
            <th scope="col" className={head}>
              Project
            </th>
            <th scope="col" className={head}>
              Board
            </th>
            <th scope="col" className={head}>
              Channels
            </th>
            <th scope="col" className={head}>
              Last change
            </th>
            <th scope="col" className={head}>
              <span className="sr-only">Acts</span>
            </th>
          </tr>
        </thead>
        <tbody>
          {projects?.map((project) => (
            <ProjectRow key={project.id} project={project} workspaceId={workspaceId} />
          )) ??
            [0, 1, 2].map((row) => (
              <tr key={row} aria-hidden="true">
                {[9, 6, 2, 7, 2].map((width, column) => (
                  <td key={column} className={cell}>
                    <Dash width={`${width}em`} />
                  </td>
                ))}
              </tr>
            ))}
        </tbody>
      </table>
    </div>
  )
}

function ProjectRow({ project, workspaceId }: { project: Project; workspaceId: string }) {
  const mayRemove = useMay(workspaceId, 'project.remove')
  const { remove, restore } = useProjectChanges(workspaceId)
  const handleRemove = () =>
    remove.mutate(project.id, {
      onSuccess: () =>
        notify(`“${project.name}” was deleted with its channels.`, {
          action: { label: 'Undo', onAct: () => restore.mutate(project.id) },
        }),
    })
  return (
    <tr className="focus-within:bg-sunk hover:bg-sunk">
      <th scope="row" className={`${cell} text-start font-strong`}>
        <Link
          to={paths.channels(workspaceId, project.id)}
          className="inline-flex min-h-7 items-center text-14 no-underline hover:underline pointer-coarse:min-h-11"
        >
          {project.name}
        </Link>
        {project.description !== '' && (
          <span className="block max-w-prose text-12 font-text text-ink-2">{project.description}</span>
        )}
      </th>
      <td className={cell}>{project.board || <span className="text-ink-3">not named</span>}</td>
      <td className={cell}>{project.channelCount}</td>
      <td className={cell}>
        {dateOf(project.updatedAt)} <span className="text-ink-3">{timeOf(project.updatedAt)}</span>
      </td>
      <td className={`${cell} text-end`}>
        <Menu look="text" align="end" label="More" ariaLabel={`More for ${project.name}`}>
          <MenuLink to={paths.projectSettings(workspaceId, project.id)}>Settings</MenuLink>
          <MenuRule />
          <MenuItem onSelect={handleRemove} disabled={!mayRemove}>
            Delete
          </MenuItem>
        </Menu>
      </td>
    </tr>
  )
}
