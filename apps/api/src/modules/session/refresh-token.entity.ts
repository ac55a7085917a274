import { Column, Entity, ForeignKey, Index, PrimaryColumn } from 'typeorm'

/** Only the hash of the token is kept. */
@Entity('refresh_token')
@Index('refresh_token_by_session', ['sessionId'])
export class RefreshToken {
  @PrimaryColumn('bytea', { name: 'token_hash' }) tokenHash!: Buffer
  @ForeignKey('session', { name: 'refresh_token_of_session' })
  @Column('uuid', { name: 'session_id' })
  sessionId!: string
  @Column('timestamptz', { name: 'issued_at' }) issuedAt!: Date
  @Column('timestamptz', { name: 'expires_at' }) expiresAt!: Date
  @Column('timestamptz', { name: 'used_at', nullable: true }) usedAt!: Date | null
}
