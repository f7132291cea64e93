import { z } from 'zod'
import { idSchema, lineOfText, textBlock, timeSchema, versionSchema } from './common.ts'
import { endpoint } from './endpoint.ts'

const projectKeys = {
  name: lineOfText('Name of the project', { max: 80 }),
  /** The board that carries its channels. */
  board: lineOfText('Board', { min: 0, max: 80 }),
  description: textBlock('Description', { max: 2000 }),
}

export const projectCreateSchema = z.strictObject({
  name: projectKeys.name,
  board: projectKeys.board.default(''),
  description: projectKeys.description.default(''),
})

/** What is left out stays as it is. */
export const projectUpdateSchema = z
  .strictObject({
    name: projectKeys.name.optional(),
    board: projectKeys.board.optional(),
    description: projectKeys.description.optional(),
  })
  .refine((change) => Object.keys(change).length > 0, 'Give at least one of name, board, description.')

export const projectSchema = z.object({
  id: idSchema,
  name: z.string(),
  board: z.string(),
  description: z.string(),
  version: versionSchema,
  channelCount: z.number().int(),
  createdAt: timeSchema,
  updatedAt: timeSchema,
})
export type Project = z.output<typeof projectSchema>

const inWorkspace = z.strictObject({ workspaceId: idSchema })
const oneProject = z.strictObject({ workspaceId: idSchema, projectId: idSchema })
const collection = '/api/workspaces/:workspaceId/projects'
const item = `${collection}/:projectId`

export const projectsApi = {
  list: endpoint({
    method: 'GET',
    path: collection,
    access: 'project.read',
    params: inWorkspace,
    response: z.object({ projects: z.array(projectSchema) }),
  }),
  create: endpoint({
    method: 'POST',
    path: collection,
    access: 'project.create',
    params: inWorkspace,
    body: projectCreateSchema,
    response: projectSchema,
    status: 201,
  }),
  get: endpoint({
    method: 'GET',
    path: item,
    access: 'project.read',
    params: oneProject,
    response: projectSchema,
  }),
  update: endpoint({
    method: 'PATCH',
    path: item,
    access: 'project.update',
    params: oneProject,
    body: projectUpdateSchema,
    response: projectSchema,
    versioned: true,
  }),
  /** Can be undone with `restore`; the channels go and come back with it. */
  remove: endpoint({ method: 'DELETE', path: item, access: 'project.remove', params: oneProject }),
  restore: endpoint({
    method: 'POST',
    path: `${item}/restore`,
    access: 'project.remove',
    params: oneProject,
    response: projectSchema,
  }),
}
