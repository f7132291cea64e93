/** Addresses of the pages, in one place. */
export const paths = {
  front: '/',
  visitorPlan: (step: string) => `/plan/${step}`,
  signIn: (next?: string) => `/sign-in${next ? `?next=${encodeURIComponent(next)}` : ''}`,
  join: '/join',
  help: '/help',
  keys: '/help/keys',
  preferences: '/account/units',
  workspace: (workspaceId: string) => `/w/${workspaceId}`,
  projects: (workspaceId: string) => `/w/${workspaceId}/projects`,
  newProject: (workspaceId: string) => `/w/${workspaceId}/projects/new`,
  project: (workspaceId: string, projectId: string) => `/w/${workspaceId}/projects/${projectId}`,
  channels: (workspaceId: string, projectId: string) => `/w/${workspaceId}/projects/${projectId}/channels`,
  newChannel: (workspaceId: string, projectId: string) =>
    `/w/${workspaceId}/projects/${projectId}/channels/new`,
  projectSettings: (workspaceId: string, projectId: string) =>
    `/w/${workspaceId}/projects/${projectId}/settings`,
  channelPlan: (workspaceId: string, projectId: string, channelId: string, step = 'measurand') =>
    `/w/${workspaceId}/projects/${projectId}/channels/${channelId}/plan/${step}`,
} as const

/** A path inside this application, or null: what comes in an address must not lead elsewhere. */
export function safeNext(next: string | null): string | null {
  return next !== null && /^\/(?![/\\])/.test(next) ? next : null
}
