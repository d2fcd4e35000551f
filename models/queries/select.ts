import { QueryTypes, type Transaction } from 'sequelize';
import { getSequelize } from '../database';

/** Rows of a query written by hand; values only ever travel as `$1`, `$2`, ... */
export async function selectRows<T extends object>(
  sql: string,
  bind: unknown[] = [],
  transaction?: Transaction,
): Promise<T[]> {
  return getSequelize().query<T>(sql, { bind, type: QueryTypes.SELECT, transaction });
}

/** The only row, or null. */
export async function selectRow<T extends object>(
  sql: string,
  bind: unknown[] = [],
  transaction?: Transaction,
): Promise<T | null> {
  const rows = await selectRows<T>(sql, bind, transaction);
  return rows[0] ?? null;
}

/** Runs a statement whose rows nobody needs. */
export async function execute(sql: string, bind: unknown[] = [], transaction?: Transaction): Promise<void> {
  await getSequelize().query(sql, { bind, type: QueryTypes.RAW, transaction });
}
