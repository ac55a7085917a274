/** One change of one call, for everybody who may read the board. */
export interface Delta {
  readonly roomId: string
  readonly revision: number
  readonly event: string
  readonly call: unknown
}

/**
 * Tells the screens. Only what has been committed may be told; what gets lost on the way shows as a gap in the
 * revisions of a room, and costs that screen one reload.
 */
export interface Publisher {
  delta(delta: Delta): void
  stockChanged(catalogueItemIds: string[]): void
  notice(message: { kind: string } & Record<string, unknown>): void
  sessionEnded(sessionId: string): void
}
