import { meView, personRef, roomView } from '@bellpull/contracts'
import { afterAll, beforeAll, expect, it } from 'vitest'
import { z } from 'zod'
import { startTestApi, type SignedIn, type TestApi } from '../../../test/app.js'
import { layWorld, type World } from '../../../test/world.js'

let api: TestApi
let surgeon: SignedIn
let world: World
beforeAll(async () => {
  api = await startTestApi()
  surgeon = await api.signInAs('surgeon', 'Ada Quill')
  world = await layWorld(api, surgeon.id)
})
afterAll(() => api.close())

it('names who works here now, without addresses', async () => {
  const gone = await api.signInAs('scrub', 'Bea Long')
  await api.signInAs('scrub', 'Cy Moor')
  await api.rows('UPDATE person SET active = false WHERE id = $1', [gone.id])
  const reply = await api.as(surgeon).get('/people').expect(200)
  expect(z.array(z.strictObject(personRef.shape)).parse(reply.body)).toEqual([
    { id: surgeon.id, initials: 'AQ', name: 'Ada Quill', role: 'surgeon' },
    expect.objectContaining({ name: 'Cy Moor', role: 'scrub' }),
  ])
})

it('lists the rooms by number, with the revision of each', async () => {
  await api.rows('UPDATE room SET revision = 7 WHERE number = 2')
  const reply = await api.as(surgeon).get('/rooms').expect(200)
  expect(z.array(roomView).parse(reply.body)).toEqual([
    { id: world.rooms[0], number: 1, revision: 0 },
    { id: world.rooms[1], number: 2, revision: 7 },
  ])
})

it('tells a person where they work today: once a room, no other day, nothing that was cancelled', async () => {
  await world.aCase({ room: 1, startsAt: '2026-12-01T07:30:00Z' })
  await world.aCase({ room: 1, startsAt: '2026-12-01T23:30:00Z' })
  await world.aCase({ room: 0, startsAt: '2026-12-02T00:00:00Z' })
  const cancelled = await world.aCase({ room: 0, startsAt: '2026-12-01T09:00:00Z' })
  await api.rows(`UPDATE surgical_case SET status = 'cancelled' WHERE id = $1`, [cancelled])
  const reply = await api.as(surgeon).get('/me').expect(200)
  expect(meView.parse(reply.body)).toMatchObject({
    id: surgeon.id,
    name: 'Ada Quill',
    initials: 'AQ',
    role: 'surgeon',
    rooms: [{ id: world.rooms[1], number: 2 }],
  })
})

it.each(['/people?all=1', '/rooms?number=1', '/me?x'])(
  'refuses %s: nothing can be asked of it',
  async (path) => {
    await api.as(surgeon).get(path).expect(422)
  },
)
