import { execFileSync, spawn, type ChildProcess } from 'node:child_process';
import { pathToFileURL } from 'node:url';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { closeDatabase } from '@/models/database';
import { cuttingProxy, type CuttingProxy } from '@/scripts/endure/cutting-proxy';
import { freePort } from '@/scripts/platform/free-port.mjs';
import { nextCommand } from '@/scripts/platform/web-build.mjs';
import { ApiScript } from '../helpers/api-client';
import { patiently } from '../helpers/patiently';
import { readSecrets } from '@/scripts/platform/secrets.mjs';
import { sharedServer } from '../helpers/server';
import { signedInCookie } from '../helpers/sign-in';
import { makeTestLab } from '../helpers/test-lab';
import { until } from '../helpers/until';

// A web server beside the shared one, whose way to the database can be closed, and whose descriptors can be taken.

const server = sharedServer();
let way: CuttingProxy;
let origin: string;
let web: ChildProcess;
let script: ApiScript;
let cookie: string;

function startWeb(port: number, databaseUrl: string, env: Record<string, string> = {}): ChildProcess {
  const [program, ...args] = nextCommand('start', '-H', '127.0.0.1', '-p', String(port));
  const { PATH, HOME } = process.env;
  return spawn(program!, args, {
    cwd: process.cwd(),
    stdio: 'ignore',
    env: {
      ...{ PATH, HOME, NODE_ENV: 'production', BEADLINE_ROOT: process.cwd() },
      ...{ DATABASE_URL: databaseUrl, BEADLINE_DATA: server.dataDir },
      // The same key as the shared server's, so that who has signed in there is known here.
      NEXTAUTH_SECRET: readSecrets(server.dataDir)!.nextauthSecret,
      NEXTAUTH_URL: `http://127.0.0.1:${port}`,
      ...env,
    },
  });
}

beforeAll(async () => {
  const database = new URL(server.databaseUrl);
  way = await cuttingProxy(Number(database.port));
  way.close();
  database.port = String(way.port);
  const port = await freePort();
  origin = `http://127.0.0.1:${port}`;
  web = startWeb(port, database.href);
  const { experimentalist } = (await makeTestLab(server.databaseUrl)).people;
  script = new ApiScript(origin, experimentalist.token);
  cookie = await signedInCookie(server.baseUrl, experimentalist);
}, 60_000);
afterAll(async () => {
  const gone = new Promise((resolve) => web.once('exit', resolve));
  web.kill('SIGTERM');
  await gone;
  await way.end();
  await closeDatabase();
});

const health = () =>
  fetch(`${origin}/api/health`).then(
    async (answer) => ({ status: answer.status, told: (await answer.json()) as object }),
    () => ({ status: 0, told: {} }),
  );

it('F10 started before its database, a server stands, tells so on every address, and works once the database is there', async () => {
  const down = await until(health, ({ status }) => status !== 0, { withinMs: 60_000 });
  expect(down).toMatchObject({ status: 503, told: { database: 'down', queue: 'down' } });
  const answer = await script.request('/api/v1/campaigns');
  expect([answer.status, answer.headers.get('retry-after')]).toEqual([503, '5']);
  expect(await answer.json()).toMatchObject({
    code: 'UNAVAILABLE',
    detail: 'The database does not answer. Try again in a moment.',
  });
  // A page leads to one that waits, and back to where the person wanted to go.
  const page = await fetch(`${origin}/campaigns?sort=name`, { headers: { cookie } });
  expect(page.url).toBe(`${origin}/away?next=${encodeURIComponent('/campaigns?sort=name')}`);
  expect(await page.text()).toContain('The database does not answer');
  expect(web.exitCode).toBeNull();

  way.open();
  await until(health, ({ status }) => status === 200, { withinMs: 60_000 });
  expect((await script.request('/api/v1/campaigns')).status).toBe(200);
  const there = await fetch(`${origin}/campaigns`, { headers: { cookie } });
  expect([there.status, there.url]).toEqual([200, `${origin}/campaigns`]);
}, 180_000);

it('F32 without a descriptor left a server is busy for as long as it lasts, and loses nothing that it said', async () => {
  const make = (name: string) =>
    script
      .request('/api/v1/campaigns', {
        method: 'POST',
        headers: { 'Content-Type': 'application/json' },
        body: JSON.stringify({ name }),
        signal: AbortSignal.timeout(3_000),
      })
      .then(
        async (answer) => ({ status: answer.status, body: (await answer.json()) as { id: string } }),
        () => null,
      );
  await until(health, ({ status }) => status === 200, { withinMs: 60_000 });
  const limitTo = (most: number) =>
    execFileSync('prlimit', ['--pid', String(web.pid), `--nofile=${most}:`], { stdio: 'ignore' });
  const acknowledged: string[] = [];
  const statuses: (number | null)[] = [];
  limitTo(3);
  try {
    // Connections that stand are used up first.
    for (let n = 0; n < 3; n++) {
      const answers = await Promise.all([0, 1, 2].map((i) => make(`Campaign ${n} ${i}`)));
      for (const answer of answers) {
        statuses.push(answer?.status ?? null);
        if (answer?.status === 201) acknowledged.push(answer.body.id);
      }
      way.cut();
    }
  } finally {
    limitTo(1024);
  }
  for (const status of statuses) expect([null, 201, 503]).toContain(status);
  expect(statuses.some((status) => status !== 201)).toBe(true);
  await until(health, ({ status }) => status === 200, { withinMs: 60_000 });
  for (const id of acknowledged) await patiently(() => script.json(`/api/v1/campaigns/${id}`));
  expect((await make('After'))?.status).toBe(201);
}, 180_000);

it('F32 a server that had no descriptor to load its parts with ends, to be started anew, instead of failing for good', async () => {
  const hook = pathToFileURL('tests/helpers/unreadable-module.mjs').href;
  const broken = startWeb(await freePort(), server.databaseUrl, { NODE_OPTIONS: `--import ${hook}` });
  const code = await new Promise((resolve) => broken.once('exit', resolve));
  expect(code).toBe(1);
}, 180_000);
