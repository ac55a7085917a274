import { mkdir, mkdtemp, rm, writeFile } from 'node:fs/promises'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import request from 'supertest'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { startTestApi, type TestApi } from '../../../test/app.js'

let folder: string
let api: TestApi
beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), '.bellpull web-'))
  await mkdir(join(folder, 'assets'))
  await writeFile(join(folder, 'index.html'), '<!doctype html><title>Bellpull</title>')
  await writeFile(join(folder, 'assets', 'index-abc123.js'), `export const text = '${'x'.repeat(4000)}'`)
  await writeFile(join(folder, 'icon.svg'), '<svg xmlns="http://www.w3.org/2000/svg"/>')
  api = await startTestApi({ env: { BELLPULL_WEB_DIR: folder } })
})
afterAll(async () => {
  await api.close()
  await rm(folder, { recursive: true, force: true })
})

const get = (path: string, accept = 'text/html') => request(api.url).get(path).set('Accept', accept)

describe('the web application', () => {
  it.each(['/', '/sign-in', '/rooms/3/tablet', '/cases/0412-1?tab=items'])(
    'is served at %s, asked for each time',
    async (path) => {
      const reply = await get(path).expect(200)
      expect(reply.text).toContain('<title>Bellpull</title>')
      expect(reply.get('Cache-Control')).toBe('no-cache')
    },
  )

  it('keeps files with a hash in their name for ever, packed for the way', async () => {
    const reply = await get('/assets/index-abc123.js', '*/*').set('Accept-Encoding', 'br').expect(200)
    expect(reply.get('Cache-Control')).toBe('public, max-age=31536000, immutable')
    expect(reply.get('Content-Encoding')).toBe('br')
    const zipped = await get('/assets/index-abc123.js', '*/*').set('Accept-Encoding', 'gzip').expect(200)
    expect(zipped.get('Content-Encoding')).toBe('gzip')
  })

  it('serves its other files, asked for each time', async () => {
    const reply = await get('/icon.svg', '*/*').expect(200)
    expect(reply.get('Cache-Control')).toBe('no-cache')
  })

  it.each([
    ['a file that is gone', '/assets/index-old.js', '*/*'],
    ['a page of an old file', '/assets/index-old.js', 'text/html'],
    ['data that is no page', '/sign-in', 'application/json'],
    ['what belongs to the API', '/api/nothing', 'text/html'],
  ])('is not served for %s', async (_what, path, accept) => {
    const reply = await get(path, accept).expect(404)
    expect(reply.type).toBe('application/problem+json')
  })

  it.each(['/..%2f..%2f..%2fetc%2fpasswd', '/%2e%2e/%2e%2e/etc/passwd', '/assets/..%2f..%2fetc%2fpasswd'])(
    'gives nothing from outside its folder for %s',
    async (path) => {
      const reply = await get(path, '*/*')
      expect(reply.text).not.toContain('root:')
    },
  )

  it('does not hide the API', async () => {
    await get('/api/v1/health/live').expect(200, { status: 'live' })
    await get('/api/v1/me').expect(401)
  })
})
