import { chmodSync, existsSync, mkdtempSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import pg from 'pg';
import { afterAll, afterEach, beforeAll, describe, expect, it, vi } from 'vitest';
import { isAlive, waitUntil } from '@/scripts/platform/processes.mjs';
import { startPrivateCluster } from '@/scripts/platform/private-cluster.mjs';
import { createSupervisor, type Supervisor } from '@/scripts/platform/supervise.mjs';
import { postmasterOf } from '@/scripts/platform/stale-postmaster.mjs';

const quiet = { line: () => {}, step: <T>(_doing: string, work: () => Promise<T>) => work() };

// A durable cluster waits for the disk, which other tests keep busy.
vi.setConfig({ testTimeout: 180_000 });

let data: string;
let supervisor: Supervisor;

beforeAll(() => {
  data = mkdtempSync(join(tmpdir(), 'beadline-cluster-'));
  chmodSync(data, 0o711);
});
afterEach(() => supervisor.stop());
afterAll(() => rmSync(data, { recursive: true, force: true }));

async function start(): Promise<string> {
  supervisor = createSupervisor({ logs: join(data, 'logs'), say: quiet });
  return (await startPrivateCluster(data, { say: quiet, supervisor })).ownerUrl;
}

async function ask(url: string, sql: string): Promise<string> {
  const client = new pg.Client({ connectionString: url, connectionTimeoutMillis: 2_000 });
  // A server that is killed in mid-talk is part of the test.
  client.on('error', () => {});
  await client.connect();
  try {
    const { rows } = await client.query({ text: sql, rowMode: 'array' });
    return String(rows[0]?.[0]);
  } finally {
    await client.end();
  }
}

const serverPid = () => postmasterOf(join(data, 'pg', 'data'))!;
const answers = (url: string) =>
  waitUntil(
    () =>
      ask(url, 'SELECT 1').then(
        () => true,
        () => false,
      ),
    30_000,
  );

describe('the private cluster', () => {
  it('keeps its rows over a stop and a start, at the same address', async () => {
    const url = await start();
    await ask(url, 'CREATE TABLE kept AS SELECT 17 AS n');
    const pid = serverPid();
    await supervisor.stop();
    expect(isAlive(pid)).toBe(false);
    expect(await start()).toBe(url);
    expect(await ask(url, 'SELECT n FROM kept')).toBe('17');
  });

  it('is durable, on loopback only, and its role is no superuser', async () => {
    const url = await start();
    // The defaults of PostgreSQL's documentation, chapter 20.5: a reported commit survives a crash.
    for (const setting of ['fsync', 'synchronous_commit', 'full_page_writes', 'data_checksums'])
      expect([setting, await ask(url, `SHOW ${setting}`)]).toEqual([setting, 'on']);
    expect(await ask(url, 'SHOW listen_addresses')).toBe('127.0.0.1');
    expect(await ask(url, 'SELECT rolsuper FROM pg_roles WHERE rolname = current_user')).toBe('false');
  });

  it('lets nobody in without the password, which only its owner can read', async () => {
    const url = new URL(await start());
    url.password = 'wrong';
    await expect(ask(url.href, 'SELECT 1')).rejects.toThrow(/password authentication failed/);
    expect(statSync(join(data, 'secrets.json')).mode & 0o777).toBe(0o600);
  });

  it('comes back by itself with every committed row when the server is killed', async () => {
    const url = await start();
    await ask(url, 'CREATE TABLE committed AS SELECT 42 AS n');
    const killed = serverPid();
    process.kill(killed, 'SIGKILL');
    expect(await answers(url)).toBe(true);
    expect(serverPid()).not.toBe(killed);
    expect(await ask(url, 'SELECT n FROM committed')).toBe('42');
  });

  it('starts although postmaster.pid names a stranger, as after a crash of the machine', async () => {
    const url = await start();
    await supervisor.stop();
    const mark = join(data, 'pg', 'data', 'postmaster.pid');
    writeFileSync(
      mark,
      `${process.pid}\n${join(data, 'pg', 'data')}\n1700000000\n1\n\n127.0.0.1\n0 0\nready\n`,
    );
    await start();
    expect(await ask(url, 'SELECT 1')).toBe('1');
  });

  it('takes a lost secrets file for no loss of data', async () => {
    await start();
    await supervisor.stop();
    rmSync(join(data, 'secrets.json'));
    expect(await ask(await start(), 'SELECT n FROM kept')).toBe('17');
  });
});

describe.skipIf(process.getuid?.() !== 0)('as root, with a data folder that postgres cannot enter', () => {
  it('the cluster lives in the state directory, and a new data folder at the same path gets a new one', async () => {
    const closed = mkdtempSync(join(tmpdir(), 'beadline-closed-'));
    const lines: string[] = [];
    const say = { ...quiet, line: (text: string) => void lines.push(text) };
    const folders: string[] = [];
    const begin = async () => {
      supervisor = createSupervisor({ logs: join(closed, 'logs'), say: quiet });
      const url = (await startPrivateCluster(closed, { say, supervisor })).ownerUrl;
      folders.push(...lines.join(' ').match(/\/var\/lib\/beadline\/[\w.-]*\w/g)!);
      return url;
    };
    try {
      await ask(await begin(), 'CREATE TABLE old AS SELECT 1');
      expect(lines.join('\n')).toContain(`The user postgres can't enter ${closed}`);
      expect(existsSync(join(closed, 'pg'))).toBe(false);
      await supervisor.stop();
      await ask(await begin(), 'SELECT count(*) FROM old');
      await supervisor.stop();
      rmSync(join(closed, 'secrets.json'));
      await expect(ask(await begin(), 'SELECT count(*) FROM old')).rejects.toThrow(/does not exist/);
      expect(lines.some((line) => line.includes('put aside'))).toBe(true);
    } finally {
      await supervisor.stop();
      for (const folder of [closed, ...folders]) rmSync(folder, { recursive: true, force: true });
    }
  });
});

describe('the mark of a server', () => {
  it('counts only while that server lives', () => {
    const folder = mkdtempSync(join(tmpdir(), 'beadline-mark-'));
    expect(postmasterOf(folder)).toBeNull();
    writeFileSync(join(folder, 'postmaster.pid'), `${process.pid}\n`);
    expect(postmasterOf(folder)).toBeNull();
    rmSync(folder, { recursive: true });
  });
});
