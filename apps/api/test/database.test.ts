import { describe, expect, it } from 'vitest'
import { administer } from '../dev/administer.js'
import { startCluster } from './cluster.js'
import { freshDatabase } from './database.js'

const tables = (url: string) =>
  administer(url, "SELECT table_name FROM information_schema.tables WHERE table_schema = 'public'")

describe("a test's own database", () => {
  it('has every table of the house, and nobody else sees what it writes', async () => {
    const [mine, other] = await Promise.all([freshDatabase(), freshDatabase()])
    expect(await tables(mine.url)).not.toEqual([])
    await administer(mine.url, 'CREATE TABLE planted ()')
    expect(await tables(mine.url)).toContainEqual({ table_name: 'planted' })
    expect(await tables(other.url)).not.toContainEqual({ table_name: 'planted' })
    await Promise.all([mine.drop(), other.drop()])
  })

  it('may be had without tables, for tests of the migrations', async () => {
    const bare = await freshDatabase('nothing')
    expect(await tables(bare.url)).toEqual([])
    await bare.drop()
  })

  it('is dropped even while somebody is connected', async () => {
    const mine = await freshDatabase('nothing')
    const sleeper = expect(administer(mine.url, 'SELECT pg_sleep(60)')).rejects.toThrow(/terminat/)
    await mine.drop()
    await expect(administer(mine.url, 'SELECT 1')).rejects.toThrow(/does not exist/)
    await sleeper
  })
})

describe('a PostgreSQL of one test', () => {
  it('comes back after a restart with what was committed, at the same address', async () => {
    const cluster = await startCluster()
    try {
      await administer(cluster.url(), 'CREATE TABLE planted ()')
      const sleeper = expect(administer(cluster.url(), 'SELECT pg_sleep(60)')).rejects.toThrow(/terminat/)
      await expect
        .poll(() => administer(cluster.url(), "SELECT 1 FROM pg_stat_activity WHERE wait_event = 'PgSleep'"))
        .toHaveLength(1)
      await cluster.restart()
      await sleeper
      expect(await tables(cluster.url())).toEqual([{ table_name: 'planted' }])
    } finally {
      await cluster.stop()
    }
  })
})
