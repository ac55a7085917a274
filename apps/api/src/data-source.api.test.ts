import { afterEach, describe, expect, it } from 'vitest'
import type { DataSource } from 'typeorm'
import { freshDatabase, type FreshDatabase } from '../test/database.js'
import { createDataSource, migrate } from './data-source.js'
import { MIGRATIONS } from './migrations/index.js'

/** Other files run in other databases of the same server. */
const here = `database = (SELECT oid FROM pg_database WHERE datname = current_database())`
const open: DataSource[] = []
let fresh: FreshDatabase | undefined
afterEach(async () => {
  for (const dataSource of open.splice(0)) await dataSource.destroy()
  await fresh?.drop()
})

async function connect(url: string): Promise<DataSource> {
  const dataSource = createDataSource({ url, poolSize: 2 })
  open.push(await dataSource.initialize())
  return dataSource
}

describe('migrate', () => {
  it('lets two processes start at once on an empty house: one does it all, the other finds it done', async () => {
    fresh = await freshDatabase('nothing')
    const [a, b] = [await connect(fresh.url), await connect(fresh.url)]
    const rival = a.createQueryRunner()
    await rival.query('SELECT pg_advisory_lock(8420001)')
    const both = Promise.all([migrate(b), migrate(await connect(fresh.url))])
    // Neither begins while somebody else is at it.
    const waiting = async () =>
      (
        (await a.query(
          `SELECT count(*)::int AS n FROM pg_locks WHERE locktype = 'advisory' AND NOT granted AND ${here}`,
        )) as { n: number }[]
      )[0]!.n
    await expect.poll(waiting, { timeout: 5_000 }).toBe(2)
    await rival.query('SELECT pg_advisory_unlock(8420001)')
    await rival.release()

    const ran = (await both).map((names) => names.length).sort((x, y) => x - y)
    expect(ran).toEqual([0, MIGRATIONS.length])
    expect(await migrate(a)).toEqual([])
  })

  it('gives its connection back as it was, and works with one alone', async () => {
    fresh = await freshDatabase('nothing')
    const dataSource = createDataSource({ url: fresh.url, poolSize: 1 })
    open.push(await dataSource.initialize())
    expect(await migrate(dataSource)).toHaveLength(MIGRATIONS.length)
    expect(await dataSource.query(`SELECT current_setting('statement_timeout') AS s`)).toEqual([{ s: '15s' }])
    expect(await dataSource.query(`SELECT 1 FROM pg_locks WHERE locktype = 'advisory' AND ${here}`)).toEqual(
      [],
    )
  })
})
