import { Check, Column, Entity, ForeignKey, Index, PrimaryColumn, Unique } from 'typeorm'
import type { CaseSide } from '@bellpull/domain'
import { oneOf } from '../../platform/db/one-of.js'

export const CASE_STATUSES = ['planned', 'inProgress', 'closed', 'cancelled'] as const

/** One operation on one side. Both sides on one day are two linked cases. */
@Entity('surgical_case')
@Unique('surgical_case_number_once', ['caseNumber'])
@Check('surgical_case_status_known', oneOf('status', CASE_STATUSES))
@Check('surgical_case_side_known', oneOf('side', ['left', 'right']))
@Check('surgical_case_closed_has_time', `(status = 'closed') = (closed_at IS NOT NULL)`)
@Check('surgical_case_started_has_time', `status <> 'inProgress' OR started_at IS NOT NULL`)
@Check('surgical_case_version_positive', 'version > 0')
@Index('surgical_case_by_day', ['startsAt', 'roomId'])
export class SurgicalCase {
  @PrimaryColumn('uuid') id!: string
  @Column('text', { name: 'case_number' }) caseNumber!: string
  @ForeignKey('room', { name: 'surgical_case_in_room' })
  @Column('uuid', { name: 'room_id' })
  roomId!: string
  @Column('timestamptz', { name: 'starts_at' }) startsAt!: Date
  @Column('text') status!: (typeof CASE_STATUSES)[number]
  @Column('text', { name: 'procedure_kind' }) procedureKind!: string
  /** Holds the joint: "Shoulder, anatomic total". */
  @Column('text', { name: 'procedure_label' }) procedureLabel!: string
  @Column('text') side!: CaseSide
  @ForeignKey('person', { name: 'surgical_case_of_surgeon' })
  @Column('uuid', { name: 'surgeon_id' })
  surgeonId!: string
  @ForeignKey('surgical_case', { name: 'surgical_case_linked' })
  @Column('uuid', { name: 'linked_case_id', nullable: true })
  linkedCaseId!: string | null
  @Column('timestamptz', { name: 'started_at', nullable: true }) startedAt!: Date | null
  @Column('timestamptz', { name: 'time_out_at', nullable: true }) timeOutAt!: Date | null
  @Column('timestamptz', { name: 'time_out_ended_at', nullable: true }) timeOutEndedAt!: Date | null
  @Column('timestamptz', { name: 'patient_out_at', nullable: true }) patientOutAt!: Date | null
  @Column('timestamptz', { name: 'closed_at', nullable: true }) closedAt!: Date | null
  /** Why it was reopened or cancelled. */
  @Column('text', { name: 'status_reason', nullable: true }) statusReason!: string | null
  @Column('integer', { default: 1 }) version!: number
}
