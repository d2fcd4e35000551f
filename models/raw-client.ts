import type pg from 'pg';
import type { Transaction } from 'sequelize';
import { getSequelize } from './database';

/** The connection of a transaction, for what Sequelize has no words for: COPY, binary results, pg-boss. */
export function rawClient(transaction: Transaction): pg.Client {
  return (transaction as unknown as { connection: pg.Client }).connection;
}

/** Borrows a connection of the pool outside a transaction. */
export async function withRawClient<T>(work: (client: pg.Client) => Promise<T>): Promise<T> {
  const manager = getSequelize().connectionManager;
  const client = (await manager.getConnection({ type: 'read' })) as pg.Client;
  try {
    return await work(client);
  } finally {
    manager.releaseConnection(client);
  }
}

/** Values as PostgreSQL sends them in binary, null for NULL. */
export type BinaryRow = (Buffer | null)[];

/** A query whose result comes in PostgreSQL's binary format: no hex text for bytea, exact numbers. */
export async function queryBinary(client: pg.Client, text: string, values: unknown[]): Promise<BinaryRow[]> {
  const config = {
    text,
    values,
    binary: true,
    rowMode: 'array' as const,
    types: { getTypeParser: () => (value: Buffer) => value },
  };
  const result = await client.query(config as unknown as pg.QueryArrayConfig);
  return result.rows as unknown as BinaryRow[];
}
