import { join } from 'node:path';
import { OWNER, psql } from './cluster.mjs';
import { PlainStop } from './plain-stop.mjs';
import { runCommand, tailOf } from './run-command.mjs';
import { APPLICATION } from './secrets.mjs';
import { commandAs } from './tied-command.mjs';

/**
 * Makes the product's roles and database where they are missing. One role owns the database and its tables and makes
 * migrations; web server and workers have another one, which only reads and writes rows: whatever it is made to say, it
 * can't switch off the triggers that keep a sign-off. Neither is a superuser, so that no fault in the web server can
 * read files of the machine through SQL.
 * @param {import('./cluster.mjs').Cluster} cluster
 * @param {import('./secrets.mjs').Secrets} secrets
 */
export async function ensureProductDatabase(cluster, secrets) {
  const { databasePassword, applicationPassword, ownerPassword } = secrets;
  const isThere = async (/** @type {string} */ role, /** @type {string} */ password) =>
    (await psql(cluster, { role, password, database: 'beadline', sql: 'SELECT 1' })).code === 0;
  if ((await isThere('beadline', databasePassword)) && (await isThere(APPLICATION, applicationPassword)))
    return;
  const sql = `
    SELECT 'CREATE ROLE beadline' WHERE NOT EXISTS (SELECT FROM pg_roles WHERE rolname = 'beadline') \\gexec
    ALTER ROLE beadline LOGIN NOSUPERUSER NOCREATEROLE PASSWORD '${databasePassword}';
    SELECT 'CREATE ROLE ${APPLICATION}' WHERE NOT EXISTS (SELECT FROM pg_roles WHERE rolname = '${APPLICATION}') \\gexec
    ALTER ROLE ${APPLICATION} LOGIN NOSUPERUSER NOCREATEROLE NOCREATEDB PASSWORD '${applicationPassword}';
    SELECT 'CREATE DATABASE beadline OWNER beadline'
      WHERE NOT EXISTS (SELECT FROM pg_database WHERE datname = 'beadline') \\gexec
  `;
  const result = await psql(cluster, { password: ownerPassword, sql });
  if (result.code !== 0) throw new PlainStop(`The database could not be made:\n${tailOf(result)}`);
}

/**
 * Gives the superuser a new password while the server is down. Whoever owns the files may do this, which brings
 * back a cluster whose secrets file was lost.
 * @param {Omit<import('./cluster.mjs').Cluster, 'port'>} cluster
 * @param {string} password
 */
export async function resetOwnerPassword({ bin, folder, user }, password) {
  const single = [join(bin, 'postgres'), '--single', '-D', join(folder, 'data'), 'postgres'];
  const input = `ALTER ROLE ${OWNER} PASSWORD '${password}'\n`;
  const result = await runCommand(commandAs(single, user), { cwd: '/', input });
  if (result.code !== 0)
    throw new PlainStop(`The database's password could not be set anew:\n${tailOf(result)}`);
}
