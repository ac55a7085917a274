import { Check, Column, Entity, ForeignKey, Index, PrimaryColumn, Unique } from 'typeorm'
import { CATEGORIES, PART_KINDS, SIDES, type Category, type PartKind, type Side } from '@bellpull/domain'
import { oneOf } from '../../platform/db/one-of.js'

/** Free text is called by what is said, so it has no catalogue item. */
export type CatalogueCategory = Exclude<Category, 'other'>
export const CATALOGUE_CATEGORIES = CATEGORIES.filter(
  (category): category is CatalogueCategory => category !== 'other',
)

/** One product in one size: what a REF and a GTIN name. */
@Entity('catalogue_item')
@Unique('catalogue_item_ref_once', ['ref'])
@Unique('catalogue_item_gtin_once', ['gtin'])
@Check('catalogue_item_gtin_14', `gtin ~ '^[0-9]{14}$'`)
@Check('catalogue_item_category_known', oneOf('category', CATALOGUE_CATEGORIES))
@Check('catalogue_item_kind_known', oneOf('kind', PART_KINDS))
@Check('catalogue_item_side_known', oneOf('side', SIDES))
@Index('catalogue_item_rail', ['systemId', 'kind', 'sizeOrder'])
export class CatalogueItem {
  @PrimaryColumn('uuid') id!: string
  @Column('text') ref!: string
  @Column('text') gtin!: string
  /** Labeller code and product number where the maker labels by HIBC. */
  @Column('text', { name: 'hibc_lic', nullable: true }) hibcLic!: string | null
  @Column('text', { name: 'hibc_product', nullable: true }) hibcProduct!: string | null
  @ForeignKey('implant_system', { name: 'catalogue_item_of_system' })
  @Column('uuid', { name: 'system_id', nullable: true })
  systemId!: string | null
  @ForeignKey('supplier', { name: 'catalogue_item_of_supplier' })
  @Column('uuid', { name: 'supplier_id' })
  supplierId!: string
  @Column('text') category!: CatalogueCategory
  @Column('text') kind!: PartKind
  /** "Humeral head": the name of the part. */
  @Column('text', { name: 'part_name' }) partName!: string
  /** What is said, without the variant: "Head 50". */
  @Column('text') label!: string
  /** The size alone as said: "50". */
  @Column('text', { nullable: true }) size!: string | null
  /** Order on the rail. A numeric: text in JavaScript. */
  @Column('numeric', { name: 'size_order' }) sizeOrder!: string
  @Column('text', { nullable: true }) variant!: string | null
  @Column('double precision', { name: 'diameter_mm', nullable: true }) diameterMm!: number | null
  @Column('double precision', { name: 'height_mm', nullable: true }) heightMm!: number | null
  @Column('text') side!: Side
  @Column('text', { nullable: true }) taper!: string | null
  @Column('text', { name: 'group_code', nullable: true }) groupCode!: string | null
  @Column('text', { name: 'type_code', nullable: true }) typeCode!: string | null
  /** How many packages the house means to have. */
  @Column('integer', { default: 0 }) par!: number
  /** Kept by package; otherwise it is called without a hold. */
  @Column('boolean', { default: true }) stocked!: boolean
  @Column('boolean', { default: true }) active!: boolean
}
