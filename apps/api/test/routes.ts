import { randomUUID } from 'node:crypto'
import {
  callCommandPermission,
  CALL_COMMANDS,
  CASE_COMMANDS,
  ITEM_COMMANDS,
  itemCommandPermission,
  may,
  ROLES,
  UNIT_COMMANDS,
  type CallPermission,
  type Permission,
  type Role,
} from '@bellpull/domain'

/** One route as somebody meets it: with a body that decides, where one does. */
export interface Route {
  readonly method: 'get' | 'post' | 'put' | 'patch' | 'delete'
  /** Below `/api/v1`, unless it begins with `/fhir`. */
  readonly path: string
  readonly body?: object
  /** Roles that get past 403. */
  readonly roles: readonly Role[]
  /** What they get then: a route that comes later, or something that does not exist, is 404. */
  readonly then: number
}

const nobody = randomUUID()
const LABEL = '(01)09506000134352(17)301231(10)L1'
const by = (permission: Permission): readonly Role[] => ROLES.filter((role) => may(role, permission))
const allowed = (of: (role: Role) => CallPermission): readonly Role[] =>
  ROLES.filter((role) => {
    const permission = of(role)
    return permission.ok || permission.because === 'not-built'
  })

const read = (path: string, permission: Permission, then = 200): Route => ({
  method: 'get',
  path,
  roles: by(permission),
  then,
})
const later = (method: Route['method'], path: string, permission: Permission, body?: object): Route => ({
  method,
  path,
  roles: by(permission),
  then: 404,
  ...(body && { body }),
})

/** Every route that the product has or has promised, with who may use it; taken from the tables of the domain. */
export const ROUTES: readonly Route[] = [
  { method: 'get', path: '/me', roles: ROLES, then: 200 },
  read('/people', 'people.read'),
  read('/rooms', 'rooms.read'),
  read('/cases', 'cases.read'),
  read(`/cases/${nobody}`, 'cases.read', 404),
  read(`/cases/${nobody}/sizes`, 'sizes.read', 404),
  read(`/cases/${nobody}/calls`, 'cases.read', 404),
  read('/board', 'board.read'),
  read('/events', 'events.readHouse'),
  read(`/events?case=${nobody}`, 'events.readCase', 404),
  read('/sizing/head?diameterMm=50&ratio=0.75', 'sizing.read'),
  {
    method: 'post',
    path: '/labels/parse',
    body: { scan: LABEL },
    roles: by('labels.parse'),
    then: 200,
  },
  {
    method: 'post',
    path: `/cases/${nobody}/calls`,
    body: {
      kind: 'early',
      neededInMinutes: 10,
      calledBy: nobody,
      side: 'left',
      items: [{ catalogueItemId: nobody, quantity: 1 }],
    },
    roles: by('call.make'),
    then: 404,
  },
  ...CASE_COMMANDS.map((name): Route => ({
    method: 'post',
    path: `/cases/${nobody}/commands`,
    body: { name, ...(['reopen', 'cancel'].includes(name) && { reason: 'because' }) },
    roles: by(`case.${name}`),
    then: 404,
  })),
  ...CALL_COMMANDS.map((name): Route => ({
    method: 'post',
    path: `/calls/${nobody}/commands`,
    body: {
      name,
      expectedVersion: 1,
      ...(name === 'verify' && { items: [{ itemId: nobody, scan: LABEL }] }),
    },
    roles: allowed((role) => callCommandPermission(name, role)),
    then: 404,
  })),
  ...ITEM_COMMANDS.map((name): Route => ({
    method: 'post',
    path: `/items/${nobody}/commands`,
    body: {
      name,
      expectedVersion: 1,
      ...(name === 'notImplanted' && { reason: 'other' }),
      ...(name === 'verify' && { scan: LABEL }),
    },
    roles: allowed((role) => itemCommandPermission(name, role)),
    then: 404,
  })),

  later('get', '/turnaround', 'turnaround.read'),
  later('get', '/readiness?on=2026-12-02', 'readiness.read'),
  later('get', '/stock/units', 'stock.read'),
  later('get', `/stock/units/${nobody}`, 'stock.read'),
  later('get', '/stock/levels', 'stock.read'),
  later('post', '/stock/receipts', 'stock.receive'),
  ...UNIT_COMMANDS.map((name) => later('post', `/stock/units/${nobody}/commands`, `unit.${name}`, { name })),
  later('post', '/stock/recalls', 'recall.make'),
  later('post', '/stock/imports', 'stock.import'),
  later('get', '/catalogue', 'catalogue.manage'),
  later('post', '/catalogue', 'catalogue.manage'),
  later('patch', `/catalogue/${nobody}`, 'catalogue.manage'),
  later('get', '/pairing-rules', 'catalogue.manage'),
  later('put', `/pairing-rules/${nobody}`, 'catalogue.manage'),
  later('post', '/people', 'house.manage'),
  later('get', `/people/${nobody}`, 'house.manage'),
  later('patch', `/people/${nobody}`, 'house.manage'),
  later('post', '/rooms', 'house.manage'),
  later('get', '/places', 'house.manage'),
  later('post', '/places', 'house.manage'),
  later('get', '/devices', 'house.manage'),
  later('delete', `/devices/${nobody}`, 'house.manage'),
  later('get', '/settings', 'house.manage'),
  later('put', '/settings/anything', 'house.manage'),
  { method: 'post', path: '/me/hand-over', roles: ['circulator', 'runner', 'core', 'charge'], then: 404 },
  later('get', '/fhir/R4/metadata', 'fhir.read'),
  later('get', `/fhir/R4/Device/${nobody}`, 'fhir.read'),
]
