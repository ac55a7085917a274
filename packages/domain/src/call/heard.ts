import type { Role } from '../people/roles.js'
import type { CaseSide, Side } from './categories.js'

/** Roles of the second person at a check by two. */
export const SECOND_CHECKERS: readonly Role[] = ['surgeon', 'scrub', 'circulator', 'charge']

/** What the circulator keyed while the checker read the label aloud. */
export interface Heard {
  readonly size: string
  readonly side: Side
}

/** What a part is called by when its label is read aloud. */
export interface Spoken {
  /** As said: "50", "32 +4", "G3 11"; a part without a size is called by its name. */
  readonly size: string
  /** The side that the part fits. */
  readonly side: Side
}

/** A leading nought and spaces are not heard. */
const bare = (size: string): string =>
  size
    .trim()
    .toUpperCase()
    .replace(/^0+(?=\d)/, '')
    .replace(/\s+/g, '')

/**
 * Whether what was heard is this part. A label of a part that fits either side bears no side: *either* is
 * right, and so is the side of the case.
 */
export function isAsHeard(heard: Heard, part: Spoken, caseSide: CaseSide): boolean {
  const sides: readonly Side[] = part.side === 'either' ? ['either', caseSide] : [part.side]
  return bare(heard.size) === bare(part.size) && sides.includes(heard.side)
}
