import { randomUUID } from 'node:crypto'
import type { CallView } from '@bellpull/contracts'
import type request from 'supertest'
import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, test } from 'vitest'
import {
  itemOf,
  openHouse,
  scanOf,
  type Product,
  type TestCase,
  type TestHouse,
} from '../../../test/house.js'
import { holdLock, untilWaiting, type Rival } from '../../../test/rival.js'

let house: TestHouse
let rival: Rival | undefined
let mine: TestCase
let other: TestCase
let head: Product
beforeAll(async () => {
  house = await openHouse()
})
afterAll(() => house.api.close())
beforeEach(async () => {
  house.newTest()
  mine = await house.aCase()
  other = await house.aCase({ room: house.rooms[1] })
  head = await house.aProduct()
})
afterEach(() => rival?.letGo())

interface Reply {
  readonly status: number
  readonly body: CallView & { readonly type?: string; readonly detail?: string }
}
/** Sent at once: supertest alone would wait until somebody asks for the answer. */
const sent = (attempt: request.Test): Promise<Reply> => attempt.then((reply) => reply as unknown as Reply)

async function behind(
  lock: string,
  values: unknown[],
  attempts: () => request.Test[],
  waiting = 2,
): Promise<Reply[]> {
  rival = await holdLock(house.api, lock, values)
  const replies = attempts().map(sent)
  await untilWaiting(house.api, waiting)
  await rival.letGo()
  return Promise.all(replies)
}
const ROOM = 'SELECT 1 FROM room WHERE id = $1 FOR UPDATE'
const UNIT = 'SELECT 1 FROM unit WHERE id = $1 FOR UPDATE'
const byStatus = (replies: Reply[]) => [...replies].sort((a, b) => a.status - b.status) as [Reply, Reply]
const code = ({ body }: Reply) => body.type?.split(':').at(-1)
const heldUnits = () =>
  house.rows<{ unit_id: string; items: number }>(
    `SELECT unit_id, count(*)::int AS items FROM item WHERE unit_id IS NOT NULL AND outcome IS NULL GROUP BY 1 HAVING count(*) > 1`,
  )

describe('two rooms call the last package at once', () => {
  test.each([
    ['in one line', [] as string[]],
    ['with something in words', ['Stool']],
  ])('%s: one holds it, the other has none free and sees who holds it', async (_how, extra) => {
    const unit = await house.aPackage(head)
    const replies = await behind(UNIT, [unit.id], () =>
      [mine, other].map((where) => house.tryCall(where, [[head, 1], ...extra])),
    )
    expect(replies.map(({ status }) => status)).toEqual([201, 201])
    const items = replies.map(({ body }) => itemOf(body))
    expect(items.map(({ hold }) => hold).sort()).toEqual(['held', 'noneFree'])
    const held = replies.find(({ body }) => itemOf(body).hold === 'held')!.body
    const none = replies.find(({ body }) => itemOf(body).hold === 'noneFree')!.body
    expect(itemOf(none).heldBy).toEqual([
      { room: { id: held.room.id, number: held.room.number }, kind: 'confirmed' },
    ])
    expect(await house.unitRow(unit.id)).toMatchObject({ held_for: itemOf(held).id })
    expect(await heldUnits()).toEqual([])
  })

  test('two left for two: neither waits for the other, and nobody goes without', async () => {
    const units = [await house.aPackage(head), await house.aPackage(head)]
    const replies = await behind(ROOM, [mine.room.id], () =>
      [1, 2].map(() => house.tryCall(mine, [[head, 1]])),
    )
    expect(replies.map(({ body }) => itemOf(body).hold)).toEqual(['held', 'held'])
    expect(replies.map(({ body }) => itemOf(body).unit?.id).sort()).toEqual(units.map(({ id }) => id).sort())
    const revisions = replies.map(({ body }) => body.revision).sort((a, b) => a - b)
    expect(revisions[1]).toBe(revisions[0]! + 1)
  })

  test('a package that somebody only looks at is waited for, not called none free', async () => {
    const unit = await house.aPackage(head)
    const [reply] = await behind(UNIT, [unit.id], () => [house.tryCall(mine, [[head, 1]])], 1)
    expect(itemOf(reply!.body)).toMatchObject({ hold: 'held', unit: { id: unit.id } })
  })
})

test('what comes free while a call waits for another package is seen, and not called none free', async () => {
  const taken = await house.aPackage(head)
  const comes = await house.aPackage(head, { state: 'quarantined' })
  rival = await holdLock(
    house.api,
    `UPDATE unit SET state = CASE id WHEN $1 THEN 'quarantined' ELSE 'available' END WHERE id IN ($1, $2)`,
    [taken.id, comes.id],
  )
  const call = sent(house.tryCall(mine, [[head, 1]]))
  await untilWaiting(house.api, 1)
  await rival.commit()
  expect(itemOf((await call).body)).toMatchObject({ hold: 'held', unit: { id: comes.id } })
})

describe('two people give the same command at once', () => {
  test.each(['item', 'call'])(
    'accept of the %s: the first wins, the second is told, one delta',
    async (what) => {
      await house.aPackage(head)
      const call = await house.call(mine, [[head, 1]])
      house.api.published.clear()
      const { runner, core } = house.people
      const [won, refused] = byStatus(
        await behind(ROOM, [mine.room.id], () =>
          [runner, core].map((who) =>
            what === 'item' ? house.onItem(who, itemOf(call), 'accept') : house.onCall(who, call, 'accept'),
          ),
        ),
      )
      expect(won.status).toBe(200)
      expect([refused.status, code(refused)]).toEqual([409, `${what}-moved-on`])
      expect(house.api.published.deltas).toHaveLength(1)
      expect(itemOf(won.body).version).toBe(2)
    },
  )

  test('read back: once', async () => {
    const call = await house.call(mine, ['Stool'])
    const { scrub, circulator } = house.people
    const [won, refused] = byStatus(
      await behind(ROOM, [mine.room.id], () =>
        [scrub, circulator].map((who) => house.onCall(who, call, 'readBack')),
      ),
    )
    expect([won.status, code(refused)]).toEqual([200, 'call-moved-on'])
  })
})

describe('the same key twice at once', () => {
  test.each([
    ['in one line', [] as string[]],
    ['with something in words', ['Stool']],
  ])(
    'a call %s: the second is told that the first still runs; asked again it has its answer',
    async (_how, extra) => {
      await house.aPackage(head)
      const key = randomUUID()
      const attempt = () => house.tryCall(mine, [[head, 1], ...extra], { key })
      rival = await holdLock(house.api, ROOM, [mine.room.id])
      const first = sent(attempt())
      await untilWaiting(house.api, 1)
      const second = await sent(attempt())
      expect([second.status, code(second)]).toEqual([409, 'in-progress'])
      const reused = await sent(house.tryCall(mine, [[head, 3]], { key }))
      expect([reused.status, code(reused)]).toEqual([409, 'in-progress'])
      await rival.letGo()
      const made = await first
      expect(made.status).toBe(201)
      expect((await sent(attempt())).body).toEqual(made.body)
      expect(await house.rows('SELECT 1 FROM call WHERE case_id = $1', [mine.id])).toHaveLength(1)
      expect(house.api.published.deltas).toHaveLength(1)
    },
  )

  test('a command: likewise', async () => {
    await house.aPackage(head)
    const call = await house.call(mine, [[head, 1]])
    const key = randomUUID()
    const attempt = () => house.onItem(house.people.core, itemOf(call), 'accept', {}, key)
    rival = await holdLock(house.api, ROOM, [mine.room.id])
    const first = sent(attempt())
    await untilWaiting(house.api, 1)
    expect(code(await sent(attempt()))).toBe('in-progress')
    const bad = await sent(house.onItem(house.people.core, itemOf(call), 'accept', { hurry: true }, key))
    expect(code(bad)).toBe('in-progress')
    await rival.letGo()
    const done = await first
    expect(done.status).toBe(200)
    expect((await sent(attempt())).body).toEqual(done.body)
  })
})

describe('an early hold that two want', () => {
  test('two confirmed at once: one takes it, the other has none free, the early room is told once', async () => {
    const third = await house.aCase({ room: house.rooms[2] })
    const unit = await house.aPackage(head)
    const early = await house.call(third, [[head, 1]], { kind: 'early', inMinutes: 60 })
    const waiting = [
      await house.readBack(await house.call(mine, [[head, 1]], { kind: 'early' })),
      await house.readBack(await house.call(other, [[head, 1]], { kind: 'early' })),
    ]
    house.api.published.clear()
    const replies = await behind(ROOM, [third.room.id], () =>
      waiting.map((call) => house.onCall(house.people.charge, call, 'confirm')),
    )
    expect(replies.map(({ status }) => status)).toEqual([200, 200])
    expect(replies.map(({ body }) => itemOf(body).hold).sort()).toEqual(['held', 'noneFree'])
    const winner = replies.find(({ body }) => itemOf(body).hold === 'held')!
    expect(await house.unitRow(unit.id)).toMatchObject({ held_for: itemOf(winner.body).id })
    expect(house.api.published.deltas.filter(({ roomId }) => roomId === third.room.id)).toHaveLength(1)
    expect((await house.board()).calls.find(({ id }) => id === early.id)?.items[0]?.hold).toBe('noneFree')
    expect(await heldUnits()).toEqual([])
  })

  test('the early room pulls it at the moment it is taken: whoever is first has it, never both', async () => {
    const unit = await house.aPackage(head)
    const early = await house.call(other, [[head, 1]], { kind: 'early', inMinutes: 60 })
    const [pulled, made] = await behind(ROOM, [other.room.id], () => [
      house.onItem(house.people.core, itemOf(early), 'pull', { scan: scanOf(unit) }),
      house.tryCall(mine, [[head, 1]], { inMinutes: 0 }),
    ])
    const taken = itemOf(made!.body).hold === 'held'
    expect(pulled!.status).toBe(taken ? 409 : 200)
    const owner = taken ? itemOf(made!.body).id : itemOf(early).id
    expect(await house.unitRow(unit.id)).toMatchObject({ held_for: owner })
    expect(await heldUnits()).toEqual([])
  })

  test('a new early hold in a room that was not looked at before is taken all the same', async () => {
    const unit = await house.aPackage(head)
    const early = await house.call(other, [[head, 1]], { kind: 'early', inMinutes: 60 })
    // Confirmed while its own room is held: by the time it goes on, the hold lies in a room it has not locked.
    const call = await house.readBack(await house.call(mine, [[head, 1]], { kind: 'early' }))
    const [reply] = await behind(
      ROOM,
      [mine.room.id],
      () => [house.onCall(house.people.charge, call, 'confirm')],
      1,
    )
    expect(itemOf(reply!.body)).toMatchObject({ hold: 'held', unit: { id: unit.id } })
    expect((await house.board()).calls.find(({ id }) => id === early.id)?.items[0]?.hold).toBe('noneFree')
  })
})

describe('packages that change hands', () => {
  test('two rooms each pull what the other holds: swapped once, nobody loses a package', async () => {
    const units = [await house.aPackage(head), await house.aPackage(head)]
    const calls = [await house.call(mine, [[head, 1]]), await house.call(other, [[head, 1]])] as const
    const heldBy = (call: CallView) => units.find(({ id }) => id === itemOf(call).unit?.id)!
    const [mineHeld, otherHeld] = [heldBy(calls[0]), heldBy(calls[1])]
    const ids = [mine.room.id, other.room.id]
    const replies = await behind('SELECT 1 FROM room WHERE id = ANY($1) FOR UPDATE', [ids], () => [
      house.onItem(house.people.core, itemOf(calls[0]), 'pull', { scan: scanOf(otherHeld) }),
      house.onItem(house.people.runner, itemOf(calls[1]), 'pull', { scan: scanOf(mineHeld) }),
    ])
    // The swap touches the other item too: its own pull was meant for an item that has gone on since.
    const [won, second] = byStatus(replies)
    expect(won.status).toBe(200)
    expect([second.status, code(second)]).toEqual([409, 'item-moved-on'])
    expect(await heldUnits()).toEqual([])
    const holds = await house.rows('SELECT 1 FROM unit WHERE held_for = ANY($1)', [
      calls.map((call) => itemOf(call).id),
    ])
    expect(holds).toHaveLength(2)
  })

  test('one that somebody else takes while it is being scanned is looked at again', async () => {
    const held = await house.aPackage(head, { useByOn: '2027-01-31' })
    const call = await house.call(mine, [[head, 1]])
    const free = await house.aPackage(head)
    rival = await holdLock(house.api, `UPDATE unit SET note = 'in hand' WHERE id = $1`, [free.id])
    const pull = sent(house.onItem(house.people.core, itemOf(call), 'pull', { scan: scanOf(free) }))
    await untilWaiting(house.api, 1)
    const taking = sent(house.tryCall(other, [[head, 1]]))
    await untilWaiting(house.api, 2)
    await rival.letGo()
    const replies = await Promise.all([pull, taking])
    expect(replies.map(({ status }) => status)).toEqual([200, 201])
    expect(await heldUnits()).toEqual([])
    const rows = await Promise.all([held, free].map(({ id }) => house.unitRow(id)))
    expect(rows.map(({ held_for }) => held_for).sort()).toEqual(
      replies.map(({ body }) => itemOf(body).id).sort(),
    )
  })
})

test('a case that is signed out while a call for it waits gets no call', async () => {
  await house.aPackage(head)
  for (const extra of [[], ['Stool']]) {
    const where = await house.aCase()
    rival = await holdLock(house.api, ROOM, [where.room.id])
    const signOut = sent(
      house
        .as(house.people.circulator)
        .post(`/cases/${where.id}/commands`, { name: 'signOut', patientOut: true }),
    )
    await untilWaiting(house.api, 1)
    const call = sent(house.tryCall(where, [[head, 1], ...extra]))
    await untilWaiting(house.api, 2)
    await rival.letGo()
    expect((await signOut).status).toBe(200)
    expect(code(await call)).toBe('case-closed')
  }
})
