import { Check, Column, Entity, ForeignKey, PrimaryColumn, Unique } from 'typeorm'
import { oneOf } from '../../platform/db/one-of.js'

export const ZONES = ['room', 'core', 'hatch', 'loanerRack', 'quarantine', 'returns'] as const
export type Zone = (typeof ZONES)[number]

/** A place where a package may lie: a bin, a rack, the hatch, a room's cart. */
@Entity('location')
@Unique('location_code_once', ['code'])
@Check('location_zone_known', oneOf('zone', ZONES))
@Check('location_in_room', `(zone = 'room') = (room_id IS NOT NULL)`)
export class Location {
  @PrimaryColumn('uuid') id!: string
  @Column('text') code!: string
  @Column('text') zone!: Zone
  @ForeignKey('room', { name: 'location_of_room' })
  @Column('uuid', { name: 'room_id', nullable: true })
  roomId!: string | null
  /** Order in which a walk passes the places; smaller is nearer to the hatch. */
  @Column('integer', { name: 'walk_order' }) walkOrder!: number
}
