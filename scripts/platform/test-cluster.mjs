import { chmodSync, mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { initCluster, psql, serverCommand, waitForServer } from './cluster.mjs';
import { prepareClusterPlace } from './cluster-place.mjs';
import { freePort } from './free-port.mjs';
import { PlainStop } from './plain-stop.mjs';
import { ensurePostgres } from './postgres-programs.mjs';
import { tailOf } from './run-command.mjs';
import { APPLICATION } from './secrets.mjs';

/** Nothing in a throw-away cluster is worth a wait for the disk. */
const FAST = {
  fsync: 'off',
  synchronous_commit: 'off',
  full_page_writes: 'off',
  autovacuum: 'off',
  max_connections: '200',
  shared_buffers: '128MB',
};

/** A folder for one run of the tests, which the database's user can pass through. */
export function makeTemporaryFolder() {
  const folder = mkdtempSync(join(tmpdir(), 'beadline-test-'));
  chmodSync(folder, 0o711);
  return folder;
}

/**
 * Brings up a throw-away cluster with an empty database that tests clone once it has tables.
 * @param {string} folder temporary
 * @param {{ say: import('./say.mjs').Say, supervisor: import('./supervise.mjs').Supervisor }} options
 * @returns {Promise<{ templateUrl: string, clusterFolder: string }>}
 */
export async function startTestCluster(folder, { say, supervisor }) {
  const bin = await ensurePostgres(say);
  const place = await prepareClusterPlace(folder, { clusterId: 'test', say });
  await initCluster({ ...place, bin }, { password: null, say, extra: ['--no-sync'] });
  const cluster = { ...place, bin, port: await freePort() };
  const server = supervisor.add({
    name: 'postgres',
    command: serverCommand(cluster, FAST),
    cwd: '/',
    stopSignal: 'SIGINT',
    killSignal: 'SIGQUIT',
    stopWithin_ms: 20_000,
    stopOrder: 3,
  });
  await waitForServer(cluster, { within_ms: 30_000, log: () => server.log.tail(15) });
  // The role has the product's rights and one more: tests make databases.
  const sql = `CREATE ROLE beadline LOGIN CREATEDB;
    CREATE ROLE ${APPLICATION} LOGIN;
    CREATE DATABASE beadline_template OWNER beadline;`;
  const result = await psql(cluster, { sql });
  if (result.code !== 0) throw new PlainStop(`The test database could not be made:\n${tailOf(result)}`);
  const templateUrl = `postgres://beadline@127.0.0.1:${cluster.port}/beadline_template`;
  return { templateUrl, clusterFolder: place.folder };
}

/** @param {string[]} folders */
export function removeFolders(folders) {
  for (const folder of folders) rmSync(folder, { recursive: true, force: true });
}

/**
 * The same test database by the role of web server and workers, which owns nothing.
 * @param {string} ownerUrl
 */
export function applicationUrlOf(ownerUrl) {
  const url = new URL(ownerUrl);
  url.username = APPLICATION;
  return url.href;
}
