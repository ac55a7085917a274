import type { Role } from '../people/roles.js'
import { CATEGORY_RULES, type Category, type Outcome, type Stage } from './categories.js'

export const CALL_COMMANDS = ['readBack', 'confirm', 'accept', 'cancel', 'verify'] as const
export type CallCommandName = (typeof CALL_COMMANDS)[number]

export const ITEM_COMMANDS = [
  'accept',
  'decline',
  'pull',
  'deliver',
  'verify',
  'open',
  'openUnverified',
  'implant',
  'use',
  'notImplanted',
  'putBack',
  'shelve',
  'change',
  'choose',
  'cancel',
  'reject',
  'handOver',
  'take',
  'takeOver',
  'askRelease',
  'decide',
  'undo',
  'enteredInError',
] as const
export type ItemCommandName = (typeof ITEM_COMMANDS)[number]
export type CommandName = CallCommandName | ItemCommandName

/** Where an item stands: at a station while it is open, or at its end. */
export interface ItemState {
  readonly category: Category
  readonly stage: Stage
  readonly outcome: Outcome | null
  /** A package of this item is on its way back to its bin. */
  readonly putBackPending: boolean
}

/** Where a command leads: to a station, to an end, or nowhere (it changes who or what, not where). */
export type Target =
  | { readonly stage: Stage }
  | { readonly outcome: Outcome }
  | { readonly task: 'shelved' }
  | { readonly same: true }
  | { readonly before: true }

interface Rule {
  /** Stations at which the command may be given, while the item is open. */
  readonly from: readonly Stage[]
  readonly to: Target
  readonly by: readonly Role[]
  /** Only what this release can do is offered and obeyed; the rest is refused and shown nowhere. */
  readonly built: boolean
}

const CALLERS: readonly Role[] = ['surgeon', 'scrub', 'circulator', 'charge']
const FETCHERS: readonly Role[] = ['circulator', 'runner', 'core', 'charge']
const NURSES: readonly Role[] = ['circulator', 'charge']
const SETTLERS: readonly Role[] = ['circulator', 'scrub', 'charge']

const BEFORE_OPENED: readonly Stage[] = ['called', 'accepted', 'pulled', 'inRoom', 'verified']
const WITH_SOMEBODY: readonly Stage[] = ['accepted', 'pulled', 'inRoom', 'verified']
const ANY_STAGE: readonly Stage[] = [...BEFORE_OPENED, 'opened']

/** Commands on one item. Nothing else in the repository decides a stage or an outcome. */
const ITEM_RULES: Readonly<Record<ItemCommandName, Rule>> = {
  accept: { from: ['called'], to: { stage: 'accepted' }, by: FETCHERS, built: true },
  decline: { from: ['accepted'], to: { stage: 'called' }, by: FETCHERS, built: true },
  pull: { from: ['accepted', 'called'], to: { stage: 'pulled' }, by: FETCHERS, built: true },
  deliver: { from: ['pulled'], to: { stage: 'inRoom' }, by: FETCHERS, built: true },
  verify: { from: ['inRoom'], to: { stage: 'verified' }, by: NURSES, built: true },
  open: { from: ['verified'], to: { stage: 'opened' }, by: NURSES, built: true },
  openUnverified: { from: ['inRoom'], to: { stage: 'opened' }, by: NURSES, built: false },
  implant: { from: ['opened'], to: { outcome: 'implanted' }, by: SETTLERS, built: true },
  use: { from: ['opened'], to: { outcome: 'used' }, by: SETTLERS, built: true },
  notImplanted: { from: ['opened'], to: { outcome: 'notImplanted' }, by: SETTLERS, built: true },
  putBack: {
    from: ['pulled', 'inRoom', 'verified'],
    to: { outcome: 'returned' },
    by: ['circulator', 'runner', 'scrub', 'charge'],
    built: true,
  },
  shelve: {
    from: [],
    to: { task: 'shelved' },
    by: ['core', 'runner', 'circulator', 'charge', 'coordinator'],
    built: true,
  },
  change: { from: ANY_STAGE, to: { outcome: 'changed' }, by: CALLERS, built: false },
  choose: {
    from: ['called'],
    to: { outcome: 'changed' },
    by: ['surgeon', 'scrub', 'circulator'],
    built: false,
  },
  cancel: { from: BEFORE_OPENED, to: { outcome: 'cancelled' }, by: CALLERS, built: true },
  reject: { from: ['pulled', 'inRoom', 'verified'], to: { stage: 'called' }, by: FETCHERS, built: false },
  handOver: { from: WITH_SOMEBODY, to: { same: true }, by: FETCHERS, built: false },
  take: { from: WITH_SOMEBODY, to: { same: true }, by: FETCHERS, built: false },
  takeOver: { from: WITH_SOMEBODY, to: { same: true }, by: FETCHERS, built: true },
  askRelease: {
    from: ['called'],
    to: { same: true },
    by: ['circulator', 'core', 'surgeon', 'scrub'],
    built: false,
  },
  decide: { from: ['called', 'accepted'], to: { same: true }, by: ['charge'], built: false },
  undo: {
    // No step that can be taken back ends at *called*, and opening a package cannot be taken back.
    from: WITH_SOMEBODY,
    to: { before: true },
    by: ['surgeon', 'scrub', 'circulator', 'runner', 'core', 'charge'],
    built: true,
  },
  enteredInError: {
    from: ANY_STAGE,
    to: { outcome: 'enteredInError' },
    by: ['circulator', 'core', 'charge', 'coordinator'],
    built: false,
  },
}

/** Commands on a whole call. Where the name is an item's too, every item of the call obeys the item's row. */
const CALL_RULES: Readonly<
  Record<CallCommandName, { readonly by: readonly Role[]; readonly built: boolean }>
> = {
  readBack: { by: ['scrub', 'circulator', 'charge'], built: true },
  confirm: { by: CALLERS, built: true },
  accept: { by: FETCHERS, built: true },
  cancel: { by: CALLERS, built: true },
  verify: { by: NURSES, built: true },
}

/** Commands that may follow an outcome: a wrong last tap, or a wrong entry found later. */
const AFTER_OUTCOME: Readonly<Partial<Record<ItemCommandName, readonly Outcome[]>>> = {
  undo: ['implanted', 'used', 'notImplanted', 'cancelled'],
  enteredInError: ['implanted', 'used', 'notImplanted', 'returned', 'changed', 'cancelled'],
}

/** The steps that `undo` takes back. */
export const UNDOABLE = [
  'accept',
  'pull',
  'deliver',
  'verify',
  'implant',
  'use',
  'notImplanted',
  'cancel',
] as const satisfies readonly ItemCommandName[]
export type UndoableCommand = (typeof UNDOABLE)[number]

export type Transition =
  | { readonly ok: true; readonly to: Target }
  | { readonly ok: false; readonly because: 'wrong-role' | 'not-built' | 'wrong-stage' }

/**
 * May somebody of this role give this command to an item that stands here, and where does it lead?
 * The server asks inside its transaction; screens ask to draw their buttons.
 */
export function transition(item: ItemState, command: ItemCommandName, role: Role): Transition {
  const rule = ITEM_RULES[command]
  if (!rule.by.includes(role)) return { ok: false, because: 'wrong-role' }
  if (!rule.built) return { ok: false, because: 'not-built' }
  if (!stands(item, command, rule)) return { ok: false, because: 'wrong-stage' }
  return { ok: true, to: rule.to }
}

function stands(item: ItemState, command: ItemCommandName, rule: Rule): boolean {
  if (command === 'shelve') return item.putBackPending
  if (item.outcome !== null) return AFTER_OUTCOME[command]?.includes(item.outcome) ?? false

  const category = CATEGORY_RULES[item.category]
  if (!category.stages.includes(item.stage)) return false
  // What is not opened (free text) is delivered straight from accepted and settled in the room.
  if (!category.stages.includes('pulled')) {
    if (command === 'deliver') return item.stage === 'called' || item.stage === 'accepted'
    if (command === 'use' || command === 'putBack') return item.stage === 'inRoom'
    if (command === 'pull' || command === 'verify' || command === 'open') return false
  }
  if (command === 'implant' || command === 'use')
    return rule.from.includes(item.stage) && doneAs(item) === command
  return rule.from.includes(item.stage)
}

const doneAs = (item: ItemState): 'implant' | 'use' =>
  CATEGORY_RULES[item.category].doneAs === 'implanted' ? 'implant' : 'use'

/** The commands that a screen may offer for an item, in the order in which the job goes. */
export function commandsFor(item: ItemState, role: Role): ItemCommandName[] {
  return ITEM_COMMANDS.filter((command) => transition(item, command, role).ok)
}

export type CallPermission =
  { readonly ok: true } | { readonly ok: false; readonly because: 'wrong-role' | 'not-built' }

/** May somebody of this role give this command to a call at all? */
export function callCommandPermission(command: CallCommandName, role: Role): CallPermission {
  const rule = CALL_RULES[command]
  if (!rule.by.includes(role)) return { ok: false, because: 'wrong-role' }
  return rule.built ? { ok: true } : { ok: false, because: 'not-built' }
}

/** May somebody of this role give this command to some item at all, wherever the item stands? */
export function itemCommandPermission(command: ItemCommandName, role: Role): CallPermission {
  const rule = ITEM_RULES[command]
  if (!rule.by.includes(role)) return { ok: false, because: 'wrong-role' }
  return rule.built ? { ok: true } : { ok: false, because: 'not-built' }
}

/** Read-only view of the table for tests and for the page that explains it. */
export const lifecycleRows = (): ReadonlyArray<{ command: ItemCommandName } & Rule> =>
  ITEM_COMMANDS.map((command) => ({ command, ...ITEM_RULES[command] }))

/** Longest time after a step in which the one who took it may take it back, in milliseconds. */
export const UNDO_WITHIN_MS = 2 * 60_000

/** A package verified longer ago than this is scanned again before it is opened, in milliseconds. */
export const VERIFIED_FOR_MS = 15 * 60_000
