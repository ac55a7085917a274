import { Column, Entity, PrimaryColumn, Unique } from 'typeorm'

@Entity('room')
@Unique('room_number_once', ['number'])
export class Room {
  @PrimaryColumn('uuid') id!: string
  @Column('integer') number!: number
  /** One for each change of a call of this room, without a gap and in order of commit. */
  @Column('integer', { default: 0 }) revision!: number
  /** One for each event of this room, case events included. */
  @Column('integer', { name: 'event_seq', default: 0 }) eventSeq!: number
  /** `-Infinity`, a number, before the first event. */
  @Column('timestamptz', { name: 'last_event_at', default: '-infinity' }) lastEventAt!: Date | number
}
