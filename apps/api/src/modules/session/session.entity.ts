import { Column, Entity, ForeignKey, Index, PrimaryColumn } from 'typeorm'

/** One sign-in. Every refresh token that descends from it ends with it. */
@Entity('session')
@Index('session_by_person', ['personId'], { where: 'ended_at IS NULL' })
export class Session {
  @PrimaryColumn('uuid') id!: string
  @ForeignKey('person', { name: 'session_of_person' })
  @Column('uuid', { name: 'person_id' })
  personId!: string
  @Column('timestamptz', { name: 'created_at' }) createdAt!: Date
  @Column('timestamptz', { name: 'last_seen_at' }) lastSeenAt!: Date
  @Column('timestamptz', { name: 'expires_at' }) expiresAt!: Date
  @Column('timestamptz', { name: 'ended_at', nullable: true }) endedAt!: Date | null
  @Column('text', { name: 'ended_because', nullable: true }) endedBecause!: string | null
}
