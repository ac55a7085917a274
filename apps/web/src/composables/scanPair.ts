import type { Scan } from '@bellpull/contracts'
import { parseScan } from '@bellpull/domain'

/** How long the second barcode of a label is waited for, in milliseconds. */
export const PAIR_WITHIN_MS = 4_000

/**
 * Some labels carry two barcodes, product in one, lot and date in the other. May this one be half of such a
 * label?
 *
 * @param today the house's day, `YYYY-MM-DD`.
 */
export function isHalfLabel(scan: string, today: string): boolean {
  const read = parseScan(scan, today)
  if (!read.ok) return read.reason === 'ambiguous' || isSecondary(scan)
  const { gtin, product, lot, serial, useByOn } = read.label
  const names = gtin !== undefined || product !== undefined
  const tells = lot !== undefined || serial !== undefined || useByOn !== undefined
  return names !== tells
}

/** A HIBC second barcode cannot be read alone; its flag follows the plus sign. */
const isSecondary = (scan: string): boolean => /^\*?\+[$\d]/.test(scan.trim())

/** Two barcodes are one label when each is a half and both together can be read. */
export function pairOf(first: string, second: string, today: string): Scan | null {
  if (first === second || !isHalfLabel(second, today)) return null
  return parseScan([first, second], today).ok ? [first, second] : null
}
