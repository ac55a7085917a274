import { callView, type CallCommandBody, type ItemCommandBody, type MakeCall } from '@bellpull/contracts'
import { http } from './http'
import type { Tap } from './tap'

export const callsApi = {
  make: (caseId: string, call: MakeCall, tap: Tap) =>
    http.post(`/cases/${encodeURIComponent(caseId)}/calls`, callView, { body: call, tap }),
  onCall: (callId: string, command: CallCommandBody, tap: Tap) =>
    http.post(`/calls/${encodeURIComponent(callId)}/commands`, callView, { body: command, tap }),
  onItem: (itemId: string, command: ItemCommandBody, tap: Tap) =>
    http.post(`/items/${encodeURIComponent(itemId)}/commands`, callView, { body: command, tap }),
}
