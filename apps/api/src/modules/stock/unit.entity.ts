import { Check, Column, Entity, ForeignKey, Index, PrimaryColumn } from 'typeorm'
import { OWNERS, UNIT_STATES, type Owner, type UnitState } from '@bellpull/domain'
import { oneOf } from '../../platform/db/one-of.js'

/** One sterile package, or one tray. On screen: package. */
@Entity('unit')
@Check('unit_state_known', oneOf('state', UNIT_STATES))
@Check('unit_owner_known', oneOf('owner', OWNERS))
@Check(
  'unit_hold_has_item',
  `(state IN ('held', 'pulled', 'inRoom', 'opened')) = (held_for IS NOT NULL)
    OR (state IN ('quarantined', 'recalled') AND held_for IS NOT NULL)`,
)
@Index('unit_free_in_core', ['catalogueItemId', 'useByOn', 'walkOrder', 'ownerRank', 'id'], {
  where: `state = 'available' AND sterile AND place_room_id IS NULL`,
})
@Index('unit_free_in_room', ['placeRoomId', 'catalogueItemId', 'useByOn'], {
  where: `state = 'available' AND sterile AND place_room_id IS NOT NULL`,
})
@Index('unit_held_once', ['heldFor'], { unique: true, where: 'held_for IS NOT NULL' })
@Index('unit_held_of_item', ['catalogueItemId'], { where: 'held_for IS NOT NULL' })
@Index('unit_by_label', ['catalogueItemId', 'lot', 'serial'])
@Index('unit_serial_once', ['catalogueItemId', 'serial'], { unique: true, where: 'serial IS NOT NULL' })
export class Unit {
  @PrimaryColumn('uuid') id!: string
  @ForeignKey('catalogue_item', { name: 'unit_of_item' })
  @Column('uuid', { name: 'catalogue_item_id' })
  catalogueItemId!: string
  @Column('text') lot!: string
  @Column('text', { nullable: true }) serial!: string | null
  /** Last day of use, `YYYY-MM-DD`, without a zone. */
  @Column('date', { name: 'use_by_on' }) useByOn!: string
  @Column('text') state!: UnitState
  /** The item for which this package is kept. One item at a time: this column is the hold. */
  @ForeignKey('item', { name: 'unit_held_for_item' })
  @Column('uuid', { name: 'held_for', nullable: true })
  heldFor!: string | null
  @ForeignKey('location', { name: 'unit_at_location' })
  @Column('uuid', { name: 'location_id' })
  locationId!: string
  @ForeignKey('location', { name: 'unit_home' })
  @Column('uuid', { name: 'home_location_id' })
  homeLocationId!: string
  /** The tray that carries this package, itself a unit. */
  @ForeignKey('unit', { name: 'unit_on_tray' })
  @Column('uuid', { name: 'carried_by', nullable: true })
  carriedBy!: string | null
  @Column('boolean', { default: true }) sterile!: boolean
  @Column('text', { default: 'owned' }) owner!: Owner
  /** Copies kept true by a trigger, for the statement that holds packages: read them, never write them. */
  @Column({ type: 'uuid', name: 'place_room_id', nullable: true, insert: false, update: false })
  placeRoomId!: string | null
  @Column({ type: 'integer', name: 'walk_order', default: 0, insert: false, update: false })
  walkOrder!: number
  @Column({ type: 'smallint', name: 'owner_rank', default: 0, insert: false, update: false })
  ownerRank!: number
  @Column('timestamptz', { name: 'received_at', default: () => 'now()' }) receivedAt!: Date
  @Column('text', { nullable: true }) note!: string | null
}
