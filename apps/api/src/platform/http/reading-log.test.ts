import express from 'express'
import { pino } from 'pino'
import request from 'supertest'
import { describe, expect, test } from 'vitest'
import { logReadings } from './reading-log.js'
import { requestScope } from './scope.js'
import { authenticate } from './session.js'

/** What is logged when one request has been answered. */
async function linesOf(method: 'get' | 'post', path: string): Promise<Record<string, unknown>[]> {
  const lines: Record<string, unknown>[] = []
  const log = pino({}, { write: (line: string) => lines.push(JSON.parse(line) as Record<string, unknown>) })
  const actor = { id: 'p1', name: 'Ana', initials: 'A', role: 'charge' as const, sessionId: 's1' }
  const app = express()
    .use(requestScope)
    .use(authenticate({ authenticate: () => Promise.resolve(actor) }))
    .use(logReadings(log))
    .use((_req, res) => {
      res.json({})
    })
  await request(app)[method](path).set('authorization', 'Bearer token').expect(200)
  return lines
}

describe('reading of cases is logged', () => {
  test.each(['/cases', '/cases/17', '/cases/17/calls', '/board', '/events?case=17'])(
    'GET %s: who, what and when',
    async (path) => {
      const [line, ...more] = await linesOf('get', path)
      expect(line).toMatchObject({ event: 'case.read', personId: 'p1', read: path, status: 200 })
      expect(line).toHaveProperty('time')
      expect(JSON.stringify(line)).not.toContain('Ana')
      expect(more).toEqual([])
    },
  )

  test.each([
    ['get', '/rooms'],
    ['get', '/people'],
    ['post', '/cases/17/calls'],
  ] as const)('%s %s tells nothing of a case: no line', async (method, path) => {
    expect(await linesOf(method, path)).toEqual([])
  })
})
