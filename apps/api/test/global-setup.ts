import type { TestProject } from 'vitest/node'
import { administer } from '../dev/administer.js'
import { createDataSource, migrate } from '../src/data-source.js'
import { startCluster } from './cluster.js'

/** The database that every test's own is copied from: migrated once, and closed to everybody since. */
const TEMPLATE = 'migrated'

export interface TestPostgres {
  readonly adminUrl: string
  readonly template: string
}

declare module 'vitest' {
  export interface ProvidedContext {
    postgres: TestPostgres
  }
}

/** Starts one PostgreSQL for the whole run and lays the template; the returned function ends both. */
export default async function setup(project: TestProject): Promise<() => Promise<void>> {
  const cluster = await startCluster()
  try {
    await administer(cluster.url(), `CREATE DATABASE ${TEMPLATE}`)
    const dataSource = createDataSource({ url: cluster.url(TEMPLATE), poolSize: 2 })
    await dataSource.initialize()
    try {
      await migrate(dataSource)
    } finally {
      await dataSource.destroy()
    }
    await administer(cluster.url(), `ALTER DATABASE ${TEMPLATE} ALLOW_CONNECTIONS false`)
  } catch (error) {
    await cluster.stop()
    throw error
  }
  project.provide('postgres', { adminUrl: cluster.url(), template: TEMPLATE })
  return () => cluster.stop()
}
