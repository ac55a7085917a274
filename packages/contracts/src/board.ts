import { z } from 'zod'
import { callView } from './calls.js'
import { id } from './ids.js'

/** `GET /board`: rows and revisions of one moment. */
export const boardSnapshot = z
  .object({ revisions: z.record(z.string(), z.int().nonnegative()), calls: z.array(callView) })
  .meta({ id: 'Board' })
export type BoardSnapshot = z.infer<typeof boardSnapshot>

/** Exactly one revision of one room. It carries the whole call, never a patch of it. */
export const boardDelta = z.object({
  roomId: id,
  revision: z.int().positive(),
  event: z.string(),
  call: callView,
})
export type BoardDelta = z.infer<typeof boardDelta>

export const stockChanged = z.object({ catalogueItemIds: z.array(id) })
export type StockChanged = z.infer<typeof stockChanged>

/** Something that a screen should say or refresh, beside the board. `case.changed` carries `caseId`. */
export const notice = z.looseObject({ kind: z.string() })
export type Notice = z.infer<typeof notice>

export interface ServerToClientEvents {
  'board:delta': (delta: BoardDelta) => void
  'stock:changed': (changed: StockChanged) => void
  notice: (message: Notice) => void
  'session:ended': () => void
}
