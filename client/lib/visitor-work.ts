import { z } from 'zod'
import { channelsApi, type Channel } from '#shared/api/channels.ts'
import { isAllowed } from '#shared/api/permissions.ts'
import { projectsApi } from '#shared/api/projects.ts'
import type { Session } from '#shared/api/session.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import { call } from './api-client.ts'

/** A plan that a visitor made in this browser, before there was an account to keep it. */
const KEY = 'spandrel.visitor'

const workSchema = z.object({
  version: z.literal(1),
  document: z.custom<DesignDocument>(
    (value) =>
      typeof value === 'object' && value !== null && 'name' in value && typeof value.name === 'string',
  ),
  savedAt: z.string(),
})
export type VisitorWork = z.output<typeof workSchema>

type Keeper = Pick<Storage, 'getItem' | 'removeItem'>

/** The visitor's plan, or null where there is none that can be read. */
export function readVisitorWork(storage: Keeper): VisitorWork | null {
  try {
    const parsed = workSchema.safeParse(JSON.parse(storage.getItem(KEY) ?? 'null'))
    return parsed.success ? parsed.data : null
  } catch {
    return null
  }
}

/** Project that takes plans from a browser; made when it is first needed. */
const PROJECT = 'From this browser'

export type MoveResult =
  | { kind: 'none' }
  | { kind: 'moved'; workspaceId: string; projectId: string; channel: Channel }
  /** The person may add channels nowhere: the plan stays in the browser. */
  | { kind: 'nowhere' }

/**
 * Moves the visitor's plan into the first workspace where the person may add channels. The browser's copy goes only
 * once the server has it. Rejects with `ApiError`; the plan then still is in the browser.
 */
export async function moveVisitorWork(session: Session, storage: Keeper): Promise<MoveResult> {
  const work = readVisitorWork(storage)
  if (!work) return { kind: 'none' }
  const workspace = session.workspaces.find(
    (w) => isAllowed(w.roles, 'channel.create') && isAllowed(w.roles, 'project.create'),
  )
  if (!workspace) return { kind: 'nowhere' }
  const params = { workspaceId: workspace.id }
  const { projects } = await call(projectsApi.list, { params })
  const project =
    projects.find((p) => p.name === PROJECT) ??
    (await call(projectsApi.create, { params, body: { name: PROJECT } }))
  const channel = await call(channelsApi.create, {
    params: { ...params, projectId: project.id },
    body: { document: work.document },
  })
  storage.removeItem(KEY)
  return { kind: 'moved', workspaceId: workspace.id, projectId: project.id, channel }
}
