import { headView, labelView } from '@bellpull/contracts'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { startTestApi, type SignedIn, type TestApi } from '../../../test/app.js'

let api: TestApi
let person: SignedIn
beforeAll(async () => {
  api = await startTestApi()
  person = await api.signInAs('core')
})
afterAll(() => api.close())

const read = (scan: unknown) => api.as(person).post('/labels/parse', { scan })

describe('POST /labels/parse', () => {
  it.each([
    ['an element string', ']d20109521100100489172811301OL26A014'.replace('1OL', '10L')],
    ['bracketed text', '(01)09521100100489(17)281130(10)L26A014'],
    ['two barcodes of one label', ['(01)09521100100489', '(17)281130(10)L26A014']],
  ])('reads %s', async (_what, scan) => {
    const reply = await read(scan).expect(200)
    expect(labelView.parse(reply.body)).toEqual({
      scheme: 'gs1',
      gtin: '09521100100489',
      lot: 'L26A014',
      useByOn: '2028-11-30',
      warnings: [],
    })
  })

  it('takes what is legal and incomplete, and says so', async () => {
    const reply = await read('(17)281130(10)L26A014').expect((res) =>
      expect([200, 422]).toContain(res.status),
    )
    if (reply.status === 200) expect((reply.body as { warnings: string[] }).warnings).toContain('no-gtin')
  })

  it.each([
    ['(01)09521100100488', 'check-digit'],
    ['(01)09521100100489(17)281331', 'no-such-date'],
    ['+A123BJC5D6E71X', 'check-digit'],
  ])('cannot read %s: %s', async (scan, reason) => {
    const reply = await read(scan).expect(422)
    expect(reply.body).toMatchObject({
      type: 'urn:bellpull:problem:label-unreadable',
      detail: expect.any(String),
      reason,
    })
  })

  it.each([
    ['nothing', undefined, '/scan'],
    ['an empty text', '', '/scan'],
    ['three barcodes', ['a', 'b', 'c'], '/scan'],
  ])('does not take %s for a scan', async (_what, scan, pointer) => {
    const reply = await read(scan).expect(422)
    expect(reply.body).toMatchObject({ type: 'urn:bellpull:problem:invalid-input', errors: [{ pointer }] })
  })
})

describe('GET /sizing/head', () => {
  // R = (2/√15)·D and h = (1.5/√15)·D for a ratio of 3/4: derived from the sphere, see head-cap.ts.
  it('gives radius and height in mm', async () => {
    const reply = await api.as(person).get('/sizing/head?diameterMm=50&ratio=0.75').expect(200)
    const { radiusMm, heightMm } = headView.parse(reply.body)
    expect(radiusMm).toBeCloseTo((2 / Math.sqrt(15)) * 50, 10)
    expect(heightMm).toBeCloseTo((1.5 / Math.sqrt(15)) * 50, 10)
  })

  it.each([
    ['', ['/diameterMm', '/ratio']],
    ['?diameterMm=0&ratio=0.75', ['/diameterMm']],
    ['?diameterMm=50&ratio=1.1', ['/ratio']],
    ['?diameterMm=fifty&ratio=0.75', ['/diameterMm']],
    ['?diameterMm=50&ratio=0.75&unit=in', ['/unit']],
  ])('refuses %s', async (query, pointers) => {
    const reply = await api.as(person).get(`/sizing/head${query}`).expect(422)
    expect((reply.body as { errors: { pointer: string }[] }).errors.map((error) => error.pointer)).toEqual(
      pointers,
    )
  })
})
