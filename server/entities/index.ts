import { Channel } from './channel.ts'
import { Membership } from './membership.ts'
import { Project } from './project.ts'
import { User } from './user.ts'
import { Workspace } from './workspace.ts'

export const entities = [User, Workspace, Membership, Project, Channel]
