import type { ItemView, LabelView, Scan, TypedLabel } from '@bellpull/contracts'
import { sameAsTyped } from '@bellpull/domain'

/** What was read from a package, and how it is sent to the house. */
export interface ReadLabel {
  readonly input: { readonly scan: Scan } | { readonly typed: TypedLabel }
  readonly gtin: string | null
  /** Typed labels bear the REF as printed. */
  readonly ref: string | null
  /** HIBC: labeler and product. */
  readonly hibc: string | null
  readonly lot: string | null
  readonly serial: string | null
  readonly useByOn: string | null
  readonly typed: boolean
  /** When it was read, in milliseconds of the house's clock. */
  readonly atMs: number
}

/** Why the last scan is no label. */
export type ReadingFault =
  | { readonly is: 'unreadable'; readonly detail: string }
  | { readonly is: 'same' }
  | { readonly is: 'notSent' }

export const scannedLabel = (scan: Scan, label: LabelView, atMs: number): ReadLabel => ({
  input: { scan },
  gtin: label.gtin ?? null,
  ref: null,
  hibc: label.lic !== undefined && label.product !== undefined ? `${label.lic} ${label.product}` : null,
  lot: label.lot ?? null,
  serial: label.serial ?? null,
  useByOn: label.useByOn ?? null,
  typed: false,
  atMs,
})

export const typedLabel = (typed: TypedLabel, atMs: number): ReadLabel => ({
  input: { typed },
  gtin: null,
  ref: typed.ref,
  hibc: null,
  lot: typed.lot,
  serial: typed.serial ?? null,
  useByOn: typed.useByOn,
  typed: true,
  atMs,
})

/** Whether the label bears the product of the item; `unknown` where this screen has nothing to compare it with. */
export function productOn(label: ReadLabel, item: ItemView): 'same' | 'other' | 'unknown' {
  if (label.ref !== null) return sameAsTyped(label.ref, item.ref) ? 'same' : 'other'
  if (label.gtin === null || item.unit === null) return 'unknown'
  return label.gtin === item.unit.gtin ? 'same' : 'other'
}

/** Whether the label can be that of the item's own package; `unknown` without a lot or serial number to compare. */
export function packageOn(label: ReadLabel, item: ItemView): 'same' | 'other' | 'unknown' {
  const { unit } = item
  if (unit === null || (label.lot === null && label.serial === null)) return 'unknown'
  const same = (said: string, recorded: string): boolean =>
    label.typed ? sameAsTyped(said, recorded) : said === recorded
  if (label.lot !== null && !same(label.lot, unit.lot)) return 'other'
  if (label.serial !== null && unit.serial !== null && !same(label.serial, unit.serial)) return 'other'
  return 'same'
}

/** The item, among those given, whose own package bears this label. */
export const itemOfLabel = (label: ReadLabel, items: readonly ItemView[]): ItemView | null =>
  items.find((item) => productOn(label, item) === 'same' && packageOn(label, item) === 'same') ?? null
