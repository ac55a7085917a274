import {
  itemCommandPermission,
  may,
  UNIT_COMMANDS,
  type Permission,
  type Role,
  type UnitCommandName,
} from '@bellpull/domain'

export type Method = 'get' | 'post' | 'put' | 'patch' | 'delete'

/** A route that is promised and comes with a later release. */
export interface LaterRoute {
  readonly methods: readonly Method[]
  /** Below `/api/v1`, or from the root where it begins with `/fhir`. */
  readonly path: string
  /** Whether this role may use it; `body` for those routes on which a name in it decides. */
  readonly allows: (role: Role, body: unknown) => boolean
  readonly keyRequired?: true
}

const by =
  (permission: Permission) =>
  (role: Role): boolean =>
    may(role, permission)

const READ: readonly Method[] = ['get']
const WRITE: readonly Method[] = ['post', 'put', 'patch', 'delete']
const BOTH: readonly Method[] = [...READ, ...WRITE]

/** Who may give which command to a package: by its name, once the name is known. */
function unitCommand(role: Role, body: unknown): boolean {
  const name: unknown = typeof body === 'object' && body !== null && 'name' in body ? body.name : null
  const known = UNIT_COMMANDS.find((command) => command === name)
  return known === undefined || may(role, `unit.${known}` satisfies `unit.${UnitCommandName}`)
}

/** Who can hold an item can hand it over. */
const handOver = (role: Role): boolean => {
  const permission = itemCommandPermission('handOver', role)
  return permission.ok || permission.because === 'not-built'
}

export const LATER_ROUTES: readonly LaterRoute[] = [
  { methods: READ, path: '/turnaround', allows: by('turnaround.read') },
  { methods: READ, path: '/readiness', allows: by('readiness.read') },
  { methods: READ, path: '/stock/units', allows: by('stock.read') },
  { methods: READ, path: '/stock/units/:id', allows: by('stock.read') },
  { methods: READ, path: '/stock/levels', allows: by('stock.read') },
  { methods: ['post'], path: '/stock/receipts', allows: by('stock.receive') },
  { methods: ['post'], path: '/stock/units/:id/commands', allows: unitCommand, keyRequired: true },
  { methods: ['post'], path: '/stock/recalls', allows: by('recall.make') },
  { methods: ['post'], path: '/stock/imports', allows: by('stock.import') },
  { methods: BOTH, path: '/catalogue{/*rest}', allows: by('catalogue.manage') },
  { methods: BOTH, path: '/pairing-rules{/*rest}', allows: by('catalogue.manage') },
  { methods: WRITE, path: '/people{/*rest}', allows: by('house.manage') },
  { methods: READ, path: '/people/*rest', allows: by('house.manage') },
  { methods: WRITE, path: '/rooms{/*rest}', allows: by('house.manage') },
  { methods: BOTH, path: '/places{/*rest}', allows: by('house.manage') },
  { methods: BOTH, path: '/devices{/*rest}', allows: by('house.manage') },
  { methods: BOTH, path: '/settings{/*rest}', allows: by('house.manage') },
  { methods: ['post'], path: '/me/hand-over', allows: handOver },
]

export const LATER_FHIR_ROUTES: readonly LaterRoute[] = [
  { methods: READ, path: '/{*rest}', allows: by('fhir.read') },
]
