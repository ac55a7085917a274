import { Column, Entity, PrimaryColumn, Unique } from 'typeorm'

@Entity('supplier')
@Unique('supplier_name_once', ['name'])
export class Supplier {
  @PrimaryColumn('uuid') id!: string
  @Column('text') name!: string
  @Column('text') email!: string
}
