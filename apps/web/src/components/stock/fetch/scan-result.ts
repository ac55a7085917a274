/** What the last scan came to: large, read in passing. */
export interface ScanResult {
  readonly tone: 'idle' | 'busy' | 'done' | 'ask' | 'stop'
  /** What, for which room. */
  readonly what: string
  /** What now. */
  readonly now: string
  readonly facts: readonly string[]
  /** The half label may go on without its other barcode. */
  readonly goOn: (() => void) | null
}
