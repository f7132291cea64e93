import type { SignUp } from '#shared/api/session.ts'
import { AppError } from '#shared/errors.ts'
import { Membership } from '#server/entities/membership.ts'
import { User } from '#server/entities/user.ts'
import { Workspace } from '#server/entities/workspace.ts'
import { type Clock, toIso } from '#server/lib/clock.ts'
import type { Db } from '#server/lib/db.ts'
import { createId } from '#server/lib/identifier.ts'
import { hashPassword, passwordProblem } from '#server/lib/password.ts'

/** The initials of a name, for the numbers of its notes: QH for Quellmoor Hydrometry. */
export function prefixOf(name: string): string {
  const words = name
    .normalize('NFKD')
    .replace(/[^A-Za-z0-9 ]/g, '')
    .split(' ')
    .filter(Boolean)
  const initials = words.length > 1 ? words.map((word) => word[0]).join('') : (words[0] ?? '').slice(0, 3)
  return initials.slice(0, 4).toUpperCase() || 'WS'
}

export interface SessionService {
  /** Makes the account and its first workspace. */
  signUp(input: SignUp): Promise<Express.User>
  /** The workspaces that a person belongs to, by name. */
  listMemberships(userId: string): Promise<Membership[]>
}

export function createSessionService(db: Db, clock: Clock): SessionService {
  return {
    async signUp(input) {
      const email = input.email
      const problem = passwordProblem(input.password, [
        email.split('@')[0] ?? '',
        input.name,
        input.workspaceName,
      ])
      if (problem) throw new AppError('weak_password', problem, { fields: { password: problem } })
      const passwordHash = await hashPassword(input.password)
      const createdAt = toIso(clock())
      const user = { id: createId(), email, name: input.name, passwordHash, disabledAt: null, createdAt }
      const workspace = {
        id: createId(),
        name: input.workspaceName,
        prefix: prefixOf(input.workspaceName),
        createdAt,
      }
      await db.write(async (manager) => {
        if (await manager.existsBy(User, { email })) {
          const message = 'E-mail address: there is an account with this address already. Sign in instead.'
          throw new AppError('email_taken', message, { fields: { email: message } })
        }
        await manager.insert(User, user)
        await manager.insert(Workspace, workspace)
        await manager.insert(Membership, {
          workspaceId: workspace.id,
          userId: user.id,
          roles: ['owner', 'engineer'],
          createdAt,
        })
      })
      return { id: user.id, name: user.name, email }
    },

    async listMemberships(userId) {
      return db.read.find(Membership, {
        where: { userId },
        relations: { workspace: true },
        order: { workspace: { name: 'ASC' } },
      })
    },
  }
}
