import type { Zone } from '../modules/places/location.entity.js'
import { demoId } from './ids.js'

export const ROOM_NUMBERS = [1, 2, 3, 4, 5, 6, 7, 8] as const

export interface Place {
  readonly id: string
  readonly code: string
  readonly zone: Zone
  readonly room: number | null
  readonly walkOrder: number
}

const numbered = (prefix: string, count: number): string[] =>
  Array.from({ length: count }, (_, index) => `${prefix}${index + 1}`)

/** The bins as a walk from the hatch passes them: shelf by shelf, left femurs far from right ones. */
const BINS = [
  ...numbered('A1-', 10),
  ...numbered('A2-', 12),
  ...numbered('A3-', 8),
  'A4',
  ...numbered('B1-', 12),
  ...numbered('B2-', 12),
  'B3',
  'B4',
  ...numbered('B5-', 13),
  'B6',
  ...numbered('C-L', 10),
  'C3',
  'C4',
  'C5',
  ...numbered('D-R', 10),
  ...numbered('D1-', 3),
  ...numbered('D2-', 4),
  ...numbered('D3-', 5),
  ...numbered('D4-', 5),
  ...numbered('D5-', 6),
]

const place = (code: string, zone: Zone, walkOrder: number, room: number | null = null): Place => ({
  id: demoId('location', code),
  code,
  zone,
  room,
  walkOrder,
})

export const PLACES: readonly Place[] = [
  place('Hatch', 'hatch', 0),
  ...BINS.map((code, index) => place(code, 'core', (index + 1) * 10)),
  ...numbered('LR-', 6).map((code, index) => place(code, 'loanerRack', 2000 + index * 10)),
  place('RT', 'returns', 2100),
  place('Q', 'quarantine', 2200),
  ...ROOM_NUMBERS.map((number) => place(`R${number}`, 'room', 0, number)),
]

const BY_CODE = new Map(PLACES.map((one) => [one.code, one]))

/** @throws {RangeError} for a code that the house does not have: a slip in the story. */
export function placeOf(code: string): Place {
  const found = BY_CODE.get(code)
  if (!found) throw new RangeError(`the demo house has no place ${code}`)
  return found
}

export const roomId = (number: number): string => demoId('room', String(number))

export const placeRows = (): Record<string, unknown>[] =>
  PLACES.map(({ id, code, zone, room, walkOrder }) => ({
    id,
    code,
    zone,
    room_id: room === null ? null : roomId(room),
    walk_order: walkOrder,
  }))

/** What the demo house has settled for itself. */
export const settingRows = (changedAt: Date): Record<string, unknown>[] =>
  Object.entries({
    sizingArithmetic: true,
    secondCheckMethods: ['pin', 'spoken'],
    unitsExpiringSoonDays: 30,
    /** A *now* call is in time when its package is verified within this, in milliseconds. */
    nowCallLimitMs: 8 * 60_000,
  }).map(([key, value]) => ({ key, value, changed_at: changedAt }))
