import { execFileSync } from 'node:child_process';
import { writeFile, rm } from 'node:fs/promises';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { ProblemView } from '@/lib/views/common';
import { cuttingProxy, type CuttingProxy } from '@/scripts/endure/cutting-proxy';
import { ApiScript } from '../helpers/api-client';
import { sharedServer } from '../helpers/server';
import { smallDisk, type SmallDisk } from '../helpers/small-disk';
import { closeTusClient, TusClient } from '../helpers/tus-client';
import { until } from '../helpers/until';
import { startWebServer, type WebServer } from '../helpers/web-server';

const server = sharedServer();
const SLOW = { withinMs: 60_000, everyMs: 200 };
const DISK_MB = 48;
let disk: SmallDisk | null;
let wire: CuttingProxy;
let web: WebServer;
let client: TusClient;

/** A web server on a small disk, whose wire to the database can be cut; the database is away when it starts. */
beforeAll(async () => {
  disk = smallDisk(DISK_MB);
  const database = new URL(server.databaseUrl);
  wire = await cuttingProxy(Number(database.port));
  wire.close();
  database.port = String(wire.port);
  web = await startWebServer({
    DATABASE_URL: database.href,
    BEADLINE_DATA: disk?.folder ?? join(server.dataDir, 'second'),
  });
  client = (await TusClient.inNewLab(server.baseUrl, server.databaseUrl)).at(web.baseUrl);
});
afterAll(async () => {
  await web.end();
  await wire.end();
  disk?.remove();
  await closeTusClient();
});

const health = () =>
  fetch(`${web.baseUrl}/api/health`).then(
    async (answer) => ({ ...((await answer.json()) as { database: string }), status: answer.status }),
    () => null,
  );
const problemOf = async (response: Response) => {
  const { code, detail } = (await response.json()) as ProblemView;
  return [response.status, code, detail];
};

describe('a web server whose database is away', () => {
  it('F10 starts all the same, says so at its health, and becomes good by itself', async () => {
    const away = await until(health, (answer) => answer !== null, SLOW);
    expect(away).toMatchObject({ status: 503, database: 'down' });
    const script = new ApiScript(web.baseUrl, 'bdl_nobody');
    expect(await problemOf(await script.request('/api/v1/campaigns'))).toEqual([
      503,
      'UNAVAILABLE',
      'The database does not answer. Try again in a moment.',
    ]);
    // A person sees a page that says what is safe, not a browser's own error.
    const page = await fetch(`${web.baseUrl}/`, {
      headers: { cookie: 'beadline-session=x' },
      redirect: 'manual',
    });
    expect([200, 307, 500]).toContain(page.status);
    wire.open();
    await until(health, (answer) => answer?.database === 'up', SLOW);
  });

  it('F9 reads go on over a connection that is cut, and a change after it is made once', async () => {
    const before = await client.script.json<{ items: unknown[] }>('/api/v1/campaigns');
    expect(wire.cut()).toBeGreaterThan(0);
    expect(await client.script.json('/api/v1/campaigns')).toEqual(before);
    const key = { 'Idempotency-Key': crypto.randomUUID(), 'Content-Type': 'application/json' };
    const make = () =>
      client.script.request('/api/v1/campaigns', { method: 'POST', headers: key, body: '{"name":"Once"}' });
    wire.close();
    const refused = await make();
    expect((await problemOf(refused)).slice(0, 2)).toEqual([503, 'UNAVAILABLE']);
    wire.open();
    expect((await until(make, ({ status }) => status === 201, SLOW)).status).toBe(201);
    const after = await client.script.json<{ items: { name: string }[] }>('/api/v1/campaigns');
    expect(after.items.filter(({ name }) => name === 'Once')).toHaveLength(1);
  });
});

describe('a disk that is full, read-only or gone', () => {
  it('F7 refuses what can’t fit before it is sent, keeps what had arrived when it filled up, and goes on', async (context) => {
    if (!disk) return context.skip('a disk of its own needs root');
    const early = await client.post({ 'Upload-Length': '200000000' });
    const [status, code, detail] = await problemOf(early);
    expect([status, code]).toEqual([507, 'STORAGE_FULL']);
    expect(detail).toMatch(/^Storage full: \d+\.?\d* MB free, 200 MB needed\.$/);

    const bytes = new Uint8Array(20_000_000).fill(7);
    const { url } = await client.begin(bytes.length);
    expect((await client.patch(url, 0, bytes.subarray(0, 1_000_000))).status).toBe(204);
    // Somebody else takes the rest of the disk.
    const filler = join(disk.folder, 'filler');
    await writeFile(filler, Buffer.alloc((DISK_MB - 8) << 20));
    const refused = await client.patch(url, 1_000_000, bytes.subarray(1_000_000));
    expect(await problemOf(refused)).toEqual([
      507,
      'STORAGE_FULL',
      'Storage full. What has arrived is kept: go on when there is room.',
    ]);
    const offset = Number(refused.headers.get('upload-offset'));
    expect(offset).toBeGreaterThanOrEqual(1_000_000);
    expect(await client.offset(url)).toBe(offset);
    await rm(filler);
    const answer = await client.patch(url, offset, bytes.subarray(offset));
    expect([answer.status, answer.headers.get('upload-offset')]).toEqual([204, String(bytes.length)]);
  });

  it('F31 a store that can’t be written refuses uploads in a sentence, and takes them once it can', async (context) => {
    if (!disk) return context.skip('a disk of its own needs root');
    disk.readOnly(true);
    try {
      expect(await problemOf(await client.post())).toEqual([
        503,
        'UNAVAILABLE',
        'Uploads are not possible now: the storage can not be written.',
      ]);
      // Reading goes on.
      expect((await client.script.request('/api/v1/campaigns')).status).toBe(200);
    } finally {
      disk.readOnly(false);
    }
    expect((await client.post()).status).toBe(201);
    expect(await client.unfinished()).toBe(1);
  });
});

describe('a process that may open nothing more', () => {
  const bound = (soft: string) => execFileSync('prlimit', ['--pid', String(web.pid), `--nofile=${soft}:`]);

  it('F32 recovers as soon as it may', async () => {
    const { url } = await client.begin();
    bound('10');
    const answers = await Promise.all(
      Array.from({ length: 8 }, () =>
        client.head(url).then(
          ({ status }) => status,
          () => 0,
        ),
      ),
    );
    bound('1024');
    expect(answers.every((status) => [0, 200, 503].includes(status))).toBe(true);
    expect(
      (
        await until(
          () => client.head(url).catch(() => null),
          (answer) => answer?.status === 200,
          SLOW,
        )
      )?.status,
    ).toBe(200);
    expect((await client.patch(url, 0, new Uint8Array(100))).status).toBe(204);
  });
});
