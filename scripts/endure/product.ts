import { spawn } from 'node:child_process';
import { join } from 'node:path';
import { rootDir } from '@/lib/env';
import { freePort } from '@/scripts/platform/free-port.mjs';
import { readRunning } from '@/scripts/platform/running.mjs';
import { applicationUrl, privateDatabaseUrl, readSecrets } from '@/scripts/platform/secrets.mjs';

/** The whole product on a data folder of its own, with its private PostgreSQL. */
export interface EnduringProduct {
  port: number;
  dataDir: string;
  /** Of the owner of the tables. */
  databaseUrl: string;
  /** Of the role by which web server and workers run. */
  applicationUrl: string;
  /** Numbers of its processes by name; null between two starts. */
  pids(): Record<string, number | null>;
  stop(): Promise<void>;
}

/** @throws Error with what it printed when it does not become ready */
export async function startProduct(
  dataDir: string,
  workers: number,
  settings: Record<string, string> = {},
): Promise<EnduringProduct> {
  const port = await freePort();
  const child = spawn(process.execPath, [join(rootDir(), 'scripts', 'start.mjs')], {
    env: {
      ...process.env,
      // Its own cluster, not that of a product that this process had before.
      DATABASE_URL: undefined,
      DATABASE_OWNER_URL: undefined,
      ...settings,
      PORT: String(port),
      BEADLINE_DATA: dataDir,
      BEADLINE_DEMO: '0',
      BEADLINE_WORKERS: String(workers),
    },
    stdio: ['ignore', 'pipe', 'pipe'],
  });
  let printed = '';
  const ended = new Promise<void>((resolve) => child.once('exit', () => resolve()));
  await new Promise<void>((resolve, reject) => {
    const hear = (text: Buffer) => {
      printed += text.toString();
      if (printed.includes('Beadline is ready at')) resolve();
    };
    child.stdout.on('data', hear);
    child.stderr.on('data', hear);
    void ended.then(() => reject(new Error(`The product did not start:\n${printed}`)));
  });
  const secrets = readSecrets(dataDir);
  if (!secrets) throw new Error('The product has no secrets.');
  return {
    port,
    dataDir,
    databaseUrl: privateDatabaseUrl(secrets),
    applicationUrl: applicationUrl(secrets),
    pids: () =>
      Object.fromEntries((readRunning(dataDir)?.children ?? []).map(({ name, pid }) => [name, pid])),
    async stop() {
      child.kill('SIGTERM');
      await ended;
    },
  };
}
