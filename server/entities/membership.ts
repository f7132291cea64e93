import { Column, Entity, Index, JoinColumn, ManyToOne, PrimaryColumn, type Relation } from 'typeorm'
import type { Role } from '#shared/api/permissions.ts'
import { User } from './user.ts'
import { Workspace } from './workspace.ts'

/** A person's roles in one workspace. */
@Entity('memberships')
export class Membership {
  @PrimaryColumn('text')
  workspaceId!: string

  @Index('memberships_by_user')
  @PrimaryColumn('text')
  userId!: string

  @Column('simple-json')
  roles!: Role[]

  @Column('text')
  createdAt!: string

  @ManyToOne(() => Workspace, (workspace) => workspace.memberships, { onDelete: 'CASCADE' })
  @JoinColumn({ name: 'workspaceId', foreignKeyConstraintName: 'memberships_workspace' })
  workspace!: Relation<Workspace>

  @ManyToOne(() => User, (user) => user.memberships, { onDelete: 'CASCADE' })
  @JoinColumn({ name: 'userId', foreignKeyConstraintName: 'memberships_user' })
  user!: Relation<User>
}
