import { z } from 'zod'
import type { CALL_COMMANDS, ITEM_COMMANDS } from '@bellpull/domain'
import { CALL_KINDS, CATEGORIES, FREE_TEXT_MAX, HOLDS, OUTCOMES, SIDES, STAGES } from '@bellpull/domain'
import { caseSide, partKind, roomRef } from './cases.js'
import { day, gtin, id, instant } from './ids.js'
import { scan, typedLabel } from './labels.js'
import { personRef } from './people.js'

export const callKind = z.enum(CALL_KINDS)
export const side = z.enum(SIDES)

export const unitView = z.object({
  id,
  gtin,
  lot: z.string(),
  serial: z.string().nullable(),
  useByOn: day,
  location: z.object({ id, code: z.string(), zone: z.string() }),
})
export type UnitView = z.infer<typeof unitView>

export const pairResult = z.enum(['fits', 'mismatch', 'notChecked', 'open'])

export const itemView = z
  .object({
    id,
    callId: id,
    catalogueItemId: id.nullable(),
    category: z.enum(CATEGORIES),
    /** Catalogue number; empty for free text. */
    ref: z.string(),
    /** What is said: "Head 50", or the free text. */
    label: z.string(),
    variant: z.string().nullable(),
    /** The side the part fits. */
    side,
    stage: z.enum(STAGES),
    outcome: z.enum(OUTCOMES).nullable(),
    hold: z.enum(HOLDS),
    unit: unitView.nullable(),
    /** Only for `noneFree`: the nearest sizes of the same system, as facts. */
    alternatives: z.array(
      z.object({ catalogueItemId: id, label: z.string(), inRoom: z.int(), inCore: z.int() }),
    ),
    /** Only for `noneFree`: every holder of the same product, the own room included. */
    heldBy: z.array(z.object({ room: roomRef, kind: callKind })),
    pairs: z.array(z.object({ itemId: id, result: pairResult })),
    acceptedBy: personRef.nullable(),
    offeredTo: personRef.nullable(),
    openedUnverified: z.boolean(),
    version: z.int().positive(),

    /** Kind of part ("head"), its name ("Humeral head"), its size as said ("50"), its system. */
    kind: partKind,
    partName: z.string(),
    size: z.string().nullable(),
    system: z.string().nullable(),
    acceptedAt: instant.nullable(),
    pulledAt: instant.nullable(),
    inRoomAt: instant.nullable(),
    verifiedAt: instant.nullable(),
    openedAt: instant.nullable(),
    settledAt: instant.nullable(),
    /** The label was typed, not scanned, at pull or at verify. */
    typed: z.boolean(),
    reason: z.string().nullable(),
    /** A package on its way back to its bin. */
    putBack: z
      .object({ toCode: z.string(), since: instant, inspect: z.boolean(), walkOrder: z.int() })
      .nullable(),
    /** Walking order of the place where the held package lies. */
    walkOrder: z.int().nullable(),
    /** The item that this one takes the place of. */
    replacesItemId: id.nullable(),
  })
  .meta({ id: 'Item' })
export type ItemView = z.infer<typeof itemView>

export const callView = z
  .object({
    id,
    caseId: id,
    room: roomRef,
    kind: callKind,
    neededAt: instant.nullable(),
    calledAt: instant,
    calledBy: personRef,
    enteredBy: personRef,
    readBack: z.object({ by: personRef, at: instant }).nullable(),
    version: z.int().positive(),
    items: z.array(itemView),

    caseNumber: z.string(),
    /** The side of the case. */
    side: caseSide,
    confirmedAt: instant.nullable(),
    /** Revision of the room that this state of the call belongs to. */
    revision: z.int().nonnegative(),
    /** Something is left to do: an item without outcome, or a package to put back. */
    open: z.boolean(),
  })
  .meta({ id: 'Call' })
export type CallView = z.infer<typeof callView>

const neededInMinutes = z.int().min(0).max(600)

/** Characters as people and PostgreSQL count them, not the halves in which JavaScript keeps some of them. */
const freeText = z
  .string()
  .trim()
  .min(1)
  .refine((text) => [...text].length <= FREE_TEXT_MAX, {
    error: `must be at most ${FREE_TEXT_MAX} characters long`,
  })
  .meta({ maxLength: FREE_TEXT_MAX })

export const makeCallLine = z.union([
  z.strictObject({ catalogueItemId: id, quantity: z.int().min(1).max(9) }),
  z.strictObject({ text: freeText }),
])

/** `POST /cases/:id/calls` */
export const makeCall = z
  .strictObject({
    kind: callKind,
    neededInMinutes: neededInMinutes.nullable(),
    calledBy: id,
    side: caseSide,
    items: z.array(makeCallLine).min(1).max(20),
  })
  .refine((call) => (call.kind === 'standby') === (call.neededInMinutes === null), {
    path: ['neededInMinutes'],
    error: 'Stand by has no time; every other kind has one',
  })
export type MakeCall = z.infer<typeof makeCall>

const expectedVersion = z.int().positive()
const note = z.string().trim().max(200).optional()

/** What was scanned or typed from a label. */
const labelInput = { scan: scan.optional(), typed: typedLabel.optional() }
const oneLabel = (value: { scan?: unknown; typed?: unknown }) =>
  (value.scan === undefined) !== (value.typed === undefined)
const atMostOneLabel = (value: { scan?: unknown; typed?: unknown }) =>
  value.scan === undefined || value.typed === undefined
const LABEL_WANTED = 'Scan the label or type it'

/** The second person's check. */
export const secondCheck = z.discriminatedUnion('method', [
  z.strictObject({ method: z.literal('pin'), checkerId: id, pin: z.string().min(1).max(12) }),
  z.strictObject({
    method: z.literal('spoken'),
    checkerId: id,
    heard: z.strictObject({
      size: z.union([z.string().trim().min(1).max(40), z.number().transform(String)]),
      side,
    }),
  }),
  z.strictObject({ method: z.literal('touch'), checkerId: id }),
])
export type SecondCheck = z.infer<typeof secondCheck>

/** For a pair that does not fit, and for nothing else. */
const pairOverride = z.strictObject({ surgeonId: id, reason: z.string().trim().min(3).max(200) })
const checks = {
  intact: z.boolean().optional(),
  secondCheck: secondCheck.optional(),
  override: pairOverride.optional(),
}

/** `POST /calls/:id/commands`, by name. */
export const CALL_COMMAND_BODIES = {
  readBack: z.strictObject({ name: z.literal('readBack'), expectedVersion }),
  confirm: z.strictObject({
    name: z.literal('confirm'),
    expectedVersion,
    neededInMinutes: neededInMinutes.optional(),
  }),
  accept: z.strictObject({ name: z.literal('accept'), expectedVersion }),
  cancel: z.strictObject({ name: z.literal('cancel'), expectedVersion, reason: note }),
  verify: z.strictObject({
    name: z.literal('verify'),
    expectedVersion,
    items: z
      .array(
        z
          .strictObject({ itemId: id, ...labelInput })
          .refine(oneLabel, { path: ['scan'], error: LABEL_WANTED }),
      )
      .min(1)
      .max(20)
      .refine((items) => new Set(items.map(({ itemId }) => itemId)).size === items.length, {
        error: 'names an item twice',
      }),
    ...checks,
  }),
} as const satisfies Record<(typeof CALL_COMMANDS)[number], z.ZodType>

export const NOT_IMPLANTED_REASONS = ['sizeChanged', 'damaged', 'contaminated', 'defect', 'other'] as const

const plain = <N extends (typeof ITEM_COMMANDS)[number]>(name: N) =>
  z.strictObject({ name: z.literal(name), expectedVersion, reason: note })

/** `POST /items/:id/commands`, by name: every command that this release can do. */
export const ITEM_COMMAND_BODIES = {
  accept: plain('accept'),
  decline: plain('decline'),
  pull: z
    .strictObject({ name: z.literal('pull'), expectedVersion, ...labelInput })
    .refine(atMostOneLabel, { path: ['scan'], error: LABEL_WANTED }),
  deliver: plain('deliver'),
  verify: z
    .strictObject({ name: z.literal('verify'), expectedVersion, ...labelInput, ...checks })
    .refine(oneLabel, { path: ['scan'], error: LABEL_WANTED }),
  open: z
    .strictObject({ name: z.literal('open'), expectedVersion, ...labelInput })
    .refine(atMostOneLabel, { path: ['scan'], error: LABEL_WANTED }),
  implant: plain('implant'),
  use: plain('use'),
  notImplanted: z.strictObject({
    name: z.literal('notImplanted'),
    expectedVersion,
    reason: z.enum(NOT_IMPLANTED_REASONS),
    note,
  }),
  putBack: z.strictObject({
    name: z.literal('putBack'),
    expectedVersion,
    reason: note,
    /** From an infected case: to inspection, not to the shelf. */
    infected: z.boolean().optional(),
  }),
  shelve: z.strictObject({
    name: z.literal('shelve'),
    expectedVersion,
    /** The bin that was scanned or typed; left out, the package's own bin. */
    binCode: z.string().trim().min(1).max(20).optional(),
    inspect: z.boolean().optional(),
  }),
  cancel: plain('cancel'),
  takeOver: plain('takeOver'),
  undo: plain('undo'),
} as const satisfies Partial<Record<(typeof ITEM_COMMANDS)[number], z.ZodType>>

export type CallCommandBody = {
  [N in keyof typeof CALL_COMMAND_BODIES]: z.infer<(typeof CALL_COMMAND_BODIES)[N]>
}[keyof typeof CALL_COMMAND_BODIES]
export type ItemCommandBody = {
  [N in keyof typeof ITEM_COMMAND_BODIES]: z.infer<(typeof ITEM_COMMAND_BODIES)[N]>
}[keyof typeof ITEM_COMMAND_BODIES]
