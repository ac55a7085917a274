/** What a symbology identifier says about the data behind it. */
export type CarrierKind =
  /** GS1 element strings. */
  | 'elements'
  /** One GTIN: EAN, UPC, ITF-14. */
  | 'gtin'
  /** Anything: HIBC, a web address, plain text. */
  | 'plain'
  /** No identifier was sent. */
  | 'unnamed'
  /** An identifier that no package label bears. */
  | 'unknown'

/**
 * Identifiers by what they carry. Capital and small letters differ: `]d2` is Data Matrix, `]D2` is not.
 *
 * @see GS1 Barcode Syntax Engine, table of symbology identifiers, for `]d2 ]C1 ]Q3 ]e0 ]J1 ]E0 ]E4 ]d1 ]Q1`;
 *   ISO/IEC 15424 for the others (from memory).
 */
const CARRIERS: readonly (readonly [RegExp, CarrierKind])[] = [
  [/^\](d2|C1|Q3|e0|J1)/, 'elements'],
  [/^\](E0|E4|I0|I1)/, 'gtin'],
  [/^\](d[014]|C0|Q[012]|J0|A.|z.)/, 'plain'],
  [/^\]/, 'unknown'],
]

/** Parts a scan into its symbology identifier, if the scanner sends one, and the data. */
export function splitCarrier(scan: string): {
  readonly kind: CarrierKind
  readonly id: string
  readonly data: string
} {
  const kind = CARRIERS.find(([pattern]) => pattern.test(scan))?.[1] ?? 'unnamed'
  return kind === 'unnamed'
    ? { kind, id: '', data: scan }
    : { kind, id: scan.slice(0, 3), data: scan.slice(3) }
}
