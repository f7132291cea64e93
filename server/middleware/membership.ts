import { isAllowed, whoMay, type Action, type Role } from '#shared/api/permissions.ts'
import { AppError } from '#shared/errors.ts'
import { Membership } from '#server/entities/membership.ts'
import type { Db } from '#server/lib/db.ts'

/** Somebody who is signed in and belongs to the workspace of the path. */
export interface Member {
  user: Express.User
  workspaceId: string
  workspaceName: string
  roles: Role[]
}

export const notFound = (): AppError =>
  new AppError('not_found', 'There is nothing at this address, or it is not yours to see.')

/** Roles are read with every request, so that a change of role acts at once. */
export async function findMember(
  db: Db,
  user: Express.User | undefined,
  workspaceId: string | undefined,
): Promise<Member> {
  if (!user) throw new AppError('not_signed_in', 'Sign in to go on.')
  if (workspaceId === undefined) throw notFound()
  const membership = await db.read.findOne(Membership, {
    where: { workspaceId, userId: user.id },
    relations: { workspace: true },
  })
  if (!membership) throw notFound()
  return { user, workspaceId, workspaceName: membership.workspace.name, roles: membership.roles }
}

/** A stranger was told "not found" before; a member is told who may. */
export function requireAllowed(member: Member, action: Action): void {
  if (!isAllowed(member.roles, action))
    throw new AppError(
      'forbidden',
      `Your role in this workspace does not allow this. It needs ${whoMay(action)}.`,
    )
}
