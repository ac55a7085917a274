import { Column, Entity, ForeignKey, Index, PrimaryColumn } from 'typeorm'
import type { EventType } from '@bellpull/contracts'

/** What happened, in the order in which it is told. Append-only: the database refuses every change. */
@Entity('event')
@Index('event_by_case', ['caseId', 'seq'])
export class Event {
  @ForeignKey('room', { name: 'event_in_room' })
  @PrimaryColumn('uuid', { name: 'room_id' })
  roomId!: string
  @PrimaryColumn('integer') seq!: number
  @Column('text') type!: EventType
  @Column('timestamptz') at!: Date
  @ForeignKey('surgical_case', { name: 'event_of_case' })
  @Column('uuid', { name: 'case_id' })
  caseId!: string
  @ForeignKey('call', { name: 'event_of_call' })
  @Column('uuid', { name: 'call_id', nullable: true })
  callId!: string | null
  @ForeignKey('item', { name: 'event_of_item' })
  @Column('uuid', { name: 'item_id', nullable: true })
  itemId!: string | null
  @ForeignKey('person', { name: 'event_by_person' })
  @Column('uuid', { name: 'actor_id' })
  actorId!: string
  /** What the step was about: sizes, reasons, lot, the second checker. */
  @Column('jsonb', { default: {} }) data!: Record<string, unknown>
}
