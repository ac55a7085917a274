import type { LabelView, Scan } from '@bellpull/contracts'

/** How a reading ended: a label, or the name of what was wrong with it. */
export type Reading =
  | { readonly ok: true; readonly label: LabelView }
  | { readonly ok: false; readonly reason: string; readonly detail: string }

/** What comes of a scan, together with the barcode that may be waiting for its other half. */
export type ScanStep =
  | {
      readonly kind: 'label'
      readonly scan: Scan
      readonly label: LabelView
      readonly setAside: string | null
    }
  /** Half a label: wait for the other barcode. `label` when the half alone names the product. */
  | {
      readonly kind: 'half'
      readonly first: string
      readonly missing: 'product' | 'lot'
      readonly label: LabelView | null
    }
  | { readonly kind: 'same'; readonly first: string }
  | { readonly kind: 'unreadable'; readonly reason: string; readonly detail: string }

/** Refusals that the other barcode of the label may settle. */
const HALF: readonly string[] = ['serial-without-gtin', 'missing-companion', 'ambiguous']

/** Which half of a two-barcode label is missing; `null` when the label is whole. */
export function missingHalf(reading: Reading): 'product' | 'lot' | null {
  if (!reading.ok) return HALF.includes(reading.reason) ? 'product' : null
  const { warnings } = reading.label
  if (warnings.includes('no-gtin') || warnings.includes('no-product')) return 'product'
  return warnings.includes('no-lot') ? 'lot' : null
}

/**
 * Joins the two barcodes of one label. A first barcode that is half a label waits for its other half; a second
 * one that does not go with it, but is whole by itself, is taken alone and the first set aside.
 *
 * @param read reads a scan: the house's `POST /labels/parse`.
 */
export async function joinBarcodes(
  scanned: string,
  waiting: string | null,
  read: (scan: Scan) => Promise<Reading>,
): Promise<ScanStep> {
  if (waiting === scanned) return { kind: 'same', first: scanned }
  if (waiting !== null) {
    const pair: Scan = [waiting, scanned]
    const joined = await read(pair)
    const missing = missingHalf(joined)
    if (joined.ok && missing !== 'product')
      return { kind: 'label', scan: pair, label: joined.label, setAside: null }
    const alone = await read(scanned)
    if (alone.ok && missingHalf(alone) === null)
      return { kind: 'label', scan: scanned, label: alone.label, setAside: waiting }
    if (missing !== null || joined.ok)
      return { kind: 'half', first: scanned, missing: 'product', label: null }
    return { kind: 'unreadable', reason: joined.reason, detail: joined.detail }
  }
  const reading = await read(scanned)
  const missing = missingHalf(reading)
  if (missing !== null)
    return {
      kind: 'half',
      first: scanned,
      missing,
      label: reading.ok && missing === 'lot' ? reading.label : null,
    }
  if (!reading.ok) return { kind: 'unreadable', reason: reading.reason, detail: reading.detail }
  return { kind: 'label', scan: scanned, label: reading.label, setAside: null }
}
