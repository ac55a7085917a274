import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest'
import type { DataSource } from 'typeorm'
import { freshDatabase, type FreshDatabase } from '../../../test/database.js'
import { createDataSource } from '../../data-source.js'
import { Database, DatabaseAway, type Sql } from './sql.js'

let fresh: FreshDatabase
let dataSource: DataSource
let database: Database
beforeAll(async () => {
  fresh = await freshDatabase('nothing')
  dataSource = createDataSource({ url: fresh.url, poolSize: 4 })
  await dataSource.initialize()
  database = new Database(dataSource)
  await database.query({ text: 'CREATE TABLE box (id int PRIMARY KEY, n int NOT NULL)' })
  await database.query({ text: 'INSERT INTO box VALUES (1, 0), (2, 0)' })
})
afterAll(async () => {
  await dataSource.destroy()
  await fresh.drop()
})

const boxes = async () =>
  (await database.query<{ n: number }>({ text: 'SELECT n FROM box ORDER BY id' })).rows.map((row) => row.n)
const put = (sql: Sql, id: number, n: number) =>
  sql.query({ text: 'UPDATE box SET n = $2 WHERE id = $1', values: [id, n] })

describe('a statement', () => {
  it('is prepared once under its name', async () => {
    const ask = () =>
      database.query<{ one: number }>({ name: 'the-one', text: 'SELECT $1::int AS one', values: [1] })
    expect((await ask()).rows).toEqual([{ one: 1 }])
    expect((await ask()).rows).toEqual([{ one: 1 }])
    const { rows } = await database.query<{ names: string[] }>({
      text: `SELECT array_agg(name) AS names FROM pg_prepared_statements`,
    })
    expect(rows[0]?.names).toEqual(['the-one'])
  })

  it('gives days as text, untouched by any time zone', async () => {
    const { rows } = await database.query({ text: `SELECT '2026-12-31'::date AS day` })
    expect(rows).toEqual([{ day: '2026-12-31' }])
  })

  it('has a time limit, and so has a transaction that nobody uses', async () => {
    const { rows } = await database.query({
      text: `SELECT current_setting('statement_timeout') AS s, current_setting('idle_in_transaction_session_timeout') AS i`,
    })
    expect(rows).toEqual([{ s: '15s', i: '10s' }])
  })
})

describe('a transaction', () => {
  it('commits what it did, or nothing of it', async () => {
    await database.transaction((sql) => put(sql, 1, 1))
    const failing = database.transaction(async (sql) => {
      await put(sql, 1, 2)
      throw new Error('changed my mind')
    })
    await expect(failing).rejects.toThrow('changed my mind')
    expect(await boxes()).toEqual([1, 0])
  })

  it('is done again after a deadlock, which is made here', async () => {
    let tries = 0
    let meet = (): void => undefined
    const met = new Promise<void>((resolve) => {
      let waiting = 0
      meet = () => {
        waiting += 1
        if (waiting === 2) resolve()
      }
    })
    const both = (first: number, second: number) =>
      database.transaction(async (sql) => {
        tries += 1
        await put(sql, first, 10 + first)
        meet()
        await met
        await put(sql, second, 10 + second)
      })
    await Promise.all([both(1, 2), both(2, 1)])
    expect(tries).toBe(3)
    expect(await boxes()).toEqual([11, 12])
  })

  it('is given up after three tries', async () => {
    let tries = 0
    const always = database.transaction(async (sql) => {
      tries += 1
      await sql.query({ text: `DO $$ BEGIN RAISE EXCEPTION 'x' USING ERRCODE = '40001'; END $$` })
    })
    await expect(always).rejects.toMatchObject({ code: '40001' })
    expect(tries).toBe(3)
  })

  it('whose connection is cut says that the database was away, leaves nothing and harms nobody', async () => {
    const cut = database.transaction(async (sql) => {
      await put(sql, 1, 99)
      const { rows } = await sql.query<{ pid: number }>({ text: 'SELECT pg_backend_pid() AS pid' })
      await database.query({ text: 'SELECT pg_terminate_backend($1)', values: [rows[0]?.pid] })
      await put(sql, 2, 99)
    })
    await expect(cut).rejects.toThrow(DatabaseAway)
    await vi.waitFor(async () => expect(await boxes()).toEqual([11, 12]), { timeout: 5_000 })
  })

  it('gives its connection back, however it ended', async () => {
    for (let n = 0; n < 12; n += 1) {
      await database.transaction((sql) => sql.query({ text: 'SELECT nonsense' })).catch(() => undefined)
    }
    expect(await boxes()).toHaveLength(2)
  })
})

describe('nobody there', () => {
  it('is a database that is away', async () => {
    const url = new URL(fresh.url)
    url.port = '1'
    const nowhere = new Database(createDataSource({ url: url.href }))
    await expect(nowhere.query({ text: 'SELECT 1' })).rejects.toThrow(DatabaseAway)
    await expect(nowhere.transaction(async () => 1)).rejects.toThrow(DatabaseAway)
  })
})
