import { join } from 'node:path';
import { OWNER, psql } from './cluster.mjs';
import { PlainStop } from './plain-stop.mjs';
import { runCommand, tailOf } from './run-command.mjs';
import { commandAs } from './tied-command.mjs';

/**
 * Makes the product's role and database where they are missing. The role owns its database and is no superuser:
 * a fault in the web server can't read files of the machine through SQL.
 * @param {import('./cluster.mjs').Cluster} cluster
 * @param {import('./secrets.mjs').Secrets} secrets
 */
export async function ensureProductDatabase(cluster, { databasePassword, ownerPassword }) {
  const asProduct = { role: 'beadline', password: databasePassword, database: 'beadline', sql: 'SELECT 1' };
  if ((await psql(cluster, asProduct)).code === 0) return;
  const sql = `
    SELECT 'CREATE ROLE beadline' WHERE NOT EXISTS (SELECT FROM pg_roles WHERE rolname = 'beadline') \\gexec
    ALTER ROLE beadline LOGIN NOSUPERUSER NOCREATEROLE PASSWORD '${databasePassword}';
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
