import { eventsPage } from '@bellpull/contracts'
import { http } from './http'

export const eventsApi = {
  /** What happened, in commit order; `after` is the cursor of the page before. */
  page: (query: { case?: string; call?: string; after?: string; limit?: number }) =>
    http.get('/events', eventsPage, { query }),
}
