import type { EntityManager } from 'typeorm'
import { Channel } from '#server/entities/channel.ts'
import { Membership } from '#server/entities/membership.ts'
import { Project } from '#server/entities/project.ts'
import { User } from '#server/entities/user.ts'
import { Workspace } from '#server/entities/workspace.ts'
import { type Clock, toIso } from '#server/lib/clock.ts'
import type { Db } from '#server/lib/db.ts'
import { hashPassword } from '#server/lib/password.ts'
import { demoAccounts, demoPassword, quellmoor, sedgeworth } from './accounts.ts'
import { demoProjects } from './projects.ts'

/**
 * Fills in the demonstration, all of it or nothing. It is made once: what people change or delete in it afterwards
 * stays as they left it.
 */
export async function seedDemo(db: Db, clock: Clock): Promise<void> {
  if (await db.read.existsBy(Workspace, { id: quellmoor.id })) return
  const createdAt = toIso(clock())
  const hashes = await Promise.all(demoAccounts.map(() => hashPassword(demoPassword)))
  await db.write(async (manager) => {
    for (const workspace of [quellmoor, sedgeworth])
      await manager.insert(Workspace, { ...workspace, createdAt })
    for (const [index, { id, email, name, memberships }] of demoAccounts.entries()) {
      await manager.insert(User, {
        id,
        email,
        name,
        passwordHash: hashes[index] ?? '',
        disabledAt: null,
        createdAt,
      })
      for (const { workspaceId, roles } of memberships)
        await manager.insert(Membership, { workspaceId, userId: id, roles, createdAt })
    }
    for (const project of demoProjects) await seedProject(manager, project, createdAt)
  })
}

async function seedProject(
  manager: EntityManager,
  { channels, authorId, ...project }: (typeof demoProjects)[number],
  now: string,
): Promise<void> {
  const fresh = { version: 1, createdAt: now, updatedAt: now, deletedAt: null }
  await manager.insert(Project, { ...project, ...fresh })
  for (const [position, { id, group, document }] of channels.entries()) {
    const place = {
      workspaceId: project.workspaceId,
      projectId: project.id,
      number: position + 1,
      position,
      group,
    }
    // The driver stores the document as JSON text; its type cannot follow the free-form notes.
    const row = { id, ...place, document, ...fresh, updatedById: authorId } as Channel
    await manager.save(Channel, manager.create(Channel, row))
  }
}
