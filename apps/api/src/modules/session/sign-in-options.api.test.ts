import { signInOptions } from '@bellpull/contracts'
import request from 'supertest'
import { afterEach, expect, it } from 'vitest'
import { startTestApi, type TestApi } from '../../../test/app.js'
import { DEMO_PASSWORD, personRows } from '../../demo/people.js'

let api: TestApi | undefined
afterEach(() => api?.close())

async function options(demo: '0' | '1', people: boolean) {
  api = await startTestApi({
    env: { BELLPULL_DEMO: demo, BELLPULL_HOUSE_NAME: 'Larchwater General Hospital' },
  })
  if (people)
    await api.rows('INSERT INTO person SELECT * FROM json_populate_recordset(NULL::person, $1)', [
      JSON.stringify(await personRows(api.clock.now())),
    ])
  await api.signInAs('surgeon', 'House Surgeon')
  return signInOptions.parse((await request(api.url).get('/api/v1/session/options').expect(200)).body)
}

it('offers the demo’s accounts in the demo, and nobody else’s', async () => {
  const { houseName, demo } = await options('1', true)
  expect(houseName).toBe('Larchwater General Hospital')
  expect(demo?.password).toBe(DEMO_PASSWORD)
  expect(demo?.accounts).toHaveLength(14)
  expect(demo?.accounts[0]).toEqual({
    email: 'juniper@larchwater.example',
    name: 'Juniper Hathersedge',
    role: 'surgeon',
  })
  const credentials = { email: demo!.accounts[0]!.email, password: demo!.password }
  await request(api!.url).post('/api/v1/session').send(credentials).expect(200)
})

it.each([
  ['the house is not the demo', '0', true],
  ['no demo data is loaded', '1', false],
] as const)('offers no account where %s', async (_where, demo, people) => {
  expect(await options(demo, people)).toEqual({ houseName: 'Larchwater General Hospital', demo: null })
})
