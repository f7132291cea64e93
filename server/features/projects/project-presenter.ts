import type { Project as ProjectAnswer } from '#shared/api/projects.ts'
import type { Project } from '#server/entities/project.ts'

export function presentProject(project: Project, channelCount: number): ProjectAnswer {
  return {
    id: project.id,
    name: project.name,
    board: project.board,
    description: project.description,
    version: project.version,
    channelCount,
    createdAt: project.createdAt,
    updatedAt: project.updatedAt,
  }
}
