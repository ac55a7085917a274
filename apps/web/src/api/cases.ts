import { callView, caseView, railView, type CaseCommand } from '@bellpull/contracts'
import { z } from 'zod'
import { http } from './http'
import type { Tap } from './tap'

const path = (caseId: string): string => `/cases/${encodeURIComponent(caseId)}`

export const casesApi = {
  /** The cases of a day (`YYYY-MM-DD`, today where it is left out), in order of start. */
  list: (on?: string) => http.get('/cases', z.array(caseView), { query: { on } }),
  get: (caseId: string) => http.get(path(caseId), caseView),
  /** Every call of the case, finished ones too. */
  calls: (caseId: string) => http.get(`${path(caseId)}/calls`, z.array(callView)),
  /** Every size of every system of the case, with its stock. */
  sizes: (caseId: string) => http.get(`${path(caseId)}/sizes`, z.array(railView)),
  /** @throws {ApiProblem} `not-settled`, `case-moved-on`, `patient-not-out`, ... */
  command: (caseId: string, command: CaseCommand, tap: Tap) =>
    http.post(`${path(caseId)}/commands`, caseView, { body: command, tap }),
}
