import { boardSnapshot } from '@bellpull/contracts'
import { http } from './http'

export const boardApi = {
  /** Rows and revisions of one moment. Better soon again than late: the deadline is short. */
  snapshot: () => http.get('/board', boardSnapshot, { deadlineMs: 4_000 }),
}
