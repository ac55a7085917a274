/** The two schemes that sterile packages of implants bear. */
export type LabelScheme = 'gs1' | 'hibc'

/** Why a scan is not taken for a label. Every refusal has one of these names, and a sentence beside it. */
export const LABEL_REFUSALS = [
  'empty',
  'not-a-label',
  'unsupported-scheme',
  'unknown-symbology',
  'unknown-ai',
  'unknown-flag',
  'bad-character',
  'check-digit',
  'no-such-date',
  'truncated',
  'empty-value',
  'lot-too-long',
  'serial-too-long',
  'data-too-long',
  'serial-without-gtin',
  'missing-companion',
  'forbidden-pair',
  'conflicting-values',
  'mixed-schemes',
  'link-mismatch',
  'link-structure',
  'ambiguous',
] as const
export type LabelRefusal = (typeof LABEL_REFUSALS)[number]

/** What is legal and still worth a second look: something is missing, or may not be what it seems. */
export const LABEL_WARNINGS = [
  'no-gtin',
  'no-product',
  'no-lot',
  'no-use-by',
  'lot-may-hold-date',
  'serial-may-hold-date',
  'use-by-has-hour',
  'use-by-before-made',
  'separator-as-text',
] as const
export type LabelWarning = (typeof LABEL_WARNINGS)[number]

/** What a label says, whichever way it was written. Days are `YYYY-MM-DD`, day 00 already resolved. */
export interface Label {
  readonly scheme: LabelScheme
  /** 14 digits, check digit verified (GS1). */
  readonly gtin?: string
  /** Labeler identification code, four characters (HIBC). */
  readonly lic?: string
  /** The labeler's product or catalogue number (HIBC). */
  readonly product?: string
  readonly lot?: string
  readonly serial?: string
  /** Last day of use. */
  readonly useByOn?: string
  readonly madeOn?: string
  readonly warnings: readonly LabelWarning[]
}

export interface Refusal {
  readonly ok: false
  readonly reason: LabelRefusal
  /** One plain sentence for the person at the scanner. */
  readonly detail: string
}

export type LabelResult = { readonly ok: true; readonly label: Label } | Refusal

export const refuse = (reason: LabelRefusal, detail: string): Refusal => ({ ok: false, reason, detail })
