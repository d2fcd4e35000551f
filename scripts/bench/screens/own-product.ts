import { spawn } from 'node:child_process';
import { mkdir } from 'node:fs/promises';
import { join } from 'node:path';
import { freePort } from '@/scripts/platform/free-port.mjs';
import { privateDatabaseUrl, readSecrets } from '@/scripts/platform/secrets.mjs';

const READY_WITHIN_MS = 600_000;

export interface OwnProduct {
  baseUrl: string;
  databaseUrl: string;
  dataDir: string;
  stop(): Promise<void>;
}

/** Starts the whole product on a data folder of its own, without the demo. */
export async function startOwnProduct(root: string, folder: string): Promise<OwnProduct> {
  const dataDir = join(folder, 'product');
  await mkdir(dataDir, { mode: 0o711 });
  const port = await freePort();
  const child = spawn(process.execPath, [join(root, 'scripts', 'start.mjs')], {
    cwd: root,
    env: {
      ...process.env,
      NODE_ENV: 'production',
      BEADLINE_DATA: dataDir,
      BEADLINE_DEMO: '0',
      BEADLINE_WORKERS: '1',
      PORT: String(port),
    },
    stdio: ['ignore', 'pipe', 'inherit'],
  });
  let printed = '';
  const ended = new Promise<void>((resolve) => child.once('exit', () => resolve()));
  await new Promise<void>((resolve, reject) => {
    const late = setTimeout(() => reject(new Error(`Not ready in time:\n${printed}`)), READY_WITHIN_MS);
    child.stdout.on('data', (text) => {
      printed += text;
      if (!printed.includes(`Beadline is ready at http://127.0.0.1:${port}`)) return;
      clearTimeout(late);
      resolve();
    });
    void ended.then(() => {
      clearTimeout(late);
      reject(new Error(`The product ended:\n${printed}`));
    });
  });
  const secrets = readSecrets(dataDir);
  if (!secrets) throw new Error('The product has no secrets.');
  return {
    baseUrl: `http://127.0.0.1:${port}`,
    databaseUrl: privateDatabaseUrl(secrets),
    dataDir,
    async stop() {
      child.kill('SIGTERM');
      await ended;
    },
  };
}
