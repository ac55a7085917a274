import type { BoardDelta, CallView, ItemView } from '@bellpull/contracts'

/** Ids that read well in a failure: `id(7)` ends in 7. */
export const id = (n: number): string => `00000000-0000-4000-8000-${String(n).padStart(12, '0')}`

const PERSON = { id: id(901), initials: 'JH', name: 'Juniper Hathersedge', role: 'surgeon' } as const

/** An implant that was called and is held; the parts that a test is about are given. */
export const anItem = (given: Partial<ItemView> = {}): ItemView => ({
  id: id(11),
  callId: id(1),
  catalogueItemId: id(501),
  category: 'implant',
  ref: 'SLB-HD-50C',
  label: 'Head 50',
  variant: 'concentric',
  side: 'either',
  stage: 'called',
  outcome: null,
  hold: 'held',
  unit: null,
  alternatives: [],
  heldBy: [],
  pairs: [],
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
  walkOrder: 309,
  replacesItemId: null,
  ...given,
})

/** An early call of room 3 with one item. */
export const aCall = (given: Partial<CallView> = {}): CallView => ({
  id: id(1),
  caseId: id(301),
  room: { id: id(103), number: 3 },
  kind: 'early',
  neededAt: '2032-05-12T11:02:00.000Z',
  calledAt: '2032-05-12T10:52:00.000Z',
  calledBy: PERSON,
  enteredBy: PERSON,
  readBack: null,
  version: 1,
  items: [anItem()],
  caseNumber: '0412-6',
  side: 'left',
  confirmedAt: null,
  revision: 1,
  open: true,
  ...given,
})

/** Revision `revision` of a room: the whole call as it then is. */
export const aDelta = (revision: number, given: Partial<CallView> = {}): BoardDelta => {
  const call = aCall({ revision, ...given })
  return { roomId: call.room.id, revision, event: 'item.accepted', call }
}
