import { Check, Column, Entity, ForeignKey, Index, PrimaryColumn } from 'typeorm'
import { CALL_KINDS, type CallKind } from '@bellpull/domain'
import { oneOf } from '../../platform/db/one-of.js'

/** One announcement for a case. */
@Entity('call')
@Check('call_kind_known', oneOf('kind', CALL_KINDS))
@Check('call_standby_has_no_time', `(kind = 'standby') = (needed_at IS NULL)`)
@Check('call_read_back_whole', '(read_back_by IS NULL) = (read_back_at IS NULL)')
@Check('call_read_back_by_another', 'read_back_by <> called_by')
@Check('call_confirmed_has_time', `(kind = 'confirmed') = (confirmed_at IS NOT NULL)`)
@Check('call_version_positive', 'version > 0')
@Index('call_open', ['roomId'], { where: 'open' })
@Index('call_by_case', ['caseId'])
export class Call {
  @PrimaryColumn('uuid') id!: string
  @ForeignKey('surgical_case', { name: 'call_of_case' })
  @Column('uuid', { name: 'case_id' })
  caseId!: string
  @ForeignKey('room', { name: 'call_in_room' })
  @Column('uuid', { name: 'room_id' })
  roomId!: string
  @Column('text') kind!: CallKind
  @Column('timestamptz', { name: 'needed_at', nullable: true }) neededAt!: Date | null
  @Column('timestamptz', { name: 'called_at' }) calledAt!: Date
  @ForeignKey('person', { name: 'call_called_by' })
  @Column('uuid', { name: 'called_by' })
  calledBy!: string
  @ForeignKey('person', { name: 'call_entered_by' })
  @Column('uuid', { name: 'entered_by' })
  enteredBy!: string
  @ForeignKey('person', { name: 'call_read_back_by' })
  @Column('uuid', { name: 'read_back_by', nullable: true })
  readBackBy!: string | null
  @Column('timestamptz', { name: 'read_back_at', nullable: true }) readBackAt!: Date | null
  @Column('timestamptz', { name: 'confirmed_at', nullable: true }) confirmedAt!: Date | null
  /** Something is left to do: an item without outcome, or a package to put back. */
  @Column('boolean', { default: true }) open!: boolean
  /** Revision of the room at the last change of this call. */
  @Column('integer') revision!: number
  @Column('integer', { default: 1 }) version!: number
}
