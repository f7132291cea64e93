import type { Session } from '#shared/api/session.ts'
import type { Membership } from '#server/entities/membership.ts'

interface Setting {
  isDemo: boolean
  isSignUpOpen: boolean
}

export function presentSession(
  user: Express.User | null,
  memberships: Membership[],
  setting: Setting,
): Session {
  return {
    user: user && { id: user.id, name: user.name, email: user.email },
    workspaces: memberships.map(({ workspace, roles }) => ({
      id: workspace.id,
      name: workspace.name,
      prefix: workspace.prefix,
      roles,
    })),
    demo: setting.isDemo,
    signUpOpen: setting.isSignUpOpen,
  }
}
