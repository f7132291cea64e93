import { Column, Entity, OneToMany, PrimaryColumn, Unique, type Relation } from 'typeorm'
import { Membership } from './membership.ts'

/** A person with an account. */
@Entity('users')
@Unique('users_email', ['email'])
export class User {
  @PrimaryColumn('text')
  id!: string

  /** In lower case. */
  @Column('text')
  email!: string

  @Column('text')
  name!: string

  @Column('text')
  passwordHash!: string

  /** ISO 8601; an account that is closed can no longer sign in. */
  @Column({ type: 'text', nullable: true })
  disabledAt!: string | null

  @Column('text')
  createdAt!: string

  @OneToMany(() => Membership, (membership) => membership.user)
  memberships!: Relation<Membership[]>
}
