import type pg from 'pg';
import type { Transaction } from 'sequelize';
import { getSequelize } from './database';
import { asDatabaseFailure } from './database-away';

/** The connection of a transaction, for what Sequelize has no words for: COPY, rows as arrays, pg-boss. */
export function rawClient(transaction: Transaction): pg.Client {
  return (transaction as unknown as { connection: pg.Client }).connection;
}

/** Borrows a connection of the pool outside a transaction, for questions to it and nothing else. */
export async function withRawClient<T>(work: (client: pg.Client) => Promise<T>): Promise<T> {
  const manager = getSequelize().connectionManager;
  const client = (await manager.getConnection({ type: 'read' })) as pg.Client;
  try {
    return await work(client);
  } catch (cause) {
    throw asDatabaseFailure(cause);
  } finally {
    manager.releaseConnection(client);
  }
}

/** Rows as plain arrays: cheaper than objects where there are thousands. bytea comes as Buffer. */
export async function queryArrays<Row extends unknown[]>(
  client: pg.Client,
  text: string,
  values: unknown[],
): Promise<Row[]> {
  const { rows } = await client.query<Row>({ text, values, rowMode: 'array' });
  return rows;
}
