import { createDataSource, migrate } from './data-source.js'
import { configOfProcess } from './platform/config.js'

/** `node dist/migrate.js`: brings the database of `BELLPULL_DATABASE_URL` up to date and says what it did. */
const dataSource = createDataSource({ url: configOfProcess().databaseUrl, poolSize: 2 })
await dataSource.initialize()
try {
  const names = await migrate(dataSource)
  console.log(names.length === 0 ? 'The database is up to date.' : `Ran ${names.join(', ')}.`)
} finally {
  await dataSource.destroy()
}
