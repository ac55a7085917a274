import { randomInt, randomUUID } from 'node:crypto'
import { callView, type BoardSnapshot, type CallView, type ItemView } from '@bellpull/contracts'
import { gs1CheckDigit, ROLES, type Owner, type PartKind, type Role, type Side } from '@bellpull/domain'
import type request from 'supertest'
import { expect } from 'vitest'
import { startTestApi, TEST_PIN, type Requests, type SignedIn, type TestApi } from './app.js'
import { AccessTokens, hashPin } from '../src/modules/session/index.js'

export type Person = Omit<SignedIn, 'token'> & { readonly initials: string }

/** One product of the catalogue; each test makes its own, so that no test finds the packages of another. */
export interface Product {
  readonly id: string
  readonly ref: string
  readonly gtin: string
  readonly size: string
}
export interface ProductOptions {
  readonly size?: string
  readonly side?: Side
  readonly variant?: string | null
  readonly category?: 'implant' | 'sterile' | 'tray'
  readonly stocked?: boolean
  readonly active?: boolean
  readonly systemId?: string
}

export interface Package {
  readonly id: string
  readonly product: Product
  readonly lot: string
  readonly useByOn: string
  readonly serial: string | null
}
export interface PackageOptions {
  readonly lot?: string
  readonly serial?: string
  readonly useByOn?: string
  /** Id of a place. */
  readonly at?: string
  readonly owner?: Owner
  readonly sterile?: boolean
  readonly state?: string
}

export interface TestCase {
  readonly id: string
  readonly room: Room
}
export interface Room {
  readonly id: string
  readonly number: number
  /** Where its packages stand. */
  readonly cart: string
}

export type Line = readonly [Product, quantity: number] | string
export interface CallOptions {
  readonly kind?: 'early' | 'confirmed' | 'standby'
  readonly inMinutes?: number | null
  readonly by?: Person
  readonly calledBy?: Person
  readonly side?: 'left' | 'right'
  readonly key?: string
}

/** A house of two rooms and its people, on an API and a database of its own. */
export type TestHouse = Awaited<ReturnType<typeof openHouse>>

export const LATER = '2028-06-30'
const yymmdd = (day: string): string => day.slice(2).replaceAll('-', '')

/** What a scanner sends of a package's GS1 DataMatrix. */
export const scanOf = (unit: Omit<Package, 'id'>, over: Partial<Package> = {}): string => {
  const { product, lot, useByOn, serial } = { ...unit, ...over }
  return `]d201${product.gtin}17${yymmdd(useByOn)}10${lot}${serial === null ? '' : `\u001d21${serial}`}`
}
export const typedOf = ({ product, lot, useByOn }: Omit<Package, 'id'>) => ({
  ref: product.ref,
  lot,
  useByOn,
})

/** Opens the house. Close `house.api` in `afterAll`, and call `house.newTest()` in `beforeEach`. */
export async function openHouse() {
  const api = await startTestApi()
  const { rows } = api
  const tokens = new AccessTokens(api.config.tokenSecret, api.clock)
  const [rooms, places] = await layPlaces(api)
  const [supplierId, systemId] = [randomUUID(), randomUUID()]
  await rows(`INSERT INTO supplier (id, name, email) VALUES ($1, 'Maker', 'orders@maker.example')`, [
    supplierId,
  ])
  await aSystem(systemId)
  const pinHash = await hashPin(TEST_PIN)
  const people = {} as Record<Role, Person>
  for (const role of ROLES) people[role] = await aPerson(role)

  async function aSystem(id: string = randomUUID()): Promise<string> {
    await rows('INSERT INTO implant_system (id, name, maker, supplier_id) VALUES ($1, $2, $3, $4)', [
      id,
      `System ${id.slice(0, 8)}`,
      'Maker',
      supplierId,
    ])
    return id
  }

  /** Somebody with a PIN; signed in unless said otherwise. */
  async function aPerson(
    role: Role,
    options: { active?: boolean; signedIn?: boolean } = {},
  ): Promise<Person> {
    const [id, sessionId, now] = [randomUUID(), randomUUID(), api.clock.now()]
    const initials = role.slice(0, 2).toUpperCase()
    await rows(
      `INSERT INTO person (id, email, name, initials, role, active, pin_hash) VALUES ($1, $2, $3, $4, $5, $6, $7)`,
      [id, `${id}@tests.example`, `Test ${role}`, initials, role, options.active ?? true, pinHash],
    )
    if (options.signedIn ?? true)
      await rows(
        `INSERT INTO session (id, person_id, created_at, last_seen_at, expires_at)
         VALUES ($1, $2, $3::timestamptz, $3, $3::timestamptz + interval '30 days')`,
        [sessionId, id, now],
      )
    return { id, sessionId, role, initials, name: `Test ${role}` }
  }

  async function aProduct(kind: PartKind = 'head', options: ProductOptions = {}): Promise<Product> {
    const id = randomUUID()
    const body = `0952${randomInt(1e9).toString().padStart(9, '0')}`
    const product = {
      id,
      ref: `R-${id.slice(0, 8)}`,
      gtin: body + gs1CheckDigit(body),
      size: options.size ?? '50',
    }
    await rows(
      `INSERT INTO catalogue_item (id, ref, gtin, system_id, supplier_id, category, kind, part_name, label, size,
         size_order, variant, side, stocked, active)
       VALUES ($1, $2, $3, $4, $5, $6, $7, $8, $9, $10, $11, $12, $13, $14, $15)`,
      [
        id,
        product.ref,
        product.gtin,
        options.systemId ?? systemId,
        supplierId,
        options.category ?? 'implant',
        kind,
        `Part ${kind}`,
        `${kind} ${product.size}`,
        product.size,
        Number(product.size),
        options.variant ?? null,
        options.side ?? 'either',
        options.stocked ?? true,
        options.active ?? true,
      ],
    )
    return product
  }

  /** A package in the first bin of the core, free, good for long. */
  async function aPackage(product: Product, options: PackageOptions = {}): Promise<Package> {
    const id = randomUUID()
    const one = {
      id,
      product,
      lot: options.lot ?? `L${id.slice(0, 8).toUpperCase()}`,
      useByOn: options.useByOn ?? LATER,
      serial: options.serial ?? null,
    }
    await rows(
      `INSERT INTO unit (id, catalogue_item_id, lot, serial, use_by_on, state, location_id, home_location_id, sterile, owner)
       VALUES ($1, $2, $3, $4, $5, $6, $7, $7, $8, $9)`,
      [
        id,
        product.id,
        one.lot,
        one.serial,
        one.useByOn,
        options.state ?? 'available',
        options.at ?? places.binA,
        options.sterile ?? true,
        options.owner ?? 'owned',
      ],
    )
    return one
  }

  /** A case on the left side that has begun, with the house's surgeon and scrub person. */
  async function aCase(
    options: { room?: Room; side?: 'left' | 'right'; status?: string; team?: Person[] } = {},
  ): Promise<TestCase> {
    const [id, room, now, status] = [
      randomUUID(),
      options.room ?? rooms[0],
      api.clock.now(),
      options.status ?? 'inProgress',
    ]
    await rows(
      `INSERT INTO surgical_case (id, case_number, room_id, starts_at, status, procedure_kind, procedure_label, side,
         surgeon_id, started_at, closed_at)
       VALUES ($1, $2, $3, $4, $5, 'shoulder', 'Shoulder, anatomic total', $6, $7, $8, $9)`,
      [
        id,
        `T-${id.slice(0, 8)}`,
        room.id,
        now,
        status,
        options.side ?? 'left',
        people.surgeon.id,
        status === 'planned' ? null : now,
        status === 'closed' ? now : null,
      ],
    )
    for (const { id: personId } of options.team ?? [people.surgeon, people.scrub])
      await rows('INSERT INTO case_member (case_id, person_id) VALUES ($1, $2)', [id, personId])
    return { id, room }
  }

  const as = (who: Person | null): Requests =>
    api.as(who && { ...who, token: tokens.issue(who.id, who.sessionId) })

  const bodyOf = (lines: readonly Line[], options: CallOptions = {}) => ({
    kind: options.kind ?? 'confirmed',
    neededInMinutes:
      options.inMinutes === undefined ? (options.kind === 'standby' ? null : 10) : options.inMinutes,
    calledBy: (options.calledBy ?? people.surgeon).id,
    side: options.side ?? 'left',
    items: lines.map((line) =>
      typeof line === 'string' ? { text: line } : { catalogueItemId: line[0].id, quantity: line[1] },
    ),
  })

  const tryCall = (where: TestCase, lines: readonly Line[], options: CallOptions = {}): request.Test =>
    as(options.by ?? people.circulator).post(`/cases/${where.id}/calls`, bodyOf(lines, options), options.key)

  const call = async (
    where: TestCase,
    lines: readonly Line[],
    options: CallOptions = {},
  ): Promise<CallView> => done(tryCall(where, lines, options), 201)

  const onItem = (who: Person, item: ItemView, name: string, rest: object = {}, key?: string): request.Test =>
    as(who).post(`/items/${item.id}/commands`, { name, expectedVersion: item.version, ...rest }, key)
  const onCall = (who: Person, of: CallView, name: string, rest: object = {}, key?: string): request.Test =>
    as(who).post(`/calls/${of.id}/commands`, { name, expectedVersion: of.version, ...rest }, key)

  const readBack = (of: CallView): Promise<CallView> => done(onCall(people.circulator, of, 'readBack'))

  /** Brings every item of a call to the room, by the core and the runner, and has it read back. */
  async function broughtIn(
    where: TestCase,
    units: readonly Package[],
    options: CallOptions = {},
  ): Promise<CallView> {
    let made = await call(
      where,
      units.map((unit): Line => [unit.product, 1]),
      options,
    )
    made = await readBack(made)
    for (const [n, unit] of units.entries()) {
      made = await done(onItem(people.core, itemOf(made, n), 'pull', { scan: scanOf(unit) }))
      if (itemOf(made, n).stage === 'pulled')
        made = await done(onItem(people.runner, itemOf(made, n), 'deliver'))
    }
    return made
  }

  const pin = (checker: Person, value: string = TEST_PIN) => ({
    checkerId: checker.id,
    method: 'pin',
    pin: value,
  })

  /** Spoken on a left case; a PIN costs a hash each time, and only tests of PINs need one. */
  const heard = (checker: Person, { size }: Product) => ({
    checkerId: checker.id,
    method: 'spoken',
    heard: { size, side: 'left' },
  })

  /** Verified by the circulating nurse, the scrub person being second. */
  async function verified(where: TestCase, unit: Package, options: CallOptions = {}): Promise<CallView> {
    const brought = await broughtIn(where, [unit], options)
    const checks = { scan: scanOf(unit), intact: true, secondCheck: heard(people.scrub, unit.product) }
    return done(onItem(people.circulator, itemOf(brought), 'verify', checks))
  }
  const opened = async (where: TestCase, unit: Package): Promise<CallView> =>
    done(onItem(people.circulator, itemOf(await verified(where, unit)), 'open'))

  const board = async (): Promise<BoardSnapshot> =>
    (await as(people.charge).get('/board').expect(200)).body as BoardSnapshot

  /** A fingerprint of everything that is stored. */
  async function stored(): Promise<Record<string, unknown>> {
    const tables = ['room', 'call', 'item', 'unit', 'event', 'movement', 'idempotency_key', 'surgical_case']
    const prints = tables.map(
      (name) =>
        `'${name}', (SELECT md5(coalesce(string_agg(t::text, ',' ORDER BY t::text), '')) FROM ${name} t)`,
    )
    return (
      await rows<{ all: Record<string, unknown> }>(`SELECT json_build_object(${prints.join(', ')}) AS all`)
    )[0]!.all
  }

  /** A refusal by its name, which leaves no trace: nothing is stored and nothing sent. */
  async function refused(
    attempt: request.Test,
    code: string,
    status: number = 409,
  ): Promise<Record<string, unknown>> {
    const before = await stored()
    api.published.clear()
    const reply = await attempt
    const body = reply.body as Record<string, unknown>
    expect([reply.status, body['type']], JSON.stringify(body)).toEqual([
      status,
      `urn:bellpull:problem:${code}`,
    ])
    expect(reply.type).toBe('application/problem+json')
    expect(await stored()).toEqual(before)
    expect(api.published.all).toEqual([])
    return body
  }

  const unitRow = async (id: string) =>
    (
      await rows<{ state: string; held_for: string | null; code: string }>(
        'SELECT u.state, u.held_for, l.code FROM unit u JOIN location l ON l.id = u.location_id WHERE u.id = $1',
        [id],
      )
    )[0]!

  /** Nobody is hurried by the limit of commands in ten seconds, and nothing of the test before is left to see. */
  function newTest(): void {
    api.clock.forward(11_000)
    api.published.clear()
  }

  return {
    ...{
      api,
      rows,
      rooms,
      places,
      people,
      systemId,
      aSystem,
      aPerson,
      aProduct,
      aPackage,
      aCase,
      as,
      bodyOf,
    },
    ...{
      tryCall,
      call,
      onItem,
      onCall,
      readBack,
      broughtIn,
      pin,
      heard,
      verified,
      opened,
      board,
      stored,
      refused,
    },
    ...{ unitRow, newTest },
  }
}

/** The call that a request answered with, held against the contract. */
export async function done(attempt: request.Test, status = 200): Promise<CallView> {
  const reply = await attempt
  expect([reply.status, reply.status === status ? null : reply.body]).toEqual([status, null])
  return callView.parse(reply.body)
}

/** @param line from 0 */
export function itemOf(call: CallView, line = 0): ItemView {
  const item = call.items[line]
  if (!item) throw new Error(`the call has no line ${line}`)
  return item
}

async function layPlaces(api: TestApi) {
  const rooms = [1, 2, 3].map((number): Room => ({ id: randomUUID(), number, cart: randomUUID() })) as [
    Room,
    Room,
    Room,
  ]
  const places = { binA: randomUUID(), binB: randomUUID(), hatch: randomUUID(), quarantine: randomUUID() }
  for (const { id, number } of rooms)
    await api.rows('INSERT INTO room (id, number) VALUES ($1, $2)', [id, number])
  const all = [
    [places.binA, 'A-01', 'core', null, 10],
    [places.binB, 'B-01', 'core', null, 20],
    [places.hatch, 'H-1', 'hatch', null, 1],
    [places.quarantine, 'Q-1', 'quarantine', null, 90],
    ...rooms.map(({ id, number, cart }) => [cart, `OR-${number}`, 'room', id, 0]),
  ]
  for (const place of all)
    await api.rows(
      'INSERT INTO location (id, code, zone, room_id, walk_order) VALUES ($1, $2, $3, $4, $5)',
      place,
    )
  return [rooms, places] as const
}
