import { describe, expect, test } from 'vitest'
import {
  boardDelta,
  boardSnapshot,
  callView,
  eventsPage,
  eventsQuery,
  parseLabel,
  typedLabel,
} from '../src/index.js'

const id = (n: number) => `0b0c9c0e-6a5b-4f0e-8d0a-${String(n).padStart(12, '0')}`
const AT = '2026-12-01T10:45:00.000Z'
const person = { id: id(1), initials: 'JH', name: 'Juniper Hathersedge', role: 'surgeon' }

const item = {
  id: id(2),
  callId: id(3),
  catalogueItemId: id(4),
  category: 'implant',
  ref: 'SAL-H-50',
  label: 'Head 50',
  variant: 'concentric',
  side: 'either',
  stage: 'called',
  outcome: null,
  hold: 'held',
  unit: {
    id: id(5),
    gtin: '09521000000114',
    lot: 'LOT1',
    serial: null,
    useByOn: '2027-06-30',
    location: { id: id(6), code: 'A-01', zone: 'core' },
  },
  alternatives: [],
  heldBy: [],
  pairs: [{ itemId: id(7), result: 'notChecked' }],
  acceptedBy: null,
  offeredTo: null,
  openedUnverified: false,
  version: 1,
  kind: 'head',
  partName: 'Humeral head',
  size: '50',
  system: 'Sallowby',
  acceptedAt: null,
  pulledAt: null,
  inRoomAt: null,
  verifiedAt: null,
  openedAt: null,
  settledAt: null,
  typed: false,
  reason: null,
  putBack: null,
  walkOrder: 3,
  replacesItemId: null,
}
const call = {
  id: id(3),
  caseId: id(8),
  room: { id: id(9), number: 6 },
  kind: 'confirmed',
  neededAt: AT,
  calledAt: AT,
  calledBy: person,
  enteredBy: person,
  readBack: null,
  version: 1,
  items: [item],
  caseNumber: '0412-5',
  side: 'left',
  confirmedAt: AT,
  revision: 1,
  open: true,
}
const through = <T>(value: T): T => JSON.parse(JSON.stringify(value)) as T

describe('answers are read loosely, so that an old tab need not reload', () => {
  test.each([
    ['a call', callView, call],
    [
      'a call in words',
      callView,
      { ...call, items: [{ ...item, catalogueItemId: null, unit: null, hold: 'notStocked' }] },
    ],
    ['the board', boardSnapshot, { revisions: { [id(9)]: 1 }, calls: [call] }],
    ['a delta', boardDelta, { roomId: id(9), revision: 1, event: 'call.called', call }],
    ['events', eventsPage, { items: [], nextCursor: null }],
  ])('%s comes through JSON, and a field that is new is no fault', (_what, schema, body) => {
    expect(schema.parse(through(body))).toEqual(body)
    expect(schema.safeParse({ ...body, invented: 1 }).success).toBe(true)
  })

  test.each([
    ['a stage that is not known', { stage: 'lost' }],
    ['a GTIN of 13 digits', { unit: { ...item.unit, gtin: '9521000000114' } }],
    ['a use-by date that is an instant', { unit: { ...item.unit, useByOn: AT } }],
    ['no version', { version: undefined }],
  ])('a call with %s is not taken for one', (_what, over) => {
    expect(callView.safeParse({ ...call, items: [{ ...item, ...over }] }).success).toBe(false)
  })

  test('a delta is exactly one revision: none has no number, and 0 is none', () => {
    expect(boardDelta.safeParse({ roomId: id(9), revision: 0, event: 'call.called', call }).success).toBe(
      false,
    )
  })
})

describe('questions are read strictly', () => {
  test.each([
    [eventsQuery, { case: id(1) }, true],
    [eventsQuery, { call: id(1), after: 'e30', limit: '500' }, true],
    [eventsQuery, {}, true],
    [eventsQuery, { limit: '0' }, false],
    [eventsQuery, { limit: '501' }, false],
    [eventsQuery, { limit: 'many' }, false],
    [eventsQuery, { limit: '' }, false],
    [eventsQuery, { case: 'one' }, false],
    [eventsQuery, { case: [id(1), id(2)] }, false],
    [eventsQuery, { since: '2026' }, false],
    [parseLabel, { scan: '01' }, true],
    [parseLabel, { scan: ['01', '10'] }, true],
    [parseLabel, { scan: 1 }, false],
    [parseLabel, { scan: '01', typed: true }, false],
    [typedLabel, { ref: 'A', lot: 'B', useByOn: '2028-02-29' }, true],
    [typedLabel, { ref: 'A', lot: 'B', useByOn: '2027-02-29' }, false],
    [typedLabel, { ref: 'A', lot: ' ', useByOn: '2027-02-28' }, false],
  ])('%# %j: %s', (schema, body, accepted) => {
    expect(schema.safeParse(body).success).toBe(accepted)
  })
})
