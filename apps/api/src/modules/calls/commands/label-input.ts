import type { Scan, TypedLabel } from '@bellpull/contracts'
import { normaliseTyped, parseScan, sameAsTyped, whyUnusable, type CaseSide } from '@bellpull/domain'
import { Problem } from '../../../platform/http/problem.js'
import type { Sql } from '../../../platform/db/sql.js'
import { findProduct, type ItemRow, type ProductRow, type UnitRow } from '../rows.js'

/** What a person read from a package with a scanner, or typed. */
export interface LabelInput {
  readonly scan?: Scan | undefined
  readonly typed?: TypedLabel | undefined
}

/** A label, whichever way it came in. */
export interface ReadLabel {
  readonly product: { gtin: string } | { ref: string } | { lic: string; product: string }
  readonly lot: string | undefined
  readonly serial: string | undefined
  readonly useByOn: string | undefined
  readonly typed: boolean
}

export const hasLabel = (input: LabelInput): boolean => input.scan !== undefined || input.typed !== undefined

/** @throws {Problem} `invalid-input` when nothing was scanned or typed, `label-unreadable` with its reason. */
export function readLabel(input: LabelInput, today: string): ReadLabel {
  if (input.typed) {
    const typed = normaliseTyped(input.typed, today)
    if (!typed.ok)
      throw new Problem('label-unreadable', { detail: typed.detail, extra: { reason: typed.reason } })
    const { ref, lot, serial, useByOn } = typed.label
    return { product: { ref }, lot, serial, useByOn, typed: true }
  }
  if (input.scan === undefined)
    throw new Problem('invalid-input', {
      errors: [{ pointer: '/scan', message: 'Scan the label or type it' }],
    })
  const result = parseScan(input.scan, today)
  if (!result.ok)
    throw new Problem('label-unreadable', { detail: result.detail, extra: { reason: result.reason } })
  const { gtin, lic, product, lot, serial, useByOn } = result.label
  const named =
    gtin !== undefined ? { gtin } : lic !== undefined && product !== undefined ? { lic, product } : null
  if (!named)
    throw new Problem('label-unreadable', {
      detail: 'This barcode does not say which product it is: scan the other one of the label too.',
      extra: { reason: 'no-product' },
    })
  return { product: named, lot, serial, useByOn, typed: false }
}

/**
 * Which package a label is on is said by its lot or its serial number; a product number alone fits every
 * package of the product, and a check that compared nothing must not count as one.
 *
 * @throws {Problem} `label-unreadable`
 */
export function demandIdentified(label: ReadLabel): void {
  if (label.lot === undefined && label.serial === undefined)
    throw new Problem('label-unreadable', {
      detail: 'This barcode bears no lot and no serial number: scan the other one of the label too.',
      extra: { reason: 'no-lot' },
    })
}

/** @throws {Problem} `label-unreadable` when there is no date to compare. */
export function demandDated(label: ReadLabel): void {
  if (label.useByOn === undefined)
    throw new Problem('label-unreadable', {
      detail: 'This barcode bears no use-by date: scan the other one of the label too, or type the label.',
      extra: { reason: 'no-use-by' },
    })
}

const said = (product: ProductRow): Record<string, unknown> => ({
  ref: product.ref,
  label: product.label,
  variant: product.variant,
  side: product.side,
})

/**
 * Is the label's product the one that was called?
 * @throws {Problem} `wrong-side` when the label is for the other side, `wrong-item` for any other difference,
 *   a product that the house does not know among them; both with `expected` and `scanned`.
 */
export async function demandCalledProduct(
  sql: Sql,
  item: ItemRow,
  label: ReadLabel,
  caseSide: CaseSide,
): Promise<void> {
  const scanned = await findProduct(sql, label.product)
  const expected = item.product
  if (!expected)
    throw new Problem('item-moved-on', { detail: 'This was called in words: there is no label to compare.' })
  if (!scanned)
    throw new Problem('wrong-item', {
      detail: `Called: ${inWords(expected)}. The house does not know the product on the label.`,
      extra: { expected: said(expected), scanned: { ...label.product } },
    })
  if (scanned.id === expected.id) return
  const extra = { expected: said(expected), scanned: said(scanned) }
  const otherSide = scanned.side !== 'either' && scanned.side !== caseSide
  throw new Problem(otherSide ? 'wrong-side' : 'wrong-item', {
    detail: `Called: ${inWords(expected)}. On the label: ${inWords(scanned)}.`,
    extra,
  })
}

const inWords = (product: ProductRow): string =>
  [product.label, product.variant, product.side === 'either' ? null : product.side.toUpperCase()]
    .filter((word) => word !== null)
    .join(' ')

/** Whether a label can be that of this package: lot as printed, serial where the label bears one. */
export function isOf(label: ReadLabel, unit: UnitRow): boolean {
  const same = (said: string, recorded: string) =>
    label.typed ? sameAsTyped(said, recorded) : said === recorded
  return (
    (label.lot === undefined || same(label.lot, unit.lot)) &&
    (label.serial === undefined || unit.serial === null || same(label.serial, unit.serial))
  )
}

/**
 * @throws {Problem} `label-differs` when label and record do not bear the same date, and by name whatever
 *   keeps the package from being used today. Both dates are shown.
 */
export function demandUsable(
  unit: UnitRow,
  label: ReadLabel | null,
  caseSide: CaseSide,
  today: string,
): void {
  if (label?.useByOn !== undefined && label.useByOn !== unit.useByOn)
    throw new Problem('label-differs', {
      detail: `Use by ${label.useByOn} on the label, ${unit.useByOn} in the record.`,
      extra: { expected: { useByOn: unit.useByOn }, scanned: { useByOn: label.useByOn } },
    })
  const why = whyUnusable(unit, caseSide, today)
  if (why)
    throw new Problem(why, {
      ...(why === 'unit-expired' && { detail: `Use by ${unit.useByOn}; today is ${today}.` }),
      extra: { useByOn: unit.useByOn, today },
    })
}
