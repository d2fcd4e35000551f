import { existsSync } from 'node:fs';
import { join } from 'node:path';
import { clearCluster, initCluster, serverCommand, waitForServer } from './cluster.mjs';
import { prepareClusterPlace } from './cluster-place.mjs';
import { freePort } from './free-port.mjs';
import { ensurePostgres } from './postgres-programs.mjs';
import { ensureProductDatabase, resetOwnerPassword } from './product-database.mjs';
import { applicationUrl, ensureSecrets, privateDatabaseUrl, writeSecrets } from './secrets.mjs';

/** Recovery replays at most a few gigabytes of log. */
const COMES_UP_WITHIN_MS = 180_000;

/**
 * Brings up the private cluster of a data folder under supervision.
 * @param {string} dataFolder absolute, existing
 * @param {{ say: import('./say.mjs').Say, supervisor: import('./supervise.mjs').Supervisor }} options
 * @returns {Promise<{ ownerUrl: string, applicationUrl: string }>} addresses of the product's database for the owner of
 *   its tables, and for web server and workers
 */
export async function startPrivateCluster(dataFolder, { say, supervisor }) {
  const { secrets, isNew } = ensureSecrets(dataFolder);
  // Root learns who the server's user is only once the package is there.
  const anyVersion = await ensurePostgres(say);
  const place = await prepareClusterPlace(dataFolder, { clusterId: secrets.clusterId, say });
  const data = join(place.folder, 'data');
  const isThere = existsSync(join(data, 'PG_VERSION'));
  const bin = isThere ? await ensurePostgres(say, data) : anyVersion;
  if (isThere) {
    await clearCluster({ ...place, bin, port: 0 }, say);
    if (isNew) await resetOwnerPassword({ ...place, bin }, secrets.ownerPassword);
  } else await initCluster({ ...place, bin }, { password: secrets.ownerPassword, say });

  secrets.databasePort = await freePort(secrets.databasePort ?? undefined);
  writeSecrets(dataFolder, secrets);
  const cluster = { ...place, bin, port: secrets.databasePort };
  await say.step(`Starting PostgreSQL on 127.0.0.1:${cluster.port}`, async () => {
    const server = supervisor.add({
      name: 'postgres',
      command: serverCommand(cluster),
      cwd: '/',
      stopSignal: 'SIGINT',
      killSignal: 'SIGQUIT',
      stopWithin_ms: 60_000,
      stopOrder: 3,
      beforeStart: () => clearCluster(cluster, say),
    });
    await waitForServer(cluster, { within_ms: COMES_UP_WITHIN_MS, log: () => server.log.tail(15) });
    await ensureProductDatabase(cluster, secrets);
  });
  return { ownerUrl: privateDatabaseUrl(secrets), applicationUrl: applicationUrl(secrets) };
}
