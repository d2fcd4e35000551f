import pg from 'pg';

/** One question to the database on a connection of its own, which no other question has to share or survive. */
export async function onDatabase<Row extends pg.QueryResultRow>(
  url: string,
  sql: string,
  values: unknown[] = [],
): Promise<Row[]> {
  const client = new pg.Client({ connectionString: url, connectionTimeoutMillis: 5_000 });
  client.on('error', () => undefined);
  await client.connect();
  try {
    return (await client.query<Row>(sql, values)).rows;
  } finally {
    await client.end().catch(() => undefined);
  }
}
