import { join } from 'node:path';
import { PlainStop } from './plain-stop.mjs';
import { startPrivateCluster } from './private-cluster.mjs';
import { privateDatabaseUrl, readSecrets } from './secrets.mjs';
import { createSupervisor } from './supervise.mjs';

/**
 * Does some work on the database of a data folder: the one that DATABASE_URL names, else the private one, which is
 * brought up for the time of the work where it does not run.
 * @template T
 * @param {string} data absolute
 * @param {{ say: import('./say.mjs').Say, databaseUrl?: string }} options
 * @param {(url: string) => Promise<T>} work
 * @returns {Promise<T>}
 */
export async function withDatabaseOf(data, { say, databaseUrl }, work) {
  if (databaseUrl) return work(databaseUrl);
  const secrets = readSecrets(data);
  const running = secrets?.databasePort ? privateDatabaseUrl(secrets) : null;
  // Only our own cluster knows the password: no other program on the port can be taken for it.
  if (running && (await takes(running))) return work(running);
  const supervisor = createSupervisor({ logs: join(data, 'logs'), say });
  try {
    return await work((await startPrivateCluster(data, { say, supervisor })).ownerUrl);
  } finally {
    await supervisor.stop();
  }
}

/**
 * A connection for one command; a database that can't be reached is told in one sentence.
 * @param {string} url
 */
export async function connectTo(url) {
  const { default: pg } = await import('pg');
  const client = new pg.Client({ connectionString: url, connectionTimeoutMillis: 5_000 });
  client.on('error', () => {});
  try {
    await client.connect();
    return client;
  } catch (error) {
    const { hostname, port } = new URL(url);
    const reason = /** @type {Error} */ (error).message;
    throw new PlainStop(`The database at ${hostname}:${port || 5432} can't be reached: ${reason}.`);
  }
}

/** @param {string} url */
async function takes(url) {
  try {
    await (await connectTo(url)).end();
    return true;
  } catch {
    return false;
  }
}
