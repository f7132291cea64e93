import { useNavigate } from 'react-router-dom'
import { whoMay } from '#shared/api/permissions.ts'
import { FormSheet, PageHead } from '#client/components/page.tsx'
import { useProjectChanges } from '#client/features/projects/api.ts'
import { ProjectForm } from '#client/features/projects/project-form.tsx'
import { useMay } from '#client/features/session/api.ts'
import { usePageTitle } from '#client/hooks/use-page-title.ts'
import { useRouteIds } from '#client/hooks/use-route-ids.ts'
import { paths } from '#client/lib/paths.ts'

export function NewProjectPage() {
  const { workspaceId } = useRouteIds()
  const { create } = useProjectChanges(workspaceId)
  const may = useMay(workspaceId, 'project.create')
  const navigate = useNavigate()
  usePageTitle('Start a project')
  return (
    <>
      <PageHead title="Start a project" say="A project is one board with its channels." />
      <FormSheet>
        <ProjectForm
          values={{ name: '', board: '', description: '' }}
          submitLabel="Start"
          pending={create.isPending}
          {...(may ? {} : { inactive: `Starting a project takes ${whoMay('project.create')}.` })}
          onSubmit={async (body) => {
            const project = await create.mutateAsync(body)
            await navigate(paths.channels(workspaceId, project.id))
          }}
        />
      </FormSheet>
    </>
  )
}
