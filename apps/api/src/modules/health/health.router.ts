import { Router } from 'express'
import type { Database } from '../../platform/db/sql.js'
import { Problem } from '../../platform/http/problem.js'

/** How long the database may take to say that it is there, in milliseconds. */
const READY_WITHIN_MS = 2_000

/** `GET /health/live`: the process runs. `GET /health/ready`: it can work, for the database answers. */
export function healthRouter({ database }: { database: Database }): Router {
  const router = Router()
  router.use((_req, res, next) => {
    res.setHeader('Cache-Control', 'no-store')
    next()
  })

  router.get('/live', (_req, res) => {
    res.json({ status: 'live' })
  })

  router.get('/ready', async (_req, res) => {
    await within(READY_WITHIN_MS, database.query({ text: 'SELECT 1' }))
    res.json({ status: 'ready' })
  })

  return router
}

async function within(ms: number, work: Promise<unknown>): Promise<void> {
  let timer: NodeJS.Timeout | undefined
  const late = new Promise<never>((_resolve, reject) => {
    timer = setTimeout(() => reject(new Problem('unavailable')), ms)
  })
  try {
    await Promise.race([work, late])
  } finally {
    clearTimeout(timer)
  }
}
