import { WorkspacesAndChannels1764547200000 } from './1764547200000-workspaces-and-channels.ts'

/** Listed by hand, oldest first: the built server has no folder to look through. */
export const migrations = [WorkspacesAndChannels1764547200000]
