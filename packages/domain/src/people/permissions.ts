import { ROLES, type Role } from './roles.js'

const EVERYBODY: readonly Role[] = ROLES

/**
 * Who may do what, apart from the commands on calls and items (those stand in `call/lifecycle.ts`).
 * The server asks this table on every route and socket; screens hide what it does not allow.
 */
export const PERMISSIONS = {
  'rooms.read': EVERYBODY,
  'cases.read': EVERYBODY,
  'sizes.read': EVERYBODY,
  'board.read': EVERYBODY,
  'events.readCase': EVERYBODY,
  'events.readHouse': ['charge', 'admin'],
  'labels.parse': EVERYBODY,
  'sizing.read': EVERYBODY,
  'people.read': EVERYBODY,
  'call.make': ['surgeon', 'scrub', 'circulator', 'charge'],
  'case.start': ['surgeon', 'scrub', 'circulator', 'charge'],
  'case.timeOut': ['surgeon', 'scrub', 'circulator', 'charge'],
  /** The coordinator only once the patient is out; before that 409. */
  'case.signOut': ['circulator', 'charge', 'coordinator'],
  'case.reopen': ['charge', 'coordinator'],
  'case.cancel': ['charge', 'coordinator'],
  'turnaround.read': ['charge', 'admin'],
  'readiness.read': ['charge', 'coordinator', 'admin'],
  'stock.read': ['circulator', 'runner', 'core', 'charge', 'coordinator'],
  'stock.receive': ['core', 'coordinator'],
  'unit.move': ['runner', 'core', 'coordinator'],
  'unit.quarantine': ['core', 'charge', 'coordinator'],
  'unit.release': ['coordinator'],
  'unit.writeOff': ['coordinator'],
  'unit.shipBack': ['coordinator'],
  'recall.make': ['coordinator'],
  'stock.import': ['coordinator'],
  'catalogue.manage': ['coordinator', 'admin'],
  'house.manage': ['admin'],
  'fhir.read': ['coordinator', 'admin'],
} as const satisfies Record<string, readonly Role[]>

export type Permission = keyof typeof PERMISSIONS

/** Whether a role may do this at all; the service may still refuse for the case at hand. */
export function may(role: Role, permission: Permission): boolean {
  return (PERMISSIONS[permission] as readonly Role[]).includes(role)
}

/** What the house lets a case be told, and by which permission. */
export const CASE_COMMANDS = ['start', 'timeOut', 'signOut', 'reopen', 'cancel'] as const
export type CaseCommandName = (typeof CASE_COMMANDS)[number]

/** What the stock room does with one package. */
export const UNIT_COMMANDS = ['move', 'quarantine', 'release', 'writeOff', 'shipBack'] as const
export type UnitCommandName = (typeof UNIT_COMMANDS)[number]
