import { Column, Entity, OneToMany, PrimaryColumn, type Relation } from 'typeorm'
import { Membership } from './membership.ts'
import { Project } from './project.ts'

/** What belongs together and is kept apart from everybody else's. */
@Entity('workspaces')
export class Workspace {
  @PrimaryColumn('text')
  id!: string

  @Column('text')
  name!: string

  /** Begins the numbers of its notes. */
  @Column('text')
  prefix!: string

  @Column('text')
  createdAt!: string

  @OneToMany(() => Membership, (membership) => membership.workspace)
  memberships!: Relation<Membership[]>

  @OneToMany(() => Project, (project) => project.workspace)
  projects!: Relation<Project[]>
}
