import { spawn } from 'node:child_process';
import { join } from 'node:path';
import { freePort } from '@/scripts/platform/free-port.mjs';

/**
 * Nothing has to be built here: `npm test` has done it before the first test. The start itself gives up two minutes
 * after its database is there and says why: that must be heard first, also where the disk is slow.
 */
const READY_WITHIN_MS = 240_000;

export interface Product {
  baseUrl: string;
  pid: number;
  /** Everything that the start has printed until now. */
  printed: () => string;
  /** Ends it as Ctrl-C does. @returns its exit code */
  stop: () => Promise<number | null>;
}

/** Starts the whole product by its own start script on a free port and waits for its ready line. */
export async function startProduct(options: {
  BEADLINE_DATA: string;
  /** Without it the product makes its private cluster. */
  DATABASE_URL?: string;
  /** Of the owner of the tables, where the product is to run by another role. */
  DATABASE_OWNER_URL?: string;
  BEADLINE_LIMIT_QUIET_SECONDS?: string;
  workers: number;
}): Promise<Product> {
  const { workers, ...settings } = options;
  const port = await freePort();
  const child = spawn(process.execPath, [join(process.cwd(), 'scripts', 'start.mjs')], {
    env: {
      ...withoutTestRunner(process.env),
      ...settings,
      PORT: String(port),
      BEADLINE_WORKERS: String(workers),
      BEADLINE_DEMO: '0',
    },
    stdio: ['ignore', 'pipe', 'pipe'],
  });
  let printed = '';
  child.stdout.on('data', (text) => (printed += text));
  child.stderr.on('data', (text) => (printed += text));
  const ended = new Promise<number | null>((resolve) => child.once('exit', resolve));

  const readyLine = `Beadline is ready at http://127.0.0.1:${port}\n`;
  const ready = new Promise<void>((resolve, reject) => {
    const late = setTimeout(() => reject(new Error(`No ready line in time:\n${printed}`)), READY_WITHIN_MS);
    child.stdout.on('data', () => {
      if (!printed.endsWith(readyLine)) return;
      clearTimeout(late);
      resolve();
    });
    void ended.then((code) => {
      clearTimeout(late);
      reject(new Error(`The start ended with ${code}:\n${printed}`));
    });
  });
  try {
    await ready;
  } catch (error) {
    child.kill('SIGTERM');
    await ended;
    throw error;
  }
  return {
    baseUrl: `http://127.0.0.1:${port}`,
    pid: child.pid!,
    printed: () => printed,
    async stop() {
      child.kill('SIGTERM');
      return ended;
    },
  };
}

/** The product must not see that a test started it. */
function withoutTestRunner(env: NodeJS.ProcessEnv): NodeJS.ProcessEnv {
  const foreign = (name: string) =>
    /^(VITEST|TEST_|NODE_ENV$|DATABASE_URL$|DATABASE_OWNER_URL$|NEXTAUTH_|npm_|INIT_CWD$)/.test(name);
  const kept = Object.entries(env).filter(([name]) => !foreign(name));
  return { NODE_ENV: 'production', ...Object.fromEntries(kept) };
}
