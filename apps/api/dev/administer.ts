import pg from 'pg'

/** Runs one statement on a connection of its own and returns its rows. */
export async function administer<R = unknown>(
  url: string,
  statement: string,
  values: readonly unknown[] = [],
): Promise<R[]> {
  const client = new pg.Client({ connectionString: url, connectionTimeoutMillis: 10_000 })
  await client.connect()
  try {
    return (await client.query<R & pg.QueryResultRow>(statement, [...values])).rows
  } finally {
    await client.end()
  }
}
