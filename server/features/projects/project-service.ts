import { type EntityManager, IsNull, Not } from 'typeorm'
import { AppError } from '#shared/errors.ts'
import { Channel } from '#server/entities/channel.ts'
import { Project } from '#server/entities/project.ts'
import { type Clock, toIso } from '#server/lib/clock.ts'
import type { Db } from '#server/lib/db.ts'
import { createId } from '#server/lib/identifier.ts'
import { notFound } from '#server/middleware/membership.ts'

/** A project and the number of channels in it. */
export interface CountedProject {
  project: Project
  channelCount: number
}

interface ProjectKey {
  workspaceId: string
  projectId: string
}

interface ProjectFields {
  name: string
  board: string
  description: string
}

/** The project, if it belongs to this workspace and was not deleted. */
export async function findProject(
  manager: EntityManager,
  { workspaceId, projectId }: ProjectKey,
): Promise<Project> {
  const project = await manager.findOneBy(Project, { id: projectId, workspaceId, deletedAt: IsNull() })
  if (!project) throw notFound()
  return project
}

async function counted(manager: EntityManager, project: Project): Promise<CountedProject> {
  const channelCount = await manager.countBy(Channel, { projectId: project.id, deletedAt: IsNull() })
  return { project, channelCount }
}

export function createProjectService(db: Db, clock: Clock) {
  return {
    /** By name. */
    async list(workspaceId: string): Promise<CountedProject[]> {
      const projects = await db.read.find(Project, {
        where: { workspaceId, deletedAt: IsNull() },
        order: { name: 'ASC', id: 'ASC' },
      })
      return Promise.all(projects.map((project) => counted(db.read, project)))
    },

    async get(key: ProjectKey): Promise<CountedProject> {
      return counted(db.read, await findProject(db.read, key))
    },

    async create(workspaceId: string, fields: ProjectFields): Promise<CountedProject> {
      const now = toIso(clock())
      return db.write(async (manager) => {
        const id = createId()
        const times = { createdAt: now, updatedAt: now, deletedAt: null }
        await manager.insert(Project, { ...fields, ...times, id, workspaceId, version: 1 })
        return { project: await findProject(manager, { workspaceId, projectId: id }), channelCount: 0 }
      })
    },

    async update(key: ProjectKey, version: number, change: Partial<ProjectFields>): Promise<CountedProject> {
      return db.write(async (manager) => {
        const { affected } = await manager.update(
          Project,
          { id: key.projectId, workspaceId: key.workspaceId, version, deletedAt: IsNull() },
          { ...change, version: version + 1, updatedAt: toIso(clock()) },
        )
        const now = await counted(manager, await findProject(manager, key))
        if (affected !== 1)
          throw new AppError(
            'stale_version',
            'Somebody changed this project meanwhile. Read it again, then change it.',
          )
        return now
      })
    },

    async remove(key: ProjectKey): Promise<void> {
      await db.write(async (manager) => {
        const project = await findProject(manager, key)
        const now = toIso(clock())
        await manager.update(Project, { id: project.id }, { deletedAt: now, version: project.version + 1 })
      })
    },

    /** Undoes `remove`; a project that was not deleted is answered as it is. */
    async restore({ workspaceId, projectId }: ProjectKey): Promise<CountedProject> {
      return db.write(async (manager) => {
        const deleted = await manager.findOneBy(Project, {
          id: projectId,
          workspaceId,
          deletedAt: Not(IsNull()),
        })
        if (deleted)
          await manager.update(Project, { id: deleted.id }, { deletedAt: null, version: deleted.version + 1 })
        return counted(manager, await findProject(manager, { workspaceId, projectId }))
      })
    },
  }
}

export type ProjectService = ReturnType<typeof createProjectService>
