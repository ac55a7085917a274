import { z } from 'zod'
import { id, instant } from './ids.js'

/** What happened, in past tense; the log is append-only. */
export const EVENT_TYPES = [
  'call.called',
  'call.readBack',
  'call.confirmed',
  'call.accepted',
  'call.cancelled',
  'item.accepted',
  'item.declined',
  'item.pulled',
  'item.delivered',
  'item.verified',
  'item.opened',
  'item.openedUnverified',
  'item.implanted',
  'item.used',
  'item.notImplanted',
  'item.returned',
  'item.shelved',
  'item.changed',
  'item.cancelled',
  'item.rejected',
  'item.handedOver',
  'item.taken',
  'item.takenOver',
  'item.undone',
  'item.heldAgain',
  'item.holdLost',
  'item.enteredInError',
  'item.verifyRefused',
  'case.started',
  'case.timeOutStarted',
  'case.timeOutEnded',
  'case.patientOut',
  'case.signedOut',
  'case.reopened',
  'case.cancelled',
] as const
export type EventType = (typeof EVENT_TYPES)[number]

export const eventView = z
  .object({
    id: z.string(),
    at: instant,
    type: z.string(),
    caseId: id,
    callId: id.nullable(),
    itemId: id.nullable(),
    roomId: id,
    actor: z.object({ id, initials: z.string(), name: z.string() }),
    /** What the step was about: sizes, reasons, lot, the second checker. */
    data: z.record(z.string(), z.unknown()),
  })
  .meta({ id: 'Event' })
export type EventView = z.infer<typeof eventView>

export const eventsQuery = z.strictObject({
  case: id.optional(),
  call: id.optional(),
  after: z.string().max(4000).optional(),
  limit: z.coerce.number().int().min(1).max(500).optional(),
})
export const eventsPage = z.object({ items: z.array(eventView), nextCursor: z.string().nullable() })
export type EventsPage = z.infer<typeof eventsPage>
