import { headView, labelView, type Scan } from '@bellpull/contracts'
import { http } from './http'

export const labelsApi = {
  /** @throws {ApiProblem} `label-unreadable`, with `reason`. */
  parse: (scan: Scan) => http.post('/labels/parse', labelView, { body: { scan } }),
}

export const sizingApi = {
  head: (diameterMm: number, ratio: number) =>
    http.get('/sizing/head', headView, { query: { diameterMm, ratio } }),
}
