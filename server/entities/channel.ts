import { Column, Entity, Index, JoinColumn, ManyToOne, PrimaryColumn, type Relation } from 'typeorm'
import type { DesignDocument } from '#shared/design/schema.ts'
import { Project } from './project.ts'
import { User } from './user.ts'
import { Workspace } from './workspace.ts'

/** One signal path and the draft of its design. */
@Entity('channels')
@Index('channels_by_project', ['projectId', 'position'])
@Index('channels_number', ['projectId', 'number'], { unique: true, where: '"deletedAt" IS NULL' })
export class Channel {
  @PrimaryColumn('text')
  id!: string

  @Index('channels_by_workspace')
  @Column('text')
  workspaceId!: string

  @Column('text')
  projectId!: string

  /** 3 in CH 03. */
  @Column('integer')
  number!: number

  /** Place in the list. */
  @Column('integer')
  position!: number

  @Column('text')
  group!: string

  /** As it was sent; defaults are put in when it is planned. */
  @Column('simple-json')
  document!: DesignDocument

  @Column('integer')
  version!: number

  @Column('text')
  createdAt!: string

  @Column('text')
  updatedAt!: string

  @Column({ type: 'text', nullable: true })
  updatedById!: string | null

  /** Set where it was deleted and may still be restored. */
  @Column({ type: 'text', nullable: true })
  deletedAt!: string | null

  @ManyToOne(() => Workspace, { onDelete: 'CASCADE' })
  @JoinColumn({ name: 'workspaceId', foreignKeyConstraintName: 'channels_workspace' })
  workspace!: Relation<Workspace>

  @ManyToOne(() => Project, (project) => project.channels, { onDelete: 'CASCADE' })
  @JoinColumn({ name: 'projectId', foreignKeyConstraintName: 'channels_project' })
  project!: Relation<Project>

  @ManyToOne(() => User, { onDelete: 'SET NULL', nullable: true })
  @JoinColumn({ name: 'updatedById', foreignKeyConstraintName: 'channels_updated_by' })
  updatedBy!: Relation<User> | null
}
