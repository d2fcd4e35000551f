import { chownSync, existsSync, renameSync, rmSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { PlainStop } from './plain-stop.mjs';
import { waitUntil } from './processes.mjs';
import { runCommand, tailOf } from './run-command.mjs';
import { clearPostmaster } from './stale-postmaster.mjs';
import { commandAs, tiedCommand } from './tied-command.mjs';

/** The cluster's superuser: used to make the product's role and database, and for nothing else. */
export const OWNER = 'beadline_owner';

/**
 * What differs from PostgreSQL's own defaults. Nothing about durability does: a reported commit is on disk.
 * Loopback only and no socket file, whose folder may not be writable and whose path may be too long.
 */
const SETTINGS = {
  listen_addresses: '127.0.0.1',
  unix_socket_directories: '',
  password_encryption: 'scram-sha-256',
  shared_buffers: '256MB',
  work_mem: '16MB',
  maintenance_work_mem: '128MB',
  max_wal_size: '2GB',
  // Short queries of pages never win what compiling them costs.
  jit: 'off',
  timezone: 'UTC',
  log_timezone: 'UTC',
  log_line_prefix: '%m [%p] ',
};

/**
 * @typedef {object} Cluster
 * @property {string} bin folder of the server's programs
 * @property {string} folder
 * @property {{ uid: number, gid: number } | null} user
 * @property {number} port
 */

const dataOf = (/** @type {{ folder: string }} */ { folder }) => join(folder, 'data');

/**
 * Makes the cluster where it is not there yet. It appears under its name only when complete, so that a start
 * interrupted here simply begins again.
 * @param {Omit<Cluster, 'port'>} cluster
 * @param {{ password: string | null, say: import('./say.mjs').Say, extra?: string[] }} options password of the
 *   superuser; null trusts everyone on this machine, for throw-away clusters
 */
export async function initCluster(cluster, { password, say, extra = [] }) {
  const { bin, folder, user } = cluster;
  if (existsSync(join(dataOf(cluster), 'PG_VERSION'))) return;
  const part = join(folder, 'data.part');
  const passwordFile = join(folder, 'owner-password');
  rmSync(part, { recursive: true, force: true });
  writeFileSync(passwordFile, `${password ?? ''}\n`, { mode: 0o600 });
  if (user) chownSync(passwordFile, user.uid, user.gid);
  await say.step('Making a private PostgreSQL cluster', async () => {
    const auth = password ? ['--auth=scram-sha-256', `--pwfile=${passwordFile}`] : ['--auth=trust'];
    const initdb = [join(bin, 'initdb'), '-D', part, '-U', OWNER, ...auth, ...extra];
    const result = await runCommand(
      commandAs([...initdb, '--encoding=UTF8', '--locale=C.UTF-8', '--data-checksums'], user),
      { cwd: '/' },
    );
    rmSync(passwordFile, { force: true });
    if (result.code !== 0)
      throw new PlainStop(`The database cluster could not be made in ${folder}:\n${tailOf(result)}`);
    renameSync(part, dataOf(cluster));
  });
}

/**
 * The server as a command in the foreground, which ends with its parent.
 * @param {Cluster} cluster
 * @param {Record<string, string>} [settings] over the usual ones
 */
export function serverCommand(cluster, settings = {}) {
  const chosen = Object.entries({ ...SETTINGS, port: String(cluster.port), ...settings });
  const options = chosen.flatMap(([name, value]) => ['-c', `${name}=${value}`]);
  const command = [join(cluster.bin, 'postgres'), '-D', dataOf(cluster), ...options];
  return tiedCommand(command, { signal: 'INT', user: cluster.user });
}

/**
 * Clears what an earlier start may have left on the cluster.
 * @param {Cluster} cluster
 * @param {import('./say.mjs').Say} say
 */
export const clearCluster = (cluster, say) => clearPostmaster(dataOf(cluster), say);

/**
 * Runs SQL through psql, so that no package is needed before the packages are there.
 * @param {Cluster} cluster
 * @param {{ role?: string, password?: string | null, database?: string, sql: string }} query
 */
export const psql = ({ bin, port }, { role = OWNER, password, database = 'postgres', sql }) =>
  runCommand(
    [join(bin, 'psql'), '-X', '-q', '-A', '-t', '-v', 'ON_ERROR_STOP=1', '-f', '-'].concat([
      '-h',
      '127.0.0.1',
      '-p',
      String(port),
      '-U',
      role,
      '-d',
      database,
    ]),
    { cwd: '/', input: sql, env: { ...process.env, PGPASSWORD: password ?? '', PGCONNECT_TIMEOUT: '5' } },
  );

/**
 * Waits until the server takes connections.
 * @param {Cluster} cluster
 * @param {{ within_ms: number, log: () => string }} options recovery after a crash may take a while
 */
export async function waitForServer({ bin, port }, { within_ms, log }) {
  const isReady = async () =>
    (await runCommand([join(bin, 'pg_isready'), '-q', '-h', '127.0.0.1', '-p', String(port)])).code === 0;
  if (!(await waitUntil(isReady, within_ms)))
    throw new PlainStop(`The database server did not come up:\n${log()}`);
}
