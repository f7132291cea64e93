import { z } from 'zod'
import type { DesignDocument } from '#shared/design/schema.ts'
import { idSchema, lineOfText, personSchema, timeSchema, versionSchema } from './common.ts'
import { draftDocumentSchema } from './draft-document.ts'
import { endpoint } from './endpoint.ts'

export const channelsPerProject = 64

/** Where the channel sits, or what it belongs to; channels are listed by it. */
const group = lineOfText('Location or group', { min: 0, max: 60 })
const name = lineOfText('Name of the channel', { max: 120 })
/** 3 in CH 03. */
const number = z.number().int().min(1).max(999)

/** `number` left out: the lowest free one. */
export const channelCreateSchema = z.strictObject({
  document: draftDocumentSchema,
  group: group.default(''),
  number: number.optional(),
})

export const channelSaveSchema = z.strictObject({ document: draftDocumentSchema })

/** What is left out stays as it is. A new name is written into the document as well. */
export const channelUpdateSchema = z
  .strictObject({ name: name.optional(), group: group.optional(), number: number.optional() })
  .refine((change) => Object.keys(change).length > 0, 'Give at least one of name, group, number.')

export const channelCopySchema = z.strictObject({ name: name.optional() })

/** Every channel of the project, in its new order. */
export const channelOrderSchema = z.strictObject({ order: z.array(idSchema).max(channelsPerProject) })

export const channelSchema = z.object({
  id: idSchema,
  number: z.number().int(),
  /** Place in the list, from 0. */
  position: z.number().int(),
  group: z.string(),
  /** The document's name. */
  name: z.string(),
  /** May lack required keys while it is being filled in: read it with `readDesign` before planning. */
  document: z.custom<DesignDocument>((value) => typeof value === 'object' && value !== null),
  version: versionSchema,
  createdAt: timeSchema,
  updatedAt: timeSchema,
  updatedBy: personSchema.nullable(),
})
export type Channel = z.output<typeof channelSchema>

/** What comes beside the error of a stale version (412): the channel as it stands now. */
export const staleChannelSchema = z.object({ current: channelSchema })

const inProject = z.strictObject({ workspaceId: idSchema, projectId: idSchema })
const oneChannel = z.strictObject({ workspaceId: idSchema, projectId: idSchema, channelId: idSchema })
const collection = '/api/workspaces/:workspaceId/projects/:projectId/channels'
const item = `${collection}/:channelId`

export const channelsApi = {
  list: endpoint({
    method: 'GET',
    path: collection,
    access: 'channel.read',
    params: inProject,
    response: z.object({ channels: z.array(channelSchema) }),
  }),
  create: endpoint({
    method: 'POST',
    path: collection,
    access: 'channel.create',
    params: inProject,
    body: channelCreateSchema,
    response: channelSchema,
    status: 201,
  }),
  /** Puts the list in another order; 409 where a channel came or went meanwhile. */
  order: endpoint({
    method: 'PUT',
    path: `/api/workspaces/:workspaceId/projects/:projectId/channel-order`,
    access: 'channel.update',
    params: inProject,
    body: channelOrderSchema,
    response: z.object({ channels: z.array(channelSchema) }),
  }),
  get: endpoint({
    method: 'GET',
    path: item,
    access: 'channel.read',
    params: oneChannel,
    response: channelSchema,
  }),
  /** Autosave of the draft. 428 without `If-Match`, 412 with `current` when somebody else saved first. */
  save: endpoint({
    method: 'PUT',
    path: item,
    access: 'channel.update',
    params: oneChannel,
    body: channelSaveSchema,
    response: channelSchema,
    versioned: true,
  }),
  /** Name, group, number. */
  update: endpoint({
    method: 'PATCH',
    path: item,
    access: 'channel.update',
    params: oneChannel,
    body: channelUpdateSchema,
    response: channelSchema,
    versioned: true,
  }),
  /** The copy follows its original in the list, under the lowest free number. */
  copy: endpoint({
    method: 'POST',
    path: `${item}/copy`,
    access: 'channel.create',
    params: oneChannel,
    body: channelCopySchema,
    response: channelSchema,
    status: 201,
  }),
  /** Can be undone with `restore`. */
  remove: endpoint({ method: 'DELETE', path: item, access: 'channel.remove', params: oneChannel }),
  restore: endpoint({
    method: 'POST',
    path: `${item}/restore`,
    access: 'channel.remove',
    params: oneChannel,
    response: channelSchema,
  }),
}
