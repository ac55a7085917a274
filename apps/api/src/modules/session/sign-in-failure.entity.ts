import { Column, Entity, Index, PrimaryGeneratedColumn } from 'typeorm'

/** A failed attempt to sign in, or a wrong PIN; successes are not kept here. */
@Entity('sign_in_failure')
@Index('sign_in_failure_by_account', ['account', 'at'])
@Index('sign_in_failure_by_address', ['address', 'at'])
export class SignInFailure {
  /** A bigint: text in JavaScript. */
  @PrimaryGeneratedColumn('identity', { type: 'bigint', generatedIdentity: 'ALWAYS' }) id!: string
  @Column('text') account!: string
  @Column('text') address!: string
  @Column('timestamptz') at!: Date
}
