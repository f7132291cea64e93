import { z } from 'zod'
import { idSchema } from './common.ts'
import { endpoint } from './endpoint.ts'
import { designBodySchema } from './plan.ts'

export const papers = ['A4', 'Letter'] as const
export type Paper = (typeof papers)[number]

const noteQuery = z.strictObject({ paper: z.enum(papers).default('A4') })

/** Both answer with a PDF, or with 422 and the faults where the design cannot be read. */
export const noteApi = {
  /** For a visitor: the body is the design; nothing is stored. */
  create: endpoint({
    method: 'POST',
    path: '/api/note',
    access: 'public',
    computes: true,
    query: noteQuery,
    body: designBodySchema,
    produces: 'pdf',
  }),
  /** Of a stored channel. */
  get: endpoint({
    method: 'GET',
    path: '/api/workspaces/:workspaceId/channels/:channelId/note.pdf',
    access: 'note.read',
    params: z.strictObject({ workspaceId: idSchema, channelId: idSchema }),
    query: noteQuery,
    produces: 'pdf',
  }),
}
