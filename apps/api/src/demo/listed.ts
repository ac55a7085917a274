import type { PartKind, Side } from '@bellpull/domain'
import type { CatalogueCategory } from '../modules/catalogue/catalogue-item.entity.js'
import type { Maker } from './gtin.js'

export const SYSTEMS = {
  Sallowby: 'bracklethwaite',
  Withyholt: 'gannetholme',
  Cobnut: 'gannetholme',
  Dunnock: 'tansyhill',
} as const satisfies Record<string, Maker>
export type SystemName = keyof typeof SYSTEMS

/** A product as the lists of the families write it. */
export interface Listed {
  readonly ref: string
  readonly system: SystemName | null
  readonly maker: Maker
  /** Family, variant and number of the GTIN. */
  readonly number: readonly [family: number, variant: number, size: number]
  readonly category: CatalogueCategory
  readonly kind: PartKind
  readonly partName: string
  readonly label: string
  readonly size: string | null
  readonly order: number
  readonly variant?: string
  readonly diameterMm?: number
  readonly heightMm?: number
  readonly side?: Side
  readonly taper?: string
  readonly group?: string
  readonly type?: string
  readonly bin: string
  readonly par: number
  /** Packages of it in the house when the story's day begins, not counting those with a story of their own. */
  readonly have: number
  /** Only lots, no serial: consumables. */
  readonly byLot?: boolean
  readonly stocked?: boolean
  readonly hibc?: { readonly lic: string; readonly product: string }
}

/** How a size is written in a REF: two digits. */
export const two = (size: number): string => String(size).padStart(2, '0')
