import { randomUUID } from 'node:crypto'
import { caseView, railView } from '@bellpull/contracts'
import type { Role } from '@bellpull/domain'
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest'
import { z } from 'zod'
import { everyRole, startTestApi, type SignedIn, type TestApi } from '../../../test/app.js'
import { layWorld, type World } from '../../../test/world.js'

let api: TestApi
let who: Record<Role, SignedIn>
let world: World

beforeAll(async () => {
  api = await startTestApi()
  who = await everyRole(api)
  world = await layWorld(api, who.surgeon.id)
})
afterAll(() => api.close())
beforeEach(() => {
  // Past the house's limit of calls and commands, whatever the test before did.
  api.clock.forward(11_000)
  api.published.clear()
})

const type = (code: string) => `urn:bellpull:problem:${code}`
const command = (caseId: string, by: Role, body: object, key?: string) =>
  api.as(who[by]).post(`/cases/${caseId}/commands`, body, key)
const stored = async (caseId: string) =>
  (
    await api.rows<{ status: string; version: number }>('SELECT * FROM surgical_case WHERE id = $1', [caseId])
  )[0]!
const eventsOf = async (caseId: string) =>
  (await api.rows<{ type: string }>('SELECT type FROM event WHERE case_id = $1 ORDER BY seq', [caseId])).map(
    (event) => event.type,
  )

describe('GET /cases', () => {
  it('lists the cases of the day in order of start, each as the contract says', async () => {
    const late = await world.aCase({ startsAt: '2027-03-02T13:00:00Z', room: 1 })
    const early = await world.aCase({
      startsAt: '2027-03-02T07:30:00Z',
      team: [who.scrub.id, who.circulator.id],
    })
    await world.aCase({ startsAt: '2027-03-03T00:00:00Z' })
    const reply = await api.as(who.runner).get('/cases?on=2027-03-02').expect(200)
    const cases = z.array(caseView).parse(reply.body)
    expect(cases.map((found) => found.id)).toEqual([early, late])
    expect(cases[0]).toMatchObject({
      room: { id: world.rooms[0], number: 1 },
      startsAt: '2027-03-02T07:30:00.000Z',
      status: 'planned',
      procedure: { kind: 'shoulder', label: 'Shoulder, anatomic total' },
      side: 'left',
      surgeon: { id: who.surgeon.id, name: 'Test surgeon' },
      linkedCaseId: null,
      plan: [
        { kind: 'head', system: 'Sallowby', variant: 'concentric', planned: '50', from: '48', to: '52' },
      ],
      ofDay: { position: 1, total: 1 },
    })
    expect(cases[0]!.team.map((member) => member.role)).toEqual(['surgeon', 'scrub', 'circulator'])
  })

  it('lists those of one room, and today when no day is given', async () => {
    const today = await world.aCase({ room: 1 })
    const reply = await api.as(who.core).get(`/cases?room=${world.rooms[1]}`).expect(200)
    expect((reply.body as { id: string }[]).map((found) => found.id)).toEqual([today])
  })

  it('counts its place among the cases of the room and day', async () => {
    const first = await world.aCase({ startsAt: '2027-04-02T07:30:00Z' })
    const second = await world.aCase({ startsAt: '2027-04-02T23:59:59Z' })
    await world.aCase({ startsAt: '2027-04-02T08:30:00Z', room: 1 })
    await world.aCase({ startsAt: '2027-04-03T00:00:00Z' })
    const at = async (id: string) =>
      (await api.as(who.core).get(`/cases/${id}`).expect(200)).body as { ofDay: object }
    expect((await at(first)).ofDay).toEqual({ position: 1, total: 2 })
    expect((await at(second)).ofDay).toEqual({ position: 2, total: 2 })
  })

  it.each([
    ['/cases?on=tomorrow', '/on'],
    ['/cases?on=2027-02-30', '/on'],
    ['/cases?room=1', '/room'],
    ['/cases?surgeon=x', '/surgeon'],
    ['/cases?on=2027-03-02&on=2027-03-03', '/on'],
  ])('refuses %s, pointing at %s', async (path, pointer) => {
    const reply = await api.as(who.core).get(path).expect(422)
    expect(reply.body).toMatchObject({ type: type('invalid-input'), errors: [{ pointer }] })
  })

  it.each(['nothing', randomUUID()])('has no case %s', async (id) => {
    await api.as(who.core).get(`/cases/${id}`).expect(404)
    await api.as(who.core).get(`/cases/${id}/sizes`).expect(404)
  })
})

describe('GET /cases/:id/sizes', () => {
  it('counts what is usable on the day and held for nobody: in this room, outside every room, never elsewhere', async () => {
    const caseId = await world.aCase({ startsAt: '2027-05-10T10:00:00Z' })
    const other = await world.aCase({ startsAt: '2027-05-10T10:00:00Z', room: 1 })
    await world.aUnit('HD-50C', { at: world.roomCart })
    await world.aUnit('HD-50C', { useByOn: '2027-05-10' })
    await world.aUnit('HD-50C', { useByOn: '2027-05-09' })
    await world.aUnit('HD-50C', { at: world.otherCart })
    await world.aUnit('HD-50C', { sterile: false })
    await world.aUnit('HD-50C', { state: 'quarantined' })
    const theirs = await world.aCall(other, ['HD-50C'])
    await world.aUnit('HD-50C', { state: 'held', heldFor: theirs.itemIds[0]! })
    const mine = await world.aCall(caseId, ['HD-50C'])
    await world.aUnit('HD-50C', { state: 'held', heldFor: mine.itemIds[0]! })

    const reply = await api.as(who.surgeon).get(`/cases/${caseId}/sizes`).expect(200)
    const rails = z.array(railView).parse(reply.body)
    expect(rails.map((rail) => [rail.kind, rail.system])).toEqual([
      ['head', 'Sallowby'],
      ['femur', 'Sallowby'],
      ['cement', ''],
    ])
    const heads = rails[0]!.sizes
    expect(heads.map((size) => [size.label, size.variant])).toEqual([
      ['48', 'concentric'],
      ['50', 'concentric'],
      ['50', 'eccentric'],
    ])
    expect(heads[1]).toMatchObject({ inRoom: 1, inCore: 1, heldElsewhere: 1, soonestUseByOn: '2027-05-10' })
    expect(heads[2]).toMatchObject({ inRoom: 0, inCore: 0, heldElsewhere: 0, soonestUseByOn: null })
  })

  it('shows no part of the other side', async () => {
    const caseId = await world.aCase({ side: 'right' })
    const reply = await api.as(who.surgeon).get(`/cases/${caseId}/sizes`).expect(200)
    const femurs = z
      .array(railView)
      .parse(reply.body)
      .find((rail) => rail.kind === 'femur')
    expect(femurs?.sizes.map((size) => size.ref)).toEqual(['FM-5R'])
  })
})

describe('POST /cases/:id/commands', () => {
  it('runs a case from its start to its sign-out, in events of the room, and tells the screens each time', async () => {
    const caseId = await world.aCase()
    const [before] = await api.rows<{ revision: number; event_seq: number }>(
      'SELECT * FROM room WHERE number = 1',
    )
    await command(caseId, 'circulator', { name: 'start' }).expect(200)
    await command(caseId, 'surgeon', { name: 'timeOut' }).expect(200)
    await command(caseId, 'scrub', { name: 'timeOut', ended: true }).expect(200)
    const reply = await command(caseId, 'charge', { name: 'signOut', patientOut: true }).expect(200)
    const now = api.clock.now().toISOString()
    expect(caseView.parse(reply.body)).toMatchObject({
      id: caseId,
      status: 'closed',
      startedAt: now,
      timeOutAt: now,
      timeOutEndedAt: now,
      patientOutAt: now,
      closedAt: now,
      version: 5,
    })
    const steps = ['case.started', 'case.timeOutStarted', 'case.timeOutEnded', 'case.signedOut']
    expect(await eventsOf(caseId)).toEqual(steps)
    expect(api.published.all).toEqual(steps.map(() => ({ kind: 'case.changed', caseId })))
    const [after] = await api.rows<{ revision: number; event_seq: number }>(
      'SELECT * FROM room WHERE number = 1',
    )
    expect(after).toMatchObject({ revision: before!.revision, event_seq: before!.event_seq + 4 })
  })

  it('answers the same key with the same words, and does nothing again', async () => {
    const caseId = await world.aCase()
    const key = randomUUID()
    const first = await command(caseId, 'circulator', { name: 'start' }, key).expect(200)
    api.clock.forward(1000)
    const again = await command(caseId, 'circulator', { name: 'start' }, key).expect(200)
    expect(again.text).toBe(first.text)
    expect(await eventsOf(caseId)).toEqual(['case.started'])
    expect(api.published.all).toHaveLength(1)
    const other = await command(caseId, 'circulator', { name: 'timeOut' }, key).expect(422)
    expect(other.body).toMatchObject({ type: type('idempotency-key-reused') })
    // Somebody else's key of the same name is another key.
    await command(caseId, 'charge', { name: 'timeOut' }, key).expect(200)
  })

  it('keeps a key of a refusal free', async () => {
    const caseId = await world.aCase()
    const key = randomUUID()
    await command(caseId, 'circulator', { name: 'timeOut' }, key).expect(409)
    await command(caseId, 'circulator', { name: 'start' }).expect(200)
    await command(caseId, 'circulator', { name: 'timeOut' }, key).expect(200)
  })

  it('does not close a case with something unsettled, and says what', async () => {
    const caseId = await world.aCase({ status: 'inProgress' })
    const { callId, itemIds } = await world.aCall(caseId, ['HD-48C', 'HD-50E'])
    const reply = await command(caseId, 'circulator', { name: 'signOut' }).expect(409)
    expect(reply.body).toMatchObject({
      type: type('not-settled'),
      unsettled: [
        { itemId: itemIds[0], callId, label: 'head 48', variant: 'concentric', stage: 'called' },
        { itemId: itemIds[1], callId, label: 'head 50', variant: 'eccentric', stage: 'called' },
      ],
    })
    await command(caseId, 'charge', { name: 'cancel', reason: 'changed plan' }).expect(409)
    expect(await stored(caseId)).toMatchObject({ status: 'inProgress', version: 1 })
    expect(await eventsOf(caseId)).toEqual([])
    expect(api.published.all).toEqual([])
  })

  it('waits for a call that is being made, and does not close over it', async () => {
    const caseId = await world.aCase({ status: 'inProgress' })
    const rival = api.dataSource.createQueryRunner()
    await rival.startTransaction()
    await rival.query('SELECT 1 FROM room WHERE number = 1 FOR UPDATE')
    const replying = command(caseId, 'circulator', { name: 'signOut' }).then((reply) => reply)
    const waiting = async () =>
      (
        await api.rows(
          `SELECT 1 FROM pg_stat_activity WHERE datname = current_database() AND wait_event_type = 'Lock'`,
        )
      ).length
    await expect.poll(waiting, { timeout: 5_000 }).toBe(1)
    await world.aCall(caseId, ['HD-48C'], (text, values) => rival.query(text, values))
    await rival.commitTransaction()
    await rival.release()
    const reply = await replying
    expect(reply.body).toMatchObject({ type: type('not-settled') })
    expect(await stored(caseId)).toMatchObject({ status: 'inProgress' })
  })

  it('leaves a case open when the patient leaves before all is settled; then the coordinator may close it', async () => {
    const caseId = await world.aCase({ status: 'inProgress' })
    const { itemIds } = await world.aCall(caseId, ['HD-48C'])
    const refused = await command(caseId, 'coordinator', { name: 'signOut', patientOut: true }).expect(409)
    expect(refused.body).toMatchObject({ type: type('patient-not-out') })

    const reply = await command(caseId, 'circulator', { name: 'signOut', patientOut: true }).expect(200)
    expect(reply.body).toMatchObject({ status: 'inProgress', patientOutAt: api.clock.now().toISOString() })
    const unsettled = await command(caseId, 'coordinator', { name: 'signOut' }).expect(409)
    expect(unsettled.body).toMatchObject({ type: type('not-settled') })

    await api.rows(`UPDATE item SET outcome = 'cancelled', settled_at = now() WHERE id = $1`, [itemIds[0]])
    await command(caseId, 'coordinator', { name: 'signOut' }).expect(200)
    expect(await eventsOf(caseId)).toEqual(['case.patientOut', 'case.signedOut'])
  })

  it('opens a closed case again, and a cancelled one, for a reason', async () => {
    const closed = await world.aCase({ status: 'inProgress' })
    await command(closed, 'charge', { name: 'signOut' }).expect(200)
    const reopened = await command(closed, 'coordinator', { name: 'reopen', reason: 'label found' }).expect(
      200,
    )
    expect(reopened.body).toMatchObject({ status: 'inProgress', closedAt: null })

    const cancelled = await world.aCase()
    await command(cancelled, 'charge', { name: 'cancel', reason: 'patient unwell' }).expect(200)
    const planned = await command(cancelled, 'charge', { name: 'reopen', reason: 'well again' }).expect(200)
    expect(planned.body).toMatchObject({ status: 'planned' })
    const [event] = await api.rows('SELECT data FROM event WHERE case_id = $1 AND type = $2', [
      cancelled,
      'case.reopened',
    ])
    expect(event).toEqual({ data: { reason: 'well again' } })
  })

  it.each([
    ['start', 'inProgress', {}, 'case-moved-on'],
    ['timeOut', 'planned', {}, 'case-moved-on'],
    ['timeOut', 'inProgress', { ended: true }, 'case-moved-on'],
    ['signOut', 'planned', {}, 'case-moved-on'],
    ['reopen', 'planned', { reason: 'why not' }, 'case-moved-on'],
    ['start', 'planned', { expectedVersion: 2 }, 'case-moved-on'],
  ] as const)('refuses %s of a case that is %s %o: %s', async (name, status, more, code) => {
    const caseId = await world.aCase({ status })
    const reply = await command(caseId, 'charge', { name, ...more }).expect(409)
    expect(reply.body).toMatchObject({ type: type(code) })
    expect(await stored(caseId)).toMatchObject({ status, version: 1 })
    expect(await eventsOf(caseId)).toEqual([])
    expect(api.published.all).toEqual([])
  })

  it.each(['start', 'timeOut', 'signOut'])('refuses %s of a closed case', async (name) => {
    const caseId = await world.aCase({ status: 'inProgress' })
    await command(caseId, 'charge', { name: 'signOut' }).expect(200)
    const reply = await command(caseId, 'charge', { name }).expect(409)
    expect(reply.body).toMatchObject({ type: type('case-closed'), status: 409 })
  })

  it('refuses in the order that is promised', async () => {
    const caseId = await world.aCase()
    const path = `/cases/${caseId}/commands`
    const code = (reply: { body: unknown }) => (reply.body as { type: string }).type.split(':').at(-1)
    expect(code(await api.as(null).post(path, { name: 'start' }, null))).toBe('not-signed-in')
    expect(code(await api.as(who.runner).post(path, { name: 'start', more: 1 }, null))).toBe('not-permitted')
    expect(code(await api.as(who.charge).post(path, { name: 'start', more: 1 }, null))).toBe(
      'idempotency-key-missing',
    )
    expect(code(await api.as(who.charge).post(path, { name: 'start', more: 1 }, 'x'))).toBe('invalid-input')
    expect(code(await api.as(who.charge).post('/cases/nothing/commands', { name: 'start', more: 1 }))).toBe(
      'invalid-input',
    )
    expect(code(await api.as(who.charge).post(path, { name: 'dance' }))).toBe('invalid-input')
    expect(code(await api.as(who.charge).post(`${path}?quick=1`, { name: 'start' }))).toBe('invalid-input')
    expect(code(await api.as(who.charge).post(path, { name: 'cancel' }))).toBe('invalid-input')
    expect(code(await api.as(who.charge).post('/cases/nothing/commands', { name: 'start' }))).toBe(
      'not-found',
    )
    expect(code(await api.as(who.charge).post(`/cases/${randomUUID()}/commands`, { name: 'start' }))).toBe(
      'not-found',
    )
    expect(await stored(caseId)).toMatchObject({ status: 'planned', version: 1 })
  })

  it('answers a stored key before it looks at the rest', async () => {
    const caseId = await world.aCase()
    const key = randomUUID()
    await command(caseId, 'circulator', { name: 'start' }, key).expect(200)
    const reply = await command(caseId, 'circulator', { name: 'start', more: 1 }, key).expect(422)
    expect(reply.body).toMatchObject({ type: type('idempotency-key-reused') })
  })

  it('lets the sixty-first in ten seconds wait, refused ones counted', async () => {
    const person = await api.signInAs('charge', 'Quick Fingers')
    const path = `/cases/${randomUUID()}/commands`
    for (let n = 0; n < 59; n += 1) await api.as(person).post(path, { name: 'dance' }).expect(422)
    api.clock.forward(9_999)
    await api.as(person).post(path, { name: 'dance' }).expect(422)
    const reply = await api.as(person).post(path, { name: 'dance' }).expect(429)
    expect(reply.body).toMatchObject({ type: type('too-many-requests') })
    expect(Number(reply.get('Retry-After'))).toBeGreaterThan(0)
    await api.as(who.charge).post(path, { name: 'dance' }).expect(422)
    api.clock.forward(10_000)
    await api.as(person).post(path, { name: 'dance' }).expect(422)
  })
})
