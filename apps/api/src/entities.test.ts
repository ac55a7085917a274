import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import type { DataSource } from 'typeorm'
import {
  CALL_KINDS,
  CATEGORIES,
  HOLDS,
  OUTCOMES,
  OWNERS,
  PART_KINDS,
  ROLES,
  SIDES,
  STAGES,
  UNIT_STATES,
} from '@bellpull/domain'
import { freshDatabase, type FreshDatabase } from '../test/database.js'
import { createDataSource, migrate } from './data-source.js'
import { CASE_STATUSES } from './modules/cases/surgical-case.entity.js'
import { CATALOGUE_CATEGORIES } from './modules/catalogue/catalogue-item.entity.js'
import { ZONES } from './modules/places/location.entity.js'

/** Tables, columns, constraints, indexes and triggers of a database, in words of PostgreSQL, in order. */
async function describeSchema(dataSource: DataSource): Promise<string[]> {
  const rows = await dataSource.query<{ line: string }[]>(`
    SELECT 'column ' || table_name || '.' || column_name || ' ' || data_type || ' ' || is_nullable || ' ' ||
           regexp_replace(coalesce(column_default, '-'), '^''(.*)''::.*$', '\\1') || ' ' || is_identity AS line
      FROM information_schema.columns WHERE table_schema = 'public' AND table_name <> 'migrations'
    UNION ALL
    SELECT 'constraint ' || conrelid::regclass || ' ' || CASE contype WHEN 'p' THEN '' ELSE conname END || ' ' ||
           pg_get_constraintdef(oid)
      FROM pg_constraint WHERE connamespace = 'public'::regnamespace AND conrelid::regclass::text <> 'migrations'
    UNION ALL
    SELECT 'index ' || indexname || ' ' || indexdef
      FROM pg_indexes WHERE schemaname = 'public' AND tablename <> 'migrations'
       AND indexname NOT IN (SELECT conname FROM pg_constraint WHERE contype = 'p')
    ORDER BY 1`)
  return rows.map(({ line }) => line)
}

const describeTriggers = (dataSource: DataSource): Promise<unknown[]> =>
  dataSource.query(`
    SELECT tgname, pg_get_triggerdef(t.oid) AS def, pg_get_functiondef(tgfoid) AS body
      FROM pg_trigger t WHERE NOT tgisinternal ORDER BY 1`)

let database: FreshDatabase
let dataSource: DataSource

beforeAll(async () => {
  database = await freshDatabase('nothing')
  dataSource = await createDataSource({ url: database.url, poolSize: 2 }).initialize()
  await migrate(dataSource)
})

afterAll(async () => {
  await dataSource?.destroy()
  await database?.drop()
})

describe('entities and migrations', () => {
  test('TypeORM finds nothing to change in the migrated schema', async () => {
    const { upQueries } = await dataSource.driver.createSchemaBuilder().log()
    expect(upQueries.map(({ query }) => query)).toEqual([])
  })

  test('the entities alone would make the same columns, checks, keys and indexes', async () => {
    const other = await freshDatabase('nothing')
    const made = await createDataSource({ url: other.url, poolSize: 2 }).initialize()
    try {
      await made.synchronize()
      expect(await describeSchema(made)).toEqual(await describeSchema(dataSource))
    } finally {
      await made.destroy()
      await other.drop()
    }
  })

  test('every migration can be taken back, and made again with the same result', async () => {
    const other = await freshDatabase('nothing')
    const made = await createDataSource({ url: other.url, poolSize: 2 }).initialize()
    try {
      const names = await migrate(made)
      const [before, triggers] = [await describeSchema(made), await describeTriggers(made)]
      for (let n = 0; n < names.length; n += 1) await made.undoLastMigration()
      expect(await describeSchema(made)).toEqual([])
      expect(
        await made.query(`SELECT proname FROM pg_proc WHERE pronamespace = 'public'::regnamespace`),
      ).toEqual([])
      expect(await migrate(made)).toEqual(names)
      expect(await describeSchema(made)).toEqual(before)
      expect(await describeTriggers(made)).toEqual(triggers)
    } finally {
      await made.destroy()
      await other.drop()
    }
  })
})

describe('words that the database lets a column hold are those of the domain', () => {
  test.each([
    ['person_role_known', ROLES],
    ['location_zone_known', ZONES],
    ['catalogue_item_category_known', CATALOGUE_CATEGORIES],
    ['catalogue_item_kind_known', PART_KINDS],
    ['catalogue_item_side_known', SIDES],
    ['unit_state_known', UNIT_STATES],
    ['unit_owner_known', OWNERS],
    ['surgical_case_status_known', CASE_STATUSES],
    ['surgical_case_side_known', SIDES.filter((side) => side !== 'either')],
    ['call_kind_known', CALL_KINDS],
    ['item_category_known', CATEGORIES],
    ['item_side_known', SIDES],
    ['item_stage_known', STAGES],
    ['item_outcome_known', OUTCOMES],
    ['item_hold_known', HOLDS],
  ] as const)('%s', async (name, words) => {
    const [found] = await dataSource.query<{ def: string }[]>(
      'SELECT pg_get_constraintdef(oid) AS def FROM pg_constraint WHERE conname = $1',
      [name],
    )
    expect([...(found?.def ?? '').matchAll(/'(\w+)'/g)].map((match) => match[1])).toEqual([...words])
  })
})
