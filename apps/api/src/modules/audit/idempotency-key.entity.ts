import { Column, Entity, ForeignKey, Index, PrimaryColumn } from 'typeorm'

/** A command that was obeyed and how it was answered, so that acting twice is harmless. */
@Entity('idempotency_key')
@Index('idempotency_key_by_age', ['createdAt'])
export class IdempotencyKey {
  @ForeignKey('person', { name: 'idempotency_key_of_person' })
  @PrimaryColumn('uuid', { name: 'person_id' })
  personId!: string
  @PrimaryColumn('uuid') key!: string
  @PrimaryColumn('text') method!: string
  @PrimaryColumn('text') path!: string
  @Column('bytea', { name: 'request_hash' }) requestHash!: Buffer
  @Column('smallint') status!: number
  @Column('text') answer!: string
  @Column('timestamptz', { name: 'created_at' }) createdAt!: Date
}
