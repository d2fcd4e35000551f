import { spawn, type ChildProcess } from 'node:child_process';
import { createHash } from 'node:crypto';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { freePort } from '@/scripts/platform/free-port.mjs';
import { nextCommand } from '@/scripts/platform/web-build.mjs';
import { sharedServer } from '../helpers/server';
import { closeTusClient, FILE, TusClient } from '../helpers/tus-client';
import { until } from '../helpers/until';

const server = sharedServer();
let second: ChildProcess;
let here: TusClient;
let there: TusClient;

/** Another web server on the same database and data folder, as behind a load balancer. */
beforeAll(async () => {
  const port = await freePort();
  const [program, ...args] = nextCommand('start', '-H', '127.0.0.1', '-p', String(port));
  const origin = `http://127.0.0.1:${port}`;
  const { PATH, HOME } = process.env;
  second = spawn(program!, args, {
    cwd: process.cwd(),
    stdio: 'ignore',
    env: {
      ...{ PATH, HOME, NODE_ENV: 'production', BEADLINE_ROOT: process.cwd() },
      ...{ DATABASE_URL: server.databaseUrl, BEADLINE_DATA: server.dataDir },
      ...{ NEXTAUTH_SECRET: 'a secret of the second server', NEXTAUTH_URL: origin },
    },
  });
  here = await TusClient.inNewLab(server.baseUrl, server.databaseUrl);
  there = here.at(origin);
  await until(
    () =>
      fetch(`${origin}/api/health`).then(
        ({ status }) => status,
        () => 0,
      ),
    (status) => status === 200,
    { withinMs: 60_000 },
  );
});
afterAll(async () => {
  const gone = new Promise((resolve) => second.once('exit', resolve));
  second.kill('SIGTERM');
  await gone;
  await closeTusClient();
});

/** A body that sends its first half, and the rest when it is told to. */
function slowBody(bytes: Uint8Array, half: number) {
  let finish = () => undefined as void;
  const body = new ReadableStream<Uint8Array>({
    start(controller) {
      controller.enqueue(bytes.subarray(0, half));
      finish = () => {
        controller.enqueue(bytes.subarray(half));
        controller.close();
      };
    },
  });
  return { body, finish: () => finish() };
}

const sha256 = createHash('sha256').update(FILE).digest('hex');

describe('two web servers on one store', () => {
  it('while one takes in a piece the other answers 423, and the file holds the first sender’s bytes', async () => {
    const { url, recordingId } = await here.begin();
    const { body, finish } = slowBody(FILE, 8000);
    const first = here.patch(url, 0, body);
    await until(
      () => there.offset(url),
      (offset) => offset === 8000,
      { withinMs: 10_000 },
    );
    const other = new Uint8Array(FILE.length).fill(7);
    expect((await there.patch(url, 8000, other.subarray(8000))).status).toBe(423);
    finish();
    const answer = await first;
    expect([answer.status, answer.headers.get('upload-offset')]).toEqual([204, String(FILE.length)]);
    expect(await here.storedSha256(recordingId)).toBe(sha256);
  });

  it('a sender that has fallen silent at one gives way to the other', async () => {
    const { url, recordingId } = await here.begin();
    const first = here.patch(url, 0, slowBody(FILE, 8000).body).catch(() => null);
    await until(
      () => there.offset(url),
      (offset) => offset === 8000,
    );
    const answer = await until(
      () => there.patch(url, 8000, FILE.subarray(8000)),
      ({ status }) => status !== 423,
      { withinMs: 40_000, everyMs: 1000 },
    );
    expect([answer.status, answer.headers.get('upload-offset')]).toEqual([204, String(FILE.length)]);
    expect((await first)?.status).not.toBe(204);
    expect(await here.storedSha256(recordingId)).toBe(sha256);
  });

  it('pieces sent to them in turn make the file byte for byte', async () => {
    const { url, recordingId } = await here.begin();
    for (let at = 0; at < FILE.length; at += 4000) {
      const client = at % 8000 === 0 ? here : there;
      const response = await client.patch(url, at, FILE.subarray(at, at + 4000));
      expect(response.headers.get('upload-offset')).toBe(String(at + 4000));
    }
    expect(await here.storedSha256(recordingId)).toBe(sha256);
    expect(await there.offset(url)).toBe(FILE.length);
  });

  it('of senders that race for the same offset one writes at a time, and no byte of the others gets in', async () => {
    for (let round = 0; round < 5; round++) {
      const { url, recordingId } = await here.begin();
      const answers = await Promise.all(
        [here, there, here, there].map((client) => client.patch(url, 0, FILE)),
      );
      const statuses = answers.map(({ status }) => status);
      expect(statuses.filter((status) => status === 204)).toHaveLength(1);
      for (const status of statuses) expect([204, 409, 423]).toContain(status);
      expect(await here.storedSha256(recordingId)).toBe(sha256);
    }
  });

  it('uploads begun side by side at both can’t take more than the quota together', async () => {
    const { models } = await import('@/models');
    const lab = await TusClient.inNewLab(server.baseUrl, server.databaseUrl);
    const me = await lab.script.json<{ lab: { id: string } }>('/api/v1/me');
    await models().Lab.update({ quotaBytes: '100000' }, { where: { id: me.lab.id } });
    const far = lab.at(there.script.baseUrl);
    const answers = await Promise.all(
      Array.from({ length: 12 }, (_, i) => (i % 2 ? lab : far).post({ 'Upload-Length': '30000' })),
    );
    const statuses = answers.map(({ status }) => status).sort();
    expect(statuses).toEqual([201, 201, 201, ...Array<number>(9).fill(507)]);
    const refused = answers.find(({ status }) => status === 507)!;
    expect(((await refused.json()) as { detail: string }).detail).toBe(
      'Storage full: this laboratory may keep 100 kB and has 10.0 kB left; 30.0 kB needed. Remove recordings first.',
    );
  });
});
