import { z } from 'zod'
import { CASE_COMMANDS, PART_KINDS } from '@bellpull/domain'
import { day, id, instant } from './ids.js'
import { role } from './session.js'

export const roomRef = z.object({ id, number: z.int().positive() })
export type RoomRef = z.infer<typeof roomRef>

/** `GET /rooms` */
export const roomView = roomRef.extend({ revision: z.int().nonnegative() })
export type RoomView = z.infer<typeof roomView>

export const partKind = z.enum(PART_KINDS)
export const caseSide = z.enum(['left', 'right'])
export const caseStatus = z.enum(['planned', 'inProgress', 'closed', 'cancelled'])
export type CaseStatus = z.infer<typeof caseStatus>

/** What the plan expects of one kind of part: a size and the range to have at hand. */
export const planLine = z.object({
  kind: partKind,
  system: z.string(),
  variant: z.string().nullable(),
  planned: z.string().nullable(),
  from: z.string().nullable(),
  to: z.string().nullable(),
  /** A labelled hint such as "other side: size 10, in 2031"; never a default. */
  hint: z.string().nullable(),
})

export const caseView = z
  .object({
    id,
    caseNumber: z.string(),
    room: roomRef,
    startsAt: instant,
    status: caseStatus,
    procedure: z.object({ kind: z.string(), label: z.string() }),
    side: caseSide,
    surgeon: z.object({ id, name: z.string() }),
    team: z.array(z.object({ id, name: z.string(), role, initials: z.string() })),
    linkedCaseId: id.nullable(),
    plan: z.array(planLine),
    /** Position among the room's cases of the day, from 1, and how many there are. */
    ofDay: z.object({ position: z.int(), total: z.int() }),
    startedAt: instant.nullable(),
    timeOutAt: instant.nullable(),
    /** With `timeOutAt` set and this `null`, a time-out is running: nothing interrupts but a hard stop. */
    timeOutEndedAt: instant.nullable(),
    patientOutAt: instant.nullable(),
    closedAt: instant.nullable(),
    version: z.int().positive(),
  })
  .meta({ id: 'Case' })
export type CaseView = z.infer<typeof caseView>

export const casesQuery = z.strictObject({ on: day.optional(), room: id.optional() })

/** `start`, `timeOut`, `signOut`, `reopen`, `cancel`; the last two need a reason. */
export const caseCommand = z.strictObject({
  name: z.enum(CASE_COMMANDS),
  expectedVersion: z.int().positive().optional(),
  reason: z.string().trim().min(3).max(200).optional(),
  /** With `timeOut`: whether it begins or ends. */
  ended: z.boolean().optional(),
  /** With `signOut`: the patient has left the room. */
  patientOut: z.boolean().optional(),
})
export type CaseCommand = z.infer<typeof caseCommand>

export const sizeView = z.object({
  catalogueItemId: id,
  ref: z.string(),
  /** The size as the house says it: "50", "9", "M". */
  label: z.string(),
  variant: z.string().nullable(),
  diameterMm: z.number().nullable(),
  heightMm: z.number().nullable(),
  side: z.enum(['left', 'right', 'either']),
  /** Usable on the case's day, held for nobody, in this case's room. */
  inRoom: z.int(),
  /** The same, outside every room. */
  inCore: z.int(),
  /** Held for other cases. */
  heldElsewhere: z.int(),
  /** Kept by package; what is not is called all the same, and no package is held for it. */
  stocked: z.boolean(),
  soonestUseByOn: day.nullable(),
})
export type SizeView = z.infer<typeof sizeView>

/** One rail: every size of one kind of part of one system. */
export const railView = z
  .object({ kind: partKind, label: z.string(), system: z.string(), sizes: z.array(sizeView) })
  .meta({ id: 'Rail' })
export type RailView = z.infer<typeof railView>
