import { Column, Entity, ForeignKey, Index, PrimaryGeneratedColumn } from 'typeorm'
import type { UnitState } from '@bellpull/domain'

/** Where a package went, and why. Append-only: the database refuses every change. */
@Entity('movement')
@Index('movement_by_unit', ['unitId', 'at'])
export class Movement {
  /** A bigint: text in JavaScript. */
  @PrimaryGeneratedColumn('identity', { type: 'bigint', generatedIdentity: 'ALWAYS' }) id!: string
  @ForeignKey('unit', { name: 'movement_of_unit' })
  @Column('uuid', { name: 'unit_id' })
  unitId!: string
  @ForeignKey('item', { name: 'movement_for_item' })
  @Column('uuid', { name: 'item_id', nullable: true })
  itemId!: string | null
  @Column('timestamptz') at!: Date
  @ForeignKey('person', { name: 'movement_by_person' })
  @Column('uuid', { name: 'actor_id' })
  actorId!: string
  @Column('text') why!: string
  @ForeignKey('location', { name: 'movement_from' })
  @Column('uuid', { name: 'from_location_id', nullable: true })
  fromLocationId!: string | null
  @ForeignKey('location', { name: 'movement_to' })
  @Column('uuid', { name: 'to_location_id' })
  toLocationId!: string
  @Column('text', { name: 'to_state' }) toState!: UnitState
}
