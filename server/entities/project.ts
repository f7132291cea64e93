import {
  Column,
  Entity,
  Index,
  JoinColumn,
  ManyToOne,
  OneToMany,
  PrimaryColumn,
  type Relation,
} from 'typeorm'
import { Channel } from './channel.ts'
import { Workspace } from './workspace.ts'

/** One board and its channels. */
@Entity('projects')
export class Project {
  @PrimaryColumn('text')
  id!: string

  @Index('projects_by_workspace')
  @Column('text')
  workspaceId!: string

  @Column('text')
  name!: string

  @Column('text')
  board!: string

  @Column('text')
  description!: string

  @Column('integer')
  version!: number

  @Column('text')
  createdAt!: string

  @Column('text')
  updatedAt!: string

  /** Set where it was deleted and may still be restored. */
  @Column({ type: 'text', nullable: true })
  deletedAt!: string | null

  @ManyToOne(() => Workspace, (workspace) => workspace.projects, { onDelete: 'CASCADE' })
  @JoinColumn({ name: 'workspaceId', foreignKeyConstraintName: 'projects_workspace' })
  workspace!: Relation<Workspace>

  @OneToMany(() => Channel, (channel) => channel.project)
  channels!: Relation<Channel[]>
}
