import { nextAction, toneOf, type Viewer } from './next-action'
import type { BoardRow } from './rows'

/**
 * Whether a row that came, or came forward, is for this very person to act on: the one soft tone sounds for
 * nobody else. Nurses who have rooms answer for those; the charge nurse once nobody else has.
 *
 * @param quietCaseIds cases in a marked time-out: nothing sounds.
 */
export function mustAct(
  row: BoardRow,
  viewer: Viewer,
  myRoomIds: ReadonlySet<string>,
  quietCaseIds: ReadonlySet<string>,
): boolean {
  if (quietCaseIds.has(row.call.caseId)) return false
  const { action } = nextAction(row.call, row.item, viewer)
  if (action === null || toneOf(action) !== 'ring') return false
  if (viewer.role === 'charge') return row.escalation >= 2
  if (viewer.role === 'circulator') return myRoomIds.size === 0 || myRoomIds.has(row.call.room.id)
  return viewer.role === 'runner' || viewer.role === 'core'
}
