import { mkdirSync, rmSync } from 'node:fs'
import { join } from 'node:path'
import { administer } from '../apps/api/dev/administer.js'
import { build } from '../apps/api/dev/build.js'
import { projectRoot } from '../apps/api/dev/postgres.js'
import { startCluster } from '../apps/api/test/cluster.js'
import { fillHouse, SHARED } from './house.js'

/** The database that each journey's own is copied from: the demo as it is loaded at the start of the run. */
const TEMPLATE = 'demo'

/** Starts one PostgreSQL for the whole run and loads the demo once; the returned function ends it. */
export default async function setup(): Promise<() => Promise<void>> {
  const logs = join(projectRoot, '.data/log')
  mkdirSync(logs, { recursive: true })
  rmSync(join(logs, 'journeys-houses.log'), { force: true })
  await build(projectRoot, join(logs, 'build.log'))
  const cluster = await startCluster()
  try {
    await administer(cluster.url(), `CREATE DATABASE ${TEMPLATE}`)
    await fillHouse(cluster.url(TEMPLATE))
    await administer(cluster.url(), `ALTER DATABASE ${TEMPLATE} ALLOW_CONNECTIONS false`)
  } catch (error) {
    await cluster.stop()
    throw error
  }
  // The workers are started later and inherit this.
  process.env[SHARED.adminUrl] = cluster.url()
  process.env[SHARED.template] = TEMPLATE
  return () => cluster.stop()
}
