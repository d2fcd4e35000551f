import { LabError } from '@/lib/errors';
import type { ListQuery } from '@/lib/schemas/list-query';
import { selectRows } from './select';

/** How a list is read: SQL written by hand, values as parameters. */
export interface ListSource {
  /** `SELECT` columns, without the key and the id that this adds. */
  select: string;
  from: string;
  where: string[];
  bind: unknown[];
  /** Column that makes the order total. */
  idColumn: string;
  idType?: 'uuid' | 'text' | 'int';
  /** By the name of the field: an expression that is never null, and its type. */
  sorts: Record<string, { by: string; type: 'text' | 'timestamptz' | 'float8' | 'bigint' | 'int' }>;
}

/**
 * One page of a list by keyset: it stays right while rows come and go, and costs the same at any
 * depth.
 * @throws LabError QUERY for a cursor that is not of this list and order.
 */
export async function listPage<Row extends object>(
  source: ListSource,
  query: ListQuery,
): Promise<{ rows: Row[]; nextCursor: string | null }> {
  const field = query.sort.replace(/^-/, '');
  const sort = source.sorts[field];
  if (!sort) throw new LabError('QUERY', `Unknown sort field '${field}'.`);
  const down = query.sort.startsWith('-');
  const bind = [...source.bind];
  const where = [...source.where];
  if (query.cursor !== undefined) {
    const [value, id] = readCursor(query.cursor, query.sort);
    bind.push(value, id);
    const idType = source.idType ?? 'uuid';
    where.push(
      `(${sort.by}, ${source.idColumn}) ${down ? '<' : '>'} ($${bind.length - 1}::${sort.type}, $${bind.length}::${idType})`,
    );
  }
  bind.push(query.limit + 1);
  const order = down ? 'DESC' : 'ASC';
  const rows = await selectRows<Row & { cursor_key: string; cursor_id: string }>(
    `SELECT ${source.select}, (${sort.by})::text AS cursor_key, ${source.idColumn}::text AS cursor_id
     FROM ${source.from} WHERE ${where.join(' AND ')}
     ORDER BY ${sort.by} ${order}, ${source.idColumn} ${order} LIMIT $${bind.length}`,
    bind,
  ).catch((cause: unknown) => {
    // A cursor may be forged so that its value is none of the column's type.
    if (query.cursor !== undefined && isBadValue(cause)) throw badCursor(cause);
    throw cause;
  });
  const more = rows.length > query.limit;
  const page = more ? rows.slice(0, query.limit) : rows;
  const last = page.at(-1);
  return {
    rows: page,
    nextCursor: more && last ? writeCursor(query.sort, last.cursor_key, last.cursor_id) : null,
  };
}

const badCursor = (cause?: unknown) =>
  new LabError('QUERY', 'This cursor does not belong to this list and order.', { cause });

const writeCursor = (sort: string, key: string, id: string): string =>
  Buffer.from(JSON.stringify([sort, key, id])).toString('base64url');

function readCursor(cursor: string, sort: string): [string, string] {
  let parts: unknown;
  try {
    parts = JSON.parse(Buffer.from(cursor, 'base64url').toString('utf8'));
  } catch (cause) {
    throw badCursor(cause);
  }
  if (!Array.isArray(parts) || parts.length !== 3 || parts[0] !== sort) throw badCursor();
  return [String(parts[1]), String(parts[2])];
}

/** PostgreSQL's class 22, "data exception". */
function isBadValue(thrown: unknown): boolean {
  const code = (thrown as { original?: { code?: string } })?.original?.code;
  return typeof code === 'string' && code.startsWith('22');
}

/** `%text%` for ILIKE, with the text's own wildcards taken literally. */
export const containing = (text: string): string => `%${text.replace(/[\\%_]/g, '\\$&')}%`;
