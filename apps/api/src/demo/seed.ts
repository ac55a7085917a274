import { parseArgs } from 'node:util'
import { createDataSource, migrate } from '../data-source.js'
import { systemClock } from '../platform/clock.js'
import { configOfProcess } from '../platform/config.js'
import { fillHouse, gatherStatistics } from './demo.js'

/**
 * `node dist/demo/seed.js`: fills an empty house with the demo and says what it made; a house in which
 * somebody lives is left alone. `--reset` empties it first: every table is dropped and made anew.
 */
const { values: flags } = parseArgs({ options: { reset: { type: 'boolean', default: false } } })

const config = configOfProcess()
if (!config.demo) {
  console.error('BELLPULL_DEMO is not 1: this house is not for the demo, and stays as it is.')
  process.exit(2)
}

const WORDS: Readonly<Record<string, string>> = {
  person: 'people',
  room: 'rooms',
  location: 'places',
  catalogue_item: 'products',
  unit: 'packages',
  surgical_case: 'cases',
  call: 'calls',
  item: 'items',
  event: 'events',
  movement: 'movements',
}

const clock = systemClock(config.houseZone)
const begun = clock.now()
const dataSource = createDataSource({ url: config.databaseUrl, poolSize: 2 })
await dataSource.initialize()
try {
  if (flags.reset) {
    // Whoever still works in this house is given a moment to finish; then this fails rather than waits.
    await dataSource.query(
      `SET lock_timeout = '10s'; DROP SCHEMA IF EXISTS pgboss CASCADE; DROP SCHEMA public CASCADE; CREATE SCHEMA public;
       SET lock_timeout = 0`,
    )
  }
  await migrate(dataSource)
  const made = await fillHouse(dataSource, clock.now(), config.houseZone)
  if (made === null) console.log('Somebody lives here already: the demo is not loaded again.')
  else {
    await gatherStatistics(dataSource)
    const counts = Object.entries(WORDS).map(([table, word]) => `${made.get(table) ?? 0} ${word}`)
    const seconds = ((clock.now().getTime() - begun.getTime()) / 1000).toFixed(1)
    console.log(`The demo house is filled in ${seconds} s: ${counts.join(', ')}.`)
  }
} finally {
  await dataSource.destroy()
}
