/**
 * Who may do what inside a workspace. The server refuses by this table and the client hides by it; a test walks every
 * route with every role against it. A person can hold several roles: one that allows is enough.
 */
export const roles = ['owner', 'engineer', 'reviewer', 'technician', 'reader', 'client'] as const
export type Role = (typeof roles)[number]

const readers = ['owner', 'engineer', 'reviewer', 'technician', 'reader'] as const satisfies readonly Role[]

export const permissions = {
  'project.read': readers,
  'project.create': ['owner', 'engineer'],
  'project.update': ['owner', 'engineer'],
  'project.remove': ['owner', 'engineer'],
  'channel.read': readers,
  'channel.create': ['engineer'],
  'channel.update': ['engineer'],
  'channel.remove': ['engineer'],
  'note.read': readers,
} as const satisfies Record<string, readonly Role[]>

export type Action = keyof typeof permissions

export const actions = Object.keys(permissions) as Action[]

/** May somebody who holds these roles in a workspace do this there? */
export function isAllowed(held: readonly Role[], action: Action): boolean {
  const allowing: readonly Role[] = permissions[action]
  return held.some((role) => allowing.includes(role))
}

/** The roles that may, in words for a refusal: "an engineer or an owner". */
export function whoMay(action: Action): string {
  const names = permissions[action].map((role) => `${/^[aeiou]/.test(role) ? 'an' : 'a'} ${role}`)
  return names.length < 2 ? names.join('') : `${names.slice(0, -1).join(', ')} or ${names.at(-1)}`
}
