import { Column, Entity, ForeignKey, PrimaryColumn, Unique } from 'typeorm'

/** Parts that are made to fit each other. A package of another system is never an alternative. */
@Entity('implant_system')
@Unique('implant_system_name_once', ['name'])
export class ImplantSystem {
  @PrimaryColumn('uuid') id!: string
  @Column('text') name!: string
  @Column('text') maker!: string
  @ForeignKey('supplier', { name: 'implant_system_of_supplier' })
  @Column('uuid', { name: 'supplier_id' })
  supplierId!: string
}
