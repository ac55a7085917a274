import type { LabelView } from '@bellpull/contracts'
import { mostUrgent, type FetchLine, type FetchList } from './fetch-list'

/** What a scanned label stands for on To fetch. */
export type ScanMatch =
  /** To be pulled; `others` are further calls of the same product that this package does not go to. */
  | { readonly kind: 'pull'; readonly line: FetchLine; readonly others: readonly FetchLine[] }
  /** Lies in the hatch already. */
  | { readonly kind: 'pulledAlready'; readonly line: FetchLine }
  /** On its way back: next comes the bin. */
  | { readonly kind: 'putBack'; readonly line: FetchLine }
  | { readonly kind: 'notOnTheList' }

/** Whether a label can be that of the item's product. HIBC labels name the catalogue number, not a GTIN. */
function isProduct(label: LabelView, { item }: FetchLine): boolean {
  if (item.unit === null) return false
  if (label.gtin !== undefined) return label.gtin === item.unit.gtin
  return label.product !== undefined && label.product.toUpperCase() === item.ref.toUpperCase()
}

/** Whether the label bears lot and serial of the very package held; what the label leaves out decides nothing. */
function isPackage(label: LabelView, line: FetchLine): boolean {
  const unit = line.item.unit
  if (unit === null || !isProduct(label, line)) return false
  const serialSays = label.serial !== undefined && unit.serial !== null
  if (serialSays && label.serial !== unit.serial) return false
  return label.lot === undefined ? serialSays : label.lot === unit.lot
}

/**
 * Finds what a label stands for: the item for which this very package is held, else the most urgent one of the
 * same product (the house moves the hold); then what has been pulled already, then what goes back.
 */
export function matchScan(label: LabelView, list: FetchList): ScanMatch {
  const waiting = [...list.walk, ...list.inTheRoom]
  const sameProduct = waiting.filter((line) => isProduct(label, line))

  const goingBack = list.putBacks.filter((line) => isPackage(label, line))
  const heldHere = waiting.filter((line) => isPackage(label, line))
  const pulled = list.hatch.filter((line) => isPackage(label, line))
  const line = mostUrgent(heldHere)
  if (line) return { kind: 'pull', line, others: sameProduct.filter((one) => one !== line) }
  // One lot, several packages: the one in the hatch is meant only when its serial says so, or nobody waits.
  const inHatch = pulled.find((one) => sameProduct.length === 0 || label.serial === one.item.unit?.serial)
  if (inHatch) return { kind: 'pulledAlready', line: inHatch }
  const back = goingBack[0]
  if (back) return { kind: 'putBack', line: back }

  const substitute = mostUrgent(sameProduct)
  if (substitute)
    return { kind: 'pull', line: substitute, others: sameProduct.filter((one) => one !== substitute) }
  return { kind: 'notOnTheList' }
}
