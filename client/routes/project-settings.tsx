import { useQuery } from '@tanstack/react-query'
import { useNavigate } from 'react-router-dom'
import { whoMay } from '#shared/api/permissions.ts'
import { Button } from '#client/components/buttons.tsx'
import { FormSheet, PageHead } from '#client/components/page.tsx'
import { projectQuery, useProjectChanges } from '#client/features/projects/api.ts'
import { ProjectForm } from '#client/features/projects/project-form.tsx'
import { useMay } from '#client/features/session/api.ts'
import { usePageTitle } from '#client/hooks/use-page-title.ts'
import { useRouteIds } from '#client/hooks/use-route-ids.ts'
import { notify } from '#client/lib/messages.ts'
import { paths } from '#client/lib/paths.ts'

/** The project itself is loaded, and its failure shown, by the layout around this page. */
export function ProjectSettingsPage() {
  const { workspaceId, projectId } = useRouteIds()
  const { data: project } = useQuery(projectQuery(workspaceId, projectId))
  const { update, remove, restore } = useProjectChanges(workspaceId)
  const mayUpdate = useMay(workspaceId, 'project.update')
  const mayRemove = useMay(workspaceId, 'project.remove')
  const navigate = useNavigate()
  usePageTitle('Settings', project?.name)
  if (!project) return null

  const handleRemove = async () => {
    await remove.mutateAsync(projectId)
    await navigate(paths.projects(workspaceId))
    notify(`“${project.name}” was deleted with its channels.`, {
      action: { label: 'Undo', onAct: () => restore.mutate(projectId) },
    })
  }

  return (
    <>
      <PageHead title="Settings" />
      <FormSheet>
        <ProjectForm
          key={project.version}
          values={{ name: project.name, board: project.board, description: project.description }}
          submitLabel="Save"
          pending={update.isPending}
          {...(mayUpdate ? {} : { inactive: `Changing a project takes ${whoMay('project.update')}.` })}
          onSubmit={async (body) => {
            await update.mutateAsync({ projectId, version: project.version, body })
            notify('The project was saved.')
          }}
        />
        <div className="mt-6 border-t border-frame pt-4">
          <h2>Delete</h2>
          <p className="mt-1 mb-3 text-14 text-ink-2">
            The project goes with its channels. It can be undone at once.
          </p>
          <Button
            kind="danger"
            onClick={() => void handleRemove()}
            {...(mayRemove ? {} : { inactive: `Deleting a project takes ${whoMay('project.remove')}.` })}
          >
            Delete the project
          </Button>
        </div>
      </FormSheet>
    </>
  )
}
