import { Check, Column, Entity, PrimaryColumn, Unique } from 'typeorm'
import { ROLES, type Role } from '@bellpull/domain'
import { oneOf } from '../../platform/db/one-of.js'

/** Somebody who signs in. Suppliers are not people of the house: they get e-mail. */
@Entity('person')
@Unique('person_email_once', ['email'])
@Check('person_role_known', oneOf('role', ROLES))
@Check('person_email_lower', 'email = lower(email)')
export class Person {
  @PrimaryColumn('uuid') id!: string
  @Column('text') email!: string
  @Column('text') name!: string
  @Column('text') initials!: string
  @Column('text') role!: Role
  @Column('boolean', { default: true }) active!: boolean
  @Column('text', { name: 'password_hash', nullable: true }) passwordHash!: string | null
  @Column('text', { name: 'pin_hash', nullable: true }) pinHash!: string | null
  @Column('timestamptz', { name: 'created_at', default: () => 'now()' }) createdAt!: Date
}
