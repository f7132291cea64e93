import type { Role } from '#shared/api/permissions.ts'
import type { Channel } from '#shared/api/channels.ts'
import type { Project } from '#shared/api/projects.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import { Membership } from '#server/entities/membership.ts'
import { User } from '#server/entities/user.ts'
import { Workspace } from '#server/entities/workspace.ts'
import { createId } from '#server/lib/identifier.ts'
import { hashPassword } from '#server/lib/password.ts'
import type { Browser, TestServer } from './test-server.ts'

export const password = 'kelp forest lantern'
const passwordHash = hashPassword(password)

const now = '2026-01-02T03:04:05.000Z'

export async function buildWorkspace(server: TestServer, name = 'Upper Weir'): Promise<string> {
  const id = createId()
  await server.db.write((manager) => manager.insert(Workspace, { id, name, prefix: 'UW', createdAt: now }))
  return id
}

/** An account, without a workspace. */
export async function buildUser(
  server: TestServer,
  name = 'Somebody',
): Promise<{ id: string; email: string }> {
  const id = createId()
  const email = `${id}@upper-weir.example`
  const user = { id, email, name, passwordHash: await passwordHash, disabledAt: null, createdAt: now }
  await server.db.write((manager) => manager.insert(User, user))
  return { id, email }
}

export async function addMember(
  server: TestServer,
  workspaceId: string,
  userId: string,
  roles: Role[],
): Promise<void> {
  await server.db.write((manager) =>
    manager.insert(Membership, { workspaceId, userId, roles, createdAt: now }),
  )
}

export async function signIn(server: TestServer, email: string): Promise<Browser> {
  const browser = server.browser()
  await browser.post('/api/session').send({ email, password }).expect(200)
  return browser
}

/** Somebody with these roles in the workspace, signed in. */
export async function buildMember(
  server: TestServer,
  workspaceId: string,
  roles: Role[],
  name = 'Somebody',
): Promise<{ id: string; email: string; browser: Browser }> {
  const user = await buildUser(server, name)
  await addMember(server, workspaceId, user.id, roles)
  return { ...user, browser: await signIn(server, user.email) }
}

export async function buildProject(
  browser: Browser,
  workspaceId: string,
  name = 'Lower weir',
): Promise<Project> {
  const { body } = await browser.post(`/api/workspaces/${workspaceId}/projects`).send({ name }).expect(201)
  return body as Project
}

export const channelsOf = (project: { id: string }, workspaceId: string): string =>
  `/api/workspaces/${workspaceId}/projects/${project.id}/channels`

export async function buildChannel(
  browser: Browser,
  collection: string,
  name = 'Water level',
): Promise<Channel> {
  const { body } = await browser
    .post(collection)
    .send({ document: buildDesign(name) })
    .expect(201)
  return body as Channel
}

/** ±0.35 V into 0 to 2.5 V, 14 bits, one 5 V rail. */
export function buildDesign(name = 'Cross current'): DesignDocument {
  return {
    format: 'spandrel-design/1',
    name,
    sensor: {
      kind: 'voltage',
      quantity: { name: 'Velocity', unit: 'm/s', low: -0.7, high: 0.7 },
      output: { low: -0.35, high: 0.35 },
      sourceResistance: 100,
    },
    converter: { input: { low: 0, high: 2.5 }, bits: 14, reference: { voltage: 2.5 } },
    rails: { positive: 5 },
    shiftReference: { same: 'converter' },
  }
}
