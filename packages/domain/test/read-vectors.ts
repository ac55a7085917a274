import { readFileSync } from 'node:fs'

/** Every published check value says where it is from, and whether that was looked up or remembered. */
export interface Sourced {
  readonly source: string
  readonly from_memory: boolean
}

/** The check values of one file in `test/vectors`. */
export function readVectors<T>(name: string): T {
  return JSON.parse(readFileSync(new URL(`./vectors/${name}.vectors.json`, import.meta.url), 'utf8')) as T
}

/** Source for a test's title. */
export const from = ({ source, from_memory }: Sourced): string =>
  from_memory ? `${source}; from memory` : source
