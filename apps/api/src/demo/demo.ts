import type { DataSource, EntityManager } from 'typeorm'
import { Books } from './books.js'
import { planAhead } from './future.js'
import { Past } from './past.js'
import { personRows } from './people.js'
import { Chance } from './random.js'
import { holdRows, tableRows, type TableRows } from './rows.js'
import { Steps } from './steps.js'
import { fillShelves } from './stock-today.js'
import { Stock } from './stock.js'
import { HouseDays, storyTime, withinToday, type StoryTime } from './story-time.js'
import { tellHips } from './today-hip.js'
import { tellKnees } from './today-knee.js'
import { tellShoulders } from './today-shoulder.js'
import { Today } from './today.js'

export interface DemoRows {
  readonly tables: readonly TableRows[]
  readonly holds: ReturnType<typeof holdRows>
}

/** The story told to the end: what the house's books and shelves hold at 10:45. */
export interface Told {
  readonly time: StoryTime
  readonly books: Books
  readonly stock: Stock
}

/**
 * Tells the whole story, ninety days and the morning of today.
 *
 * @param now the moment that is 10:45 of the story.
 * @param zone the house's IANA zone.
 * @throws {StoryFault} when the story breaks a rule of the house.
 */
export function tellStory(now: Date, zone: string): Told {
  const time = storyTime(now, zone)
  const books = new Books()
  const stock = new Stock(books)
  const steps = new Steps(books, stock, new HouseDays(zone))

  const lastNoneFree = new Past(books, steps, time).tell()
  fillShelves(stock, time, new Chance('shelves'), lastNoneFree)

  const before = books.cases.length
  const today = new Today(books, steps, time)
  tellShoulders(today)
  tellHips(today)
  tellKnees(today)
  books.run()
  const cases = books.cases.slice(before)
  const starts = withinToday(
    time,
    cases.map(({ startsAt }) => startsAt),
  )
  cases.forEach((one, index) => {
    one.startsAt = starts[index] ?? one.startsAt
  })
  planAhead(books, time)
  return { time, books, stock }
}

/** The whole demo house as rows, without a database: the same rows for the same moment and zone. */
export async function demoRows(now: Date, zone: string): Promise<DemoRows> {
  const { time, books, stock } = tellStory(now, zone)
  const people = { table: 'person', rows: await personRows(time.on(-400, '09:00')) }
  return { tables: [people, ...tableRows(books, stock, time.on(-120, '09:00'))], holds: holdRows(stock) }
}

/** Any number that nothing else in this database takes: two that would fill one house take turns. */
const DEMO_LOCK = 8_420_002
/** Rows in one statement: each stays far below the limit on a statement's time. */
const ROWS_AT_ONCE = 4000

/**
 * Fills an empty, migrated house in one transaction.
 *
 * @returns how many rows each table got, or `null` when somebody lives there already; then nothing is changed.
 */
export async function fillHouse(
  dataSource: DataSource,
  now: Date,
  zone: string,
): Promise<ReadonlyMap<string, number> | null> {
  if (await isInhabited(dataSource.manager)) return null
  const { tables, holds } = await demoRows(now, zone)
  return await dataSource.transaction(async (tx) => {
    await tx.query('SELECT pg_advisory_xact_lock($1)', [DEMO_LOCK])
    if (await isInhabited(tx)) return null
    for (const { table, rows } of tables) await insert(tx, table, rows)
    await tx.query(
      `UPDATE unit SET state = h.state, held_for = h.held_for
         FROM json_to_recordset($1::json) AS h(id uuid, state text, held_for uuid) WHERE unit.id = h.id`,
      [JSON.stringify(holds)],
    )
    return new Map(tables.map(({ table, rows }) => [table, rows.length]))
  })
}

/** So that the first questions are answered by plans that know the tables. */
export const gatherStatistics = (dataSource: DataSource): Promise<unknown> => dataSource.query('ANALYZE')

async function isInhabited(manager: EntityManager): Promise<boolean> {
  const [found] = await manager.query<{ inhabited: boolean }[]>(
    'SELECT EXISTS (SELECT 1 FROM person) AS inhabited',
  )
  return found?.inhabited ?? false
}

async function insert(tx: EntityManager, table: string, rows: TableRows['rows']): Promise<void> {
  const [first] = rows
  if (!first) return
  const columns = Object.keys(first).join(', ')
  for (let from = 0; from < rows.length; from += ROWS_AT_ONCE) {
    await tx.query(
      `INSERT INTO ${table} (${columns}) SELECT ${columns} FROM json_populate_recordset(NULL::${table}, $1::json)`,
      [JSON.stringify(rows.slice(from, from + ROWS_AT_ONCE))],
    )
  }
}
