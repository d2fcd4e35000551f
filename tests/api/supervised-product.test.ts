import { spawn } from 'node:child_process';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { waitUntil } from '@/scripts/platform/processes.mjs';
import { processesOf } from '../helpers/server';
import { startServer } from '../helpers/start-server';

/** The one that other tests share must not be killed. */
let server: Awaited<ReturnType<typeof startServer>>;
beforeAll(async () => {
  server = await startServer('supervised');
});
afterAll(() => server?.stop());

const isHealthy = () =>
  fetch(`${server.baseUrl}/api/health`).then(
    ({ status }) => status === 200,
    () => false,
  );

async function restartAfterKill(name: string): Promise<boolean> {
  const killed = processesOf(server)[name]!;
  process.kill(killed, 'SIGKILL');
  const isBack = () => {
    const pid = processesOf(server)[name];
    return typeof pid === 'number' && pid !== killed;
  };
  return waitUntil(isBack, 10_000);
}

function startAgain(env: Record<string, string>): Promise<{ code: number | null; printed: string }> {
  const child = spawn(process.execPath, [join(process.cwd(), 'scripts', 'start.mjs')], {
    cwd: '/',
    env: { ...process.env, BEADLINE_DEMO: '0', ...env },
  });
  let printed = '';
  child.stdout.on('data', (text) => (printed += text));
  child.stderr.on('data', (text) => (printed += text));
  return new Promise((resolve) => child.on('close', (code) => resolve({ code, printed })));
}

describe('the running product', () => {
  it('a killed web server answers again within fifteen seconds', async () => {
    expect(await restartAfterKill('web')).toBe(true);
    expect(await waitUntil(isHealthy, 15_000)).toBe(true);
  });

  it('a killed worker is started again and the health stays good or becomes good again', async () => {
    expect(await restartAfterKill('worker-1')).toBe(true);
    expect(await waitUntil(isHealthy, 30_000)).toBe(true);
  });

  it('a second start on the same data folder is refused in one sentence', async () => {
    const { code, printed } = await startAgain({ BEADLINE_DATA: server.dataDir, PORT: '1' });
    expect(code).toBe(1);
    expect(printed).toMatch(/^Beadline already runs on .* \(process \d+, http:\/\/127\.0\.0\.1:\d+\)\.\n$/);
  });

  it('a start on a port that is taken is refused in one sentence', async () => {
    const { port } = new URL(server.baseUrl);
    const elsewhere = join(server.dataDir, 'second');
    const { code, printed } = await startAgain({ BEADLINE_DATA: elsewhere, PORT: port });
    expect(code).toBe(1);
    expect(printed).toBe(`Port ${port} is in use by another program: set PORT to a free one.\n`);
  });
});
