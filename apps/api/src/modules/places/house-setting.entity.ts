import { Column, Entity, PrimaryColumn } from 'typeorm'

/** What the house has settled for itself; a key that is absent means the built-in value. */
@Entity('house_setting')
export class HouseSetting {
  @PrimaryColumn('text') key!: string
  @Column('jsonb') value!: unknown
  @Column('timestamptz', { name: 'changed_at', default: () => 'now()' }) changedAt!: Date
}
