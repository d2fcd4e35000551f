import { join } from 'node:path';
import { connectTo } from './database-of.mjs';
import { PlainStop } from './plain-stop.mjs';
import { ensurePostgres } from './postgres-programs.mjs';
import { runCommand, tailOf } from './run-command.mjs';

/** @typedef {{ table: string, rows: number }} TableRows */

/**
 * Writes the database into a file of pg_dump's own format, and counts the rows of the very same moment.
 * @param {string} url
 * @param {string} path of the new file
 * @param {import('./say.mjs').Say} say
 * @returns {Promise<{ tables: TableRows[], server: string }>}
 */
export async function dumpDatabase(url, path, say) {
  const bin = await ensurePostgres(say);
  const client = await connectTo(url);
  try {
    await client.query('BEGIN ISOLATION LEVEL REPEATABLE READ READ ONLY');
    const { rows } = await client.query(
      "SELECT pg_export_snapshot() AS snapshot, current_setting('server_version') AS server",
    );
    const { snapshot, server } = rows[0];
    const options = ['--format=custom', '--no-owner', '--no-privileges', `--snapshot=${snapshot}`];
    const result = await withPassword(url, (address) => [
      join(bin, 'pg_dump'),
      ...options,
      `--file=${path}`,
      `--dbname=${address}`,
    ]);
    if (result.code !== 0) throw new PlainStop(`The database could not be written down:\n${tailOf(result)}`);
    return { tables: await countRows(client), server };
  } finally {
    await client.end();
  }
}

/**
 * Fills an empty database, whole or not at all.
 * @param {string} url
 * @param {string} path of a file of `dumpDatabase`
 * @param {import('./say.mjs').Say} say
 */
export async function loadDatabase(url, path, say) {
  const bin = await ensurePostgres(say);
  const options = [
    '--no-owner',
    '--no-privileges',
    '--no-comments',
    '--exit-on-error',
    '--single-transaction',
  ];
  const result = await withPassword(url, (address) => [
    join(bin, 'pg_restore'),
    ...options,
    `--dbname=${address}`,
    path,
  ]);
  if (result.code !== 0) throw new PlainStop(`The database could not be filled:\n${tailOf(result)}`);
  const client = await connectTo(url);
  try {
    // Without statistics the first queries of a large laboratory would take minutes.
    await client.query('ANALYZE');
    return await countRows(client);
  } finally {
    await client.end();
  }
}

/**
 * Refuses a database that holds anything.
 * @param {string} url
 */
export async function assertEmptyDatabase(url) {
  const client = await connectTo(url);
  try {
    const tables = await tableNames(client);
    if (tables.length > 0)
      throw new PlainStop(
        `The database holds ${tables.length} tables already: a backup is restored only into an empty one.`,
        2,
      );
  } finally {
    await client.end();
  }
}

/** @param {import('pg').Client} client @returns {Promise<TableRows[]>} by name */
async function countRows(client) {
  const tables = [];
  for (const table of await tableNames(client)) {
    const { rows } = await client.query(`SELECT count(*)::text AS n FROM ${table}`);
    tables.push({ table, rows: Number(rows[0].n) });
  }
  return tables;
}

/** @param {import('pg').Client} client @returns {Promise<string[]>} quoted where SQL needs it */
async function tableNames(client) {
  const { rows } = await client.query(
    `SELECT format('%I.%I', n.nspname, c.relname) AS name
     FROM pg_class c JOIN pg_namespace n ON n.oid = c.relnamespace
     WHERE c.relkind = 'r' AND n.nspname NOT LIKE 'pg\\_%' AND n.nspname <> 'information_schema'
     ORDER BY 1`,
  );
  return rows.map(({ name }) => name);
}

/**
 * Arguments of a process can be read by everybody on the machine, so the password goes into its environment.
 * @param {string} url
 * @param {(address: string) => string[]} command
 */
function withPassword(url, command) {
  const address = new URL(url);
  const password = decodeURIComponent(address.password);
  address.password = '';
  const env = { ...process.env, ...(password ? { PGPASSWORD: password } : {}) };
  return runCommand(command(address.href), { cwd: '/', env });
}
