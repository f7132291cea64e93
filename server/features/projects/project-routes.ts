import { projectsApi } from '#shared/api/projects.ts'
import { type Handling, handleMember } from '#server/lib/handle.ts'
import { presentProject } from './project-presenter.ts'
import type { CountedProject, ProjectService } from './project-service.ts'

const present = ({ project, channelCount }: CountedProject) => presentProject(project, channelCount)

export function projectRoutes(handling: Handling, service: ProjectService): void {
  handleMember(handling, projectsApi.list, async ({ member }) => ({
    projects: (await service.list(member.workspaceId)).map(present),
  }))
  handleMember(handling, projectsApi.create, async ({ member, body }) =>
    present(await service.create(member.workspaceId, body)),
  )
  handleMember(handling, projectsApi.get, async ({ params }) => present(await service.get(params)))
  handleMember(handling, projectsApi.update, async ({ params, version, body }) =>
    present(await service.update(params, version, body)),
  )
  handleMember(handling, projectsApi.remove, ({ params }) => service.remove(params))
  handleMember(handling, projectsApi.restore, async ({ params }) => present(await service.restore(params)))
}
