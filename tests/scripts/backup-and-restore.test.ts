import { execFile } from 'node:child_process';
import { createHash, randomBytes } from 'node:crypto';
import {
  chmodSync,
  cpSync,
  existsSync,
  mkdirSync,
  mkdtempSync,
  readdirSync,
  readFileSync,
  rmSync,
  statSync,
  writeFileSync,
} from 'node:fs';
import { tmpdir } from 'node:os';
import { dirname, join, relative } from 'node:path';
import { promisify } from 'node:util';
import pg from 'pg';
import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest';
import { closeDoorbell } from '@/jobs/doorbell';
import { EXPORT_FORMATS } from '@/lib/exports/export-facts';
import { newId } from '@/lib/ids';
import { closeDatabase } from '@/models/database';
import { models } from '@/models';
import { checkBackup, MANIFEST, MANIFEST_HASH } from '@/scripts/platform/backup-manifest.mjs';
import { startPrivateCluster } from '@/scripts/platform/private-cluster.mjs';
import { createSupervisor } from '@/scripts/platform/supervise.mjs';
import { buildPackageOf } from '../helpers/built-package';
import { dropDatabase, freshDatabase, type FreshDatabase } from '../helpers/fresh-database';
import { makeAnalysis, makeLab, makeRecording } from '../helpers/lab-rows';
import { measuredAnalysis } from '../helpers/measured-analysis';

vi.setConfig({ testTimeout: 180_000 });

const quiet = { line: () => {}, step: <T>(_doing: string, work: () => Promise<T>) => work() };
let database: FreshDatabase;
let folder: string;
let data: string;
let backup: string;
const made: string[] = [];

beforeAll(async () => {
  database = await freshDatabase();
  folder = mkdtempSync(join(tmpdir(), 'beadline-backup-'));
  chmodSync(folder, 0o711);
  data = join(folder, 'data');
  backup = join(folder, 'laboratory.backup');
  const lab = await makeLab();
  const recording = await makeRecording(lab);
  const analysis = await makeAnalysis(lab, { recordingId: recording.id, state: 'done', stage: 'done' });
  await database.sequelize.query(
    `INSERT INTO spot_chunks (analysis_id, chunk, first_frame, frames, spot_count, spots_per_frame, spots)
     SELECT '${analysis.id}', n, 5 * n, 5, 5, '{1,1,1,1,1}', decode(repeat('00ff27', 500), 'hex')
     FROM generate_series(0, 3) n`,
  );
  write(`stacks/${recording.id}/stack.bin`, randomBytes(1_300_000));
  write(`stacks/${recording.id}/index.bin`, Buffer.alloc(512, 7));
  write(`stacks/${recording.id}/files/000000.bin`, Buffer.alloc(0));
  write(`uploads/${newId()}`, randomBytes(1_000));
  write('demo-accounts.json', Buffer.from('{"made": "for this test"}'));
  write('logs/web.log', Buffer.from('not of a backup'));
});
afterAll(async ({}, suite) => {
  await database.dropIfGreen({}, suite);
  for (const url of made) await dropDatabase(url);
  rmSync(folder, { recursive: true, force: true });
});

function write(name: string, bytes: Buffer) {
  mkdirSync(dirname(join(data, name)), { recursive: true });
  writeFileSync(join(data, name), bytes);
}

/** Runs a command as `npm run` does. */
async function run(name: 'backup' | 'restore', args: string[], env: Record<string, string | undefined>) {
  const script = join(process.cwd(), 'scripts', `${name}.mjs`);
  return promisify(execFile)(process.execPath, [script, ...args], { env: { ...process.env, ...env } }).then(
    ({ stdout, stderr }) => ({ code: 0, stdout, stderr }),
    (error: { code: number; stdout: string; stderr: string }) => error,
  );
}

async function query(url: string, sql: string): Promise<unknown[][]> {
  const client = new pg.Client({ connectionString: url });
  await client.connect();
  try {
    return (await client.query({ text: sql, rowMode: 'array' })).rows;
  } finally {
    await client.end();
  }
}

async function emptyDatabase(): Promise<string> {
  const url = new URL(database.url);
  url.pathname = `/test_${newId().replaceAll('-', '')}`;
  await query(database.url, `CREATE DATABASE ${url.pathname.slice(1)} TEMPLATE template0`);
  made.push(url.href);
  return url.href;
}

/** One value for all that stands in a table, by table. */
async function contents(url: string): Promise<Record<string, string>> {
  const tables = await query(
    url,
    `SELECT format('%I.%I', schemaname, tablename) FROM pg_tables
     WHERE schemaname NOT IN ('pg_catalog', 'information_schema') ORDER BY 1`,
  );
  const all: Record<string, string> = {};
  for (const [table] of tables) {
    const [[sum]] = await query(
      url,
      `SELECT count(*) || md5(string_agg(t::text, '|' ORDER BY t::text)) FROM ${table} t`,
    );
    all[String(table)] = String(sum);
  }
  return all;
}

function hashes(root: string): Record<string, string> {
  const files = readdirSync(root, { recursive: true, withFileTypes: true }).filter((entry) => entry.isFile());
  const pairs = files.map(({ parentPath, name }): [string, string] => {
    const path = join(parentPath, name);
    return [relative(root, path), createHash('sha256').update(readFileSync(path)).digest('hex')];
  });
  return Object.fromEntries(pairs.filter(([name]) => !name.startsWith('logs/')).sort());
}

const isEmpty = (path: string) => !existsSync(path) || readdirSync(path).length === 0;

describe('a backup and its restore, with a database of DATABASE_URL', () => {
  it('brings back every row and every byte of every file, and says what it did', async () => {
    const done = await run('backup', [backup], { BEADLINE_DATA: data, DATABASE_URL: database.url });
    expect(done).toMatchObject({ code: 0 });
    expect(done.stdout).toMatch(/6 files of \d+ bytes, \d+ rows in \d+ tables/);
    // It holds hashes of passwords.
    expect(statSync(backup).mode & 0o777).toBe(0o600);
    expect(readdirSync(folder).filter((name) => name.endsWith('.part'))).toEqual([]);

    const [target, url] = [join(folder, 'restored'), await emptyDatabase()];
    const restored = await run('restore', [backup], { BEADLINE_DATA: target, DATABASE_URL: url });
    expect(restored).toMatchObject({ code: 0 });
    expect(restored.stdout).toMatch(/every file has it again, and every table has the rows of the manifest/);
    expect(hashes(target)).toEqual(hashes(data));
    const wanted = await contents(database.url);
    expect(wanted['public.spot_chunks']).toMatch(/^4/);
    expect(await contents(url)).toEqual(wanted);
  });

  it('is a tar file that the system’s tar reads too', async () => {
    const { stdout } = await promisify(execFile)('tar', ['-tf', backup]);
    const names = stdout.trim().split('\n');
    expect(names[0]).toBe('database.dump');
    expect(names.slice(-2)).toEqual([MANIFEST, MANIFEST_HASH]);
  });

  it('never replaces a file, and asks for one name', async () => {
    const env = { BEADLINE_DATA: data, DATABASE_URL: database.url };
    expect(await run('backup', [backup], env)).toMatchObject({ code: 2, stdout: '' });
    expect(await run('backup', [], env)).toMatchObject({
      code: 2,
      stderr: 'Usage: npm run backup -- FILE\n',
    });
    expect(await run('backup', [join(data, 'inside')], env)).toMatchObject({ code: 2 });
  });
});

describe('a restore refuses', () => {
  it.each([
    ['in the head of the first file', () => 3],
    ['in a stack', () => readFileSync(backup).length - 400_000],
    ['in the unused bytes of a head', () => 505],
    ['at the very end', () => readFileSync(backup).length - 1],
    ['in the manifest', () => readFileSync(backup).lastIndexOf('"rows": ') + 8],
    ['in the hash of the manifest', () => readFileSync(backup).lastIndexOf('manifest.sha256') + 512],
    ['in the database', () => 5_000],
  ])('a backup with one bit turned %s, in one sentence, and writes nothing', async (_where, place) => {
    const bytes = readFileSync(backup);
    bytes[place()] ^= 1;
    const bad = join(folder, 'flipped.backup');
    writeFileSync(bad, bytes);
    const [target, url] = [join(folder, 'never'), await emptyDatabase()];
    const { code, stdout, stderr } = await run('restore', [bad], {
      BEADLINE_DATA: target,
      DATABASE_URL: url,
    });
    const sentences = stderr.trim().split('\n').filter((line) => !line.endsWith('...')); // prettier-ignore
    expect([code, stdout, sentences]).toEqual([
      1,
      '',
      [expect.stringMatching(/^The backup file is damaged.*\.$/)],
    ]);
    expect(isEmpty(target)).toBe(true);
    expect(Object.keys(await contents(url))).toEqual([]);
  });

  it('every single turned bit of a small region that spans heads, padding and content', async () => {
    const bytes = readFileSync(backup);
    const from = bytes.lastIndexOf(MANIFEST_HASH);
    const bad = join(folder, 'bit.backup');
    for (let at = from; at < bytes.length; at += 13) {
      bytes[at] ^= 1 << (at % 8);
      writeFileSync(bad, bytes);
      await expect(checkBackup(bad), `byte ${at}`).rejects.toThrow(/damaged|no backup/);
      bytes[at] ^= 1 << (at % 8);
    }
    writeFileSync(bad, bytes);
    expect((await checkBackup(bad)).manifest.files).toHaveLength(6);
  });

  it('a file that was cut, and one that is no backup', async () => {
    const bad = join(folder, 'cut.backup');
    writeFileSync(bad, readFileSync(backup).subarray(0, -700));
    await expect(checkBackup(bad)).rejects.toThrow(/damaged or not whole/);
    writeFileSync(bad, 'a text');
    await expect(checkBackup(bad)).rejects.toThrow(/damaged or not whole/);
  });

  it('a data folder that holds anything, and a database that holds a table', async () => {
    const full = join(folder, 'full');
    mkdirSync(full);
    writeFileSync(join(full, 'theirs.txt'), 'kept');
    const url = await emptyDatabase();
    const first = await run('restore', [backup], { BEADLINE_DATA: full, DATABASE_URL: url });
    expect([first.code, first.stderr]).toEqual([2, expect.stringMatching(/is not empty/)]);
    expect(readFileSync(join(full, 'theirs.txt'), 'utf8')).toBe('kept');

    await query(url, 'CREATE TABLE theirs AS SELECT 1 AS n');
    const target = join(folder, 'untouched');
    const second = await run('restore', [backup], { BEADLINE_DATA: target, DATABASE_URL: url });
    expect([second.code, second.stderr]).toEqual([2, expect.stringMatching(/holds 1 tables already/)]);
    expect(isEmpty(target)).toBe(true);
    expect(await query(url, 'SELECT n FROM theirs')).toEqual([[1]]);
  });

  it('to let a start use what a cut restore has left, and takes that folder itself', async () => {
    const half = join(folder, 'half');
    mkdirSync(half);
    writeFileSync(join(half, 'restore.unfinished'), '');
    const { refuseHalfRestored } = await import('@/scripts/platform/restore-backup.mjs');
    expect(() => refuseHalfRestored(half)).toThrow(/was cut short/);
    const env = { BEADLINE_DATA: half, DATABASE_URL: await emptyDatabase() };
    expect(await run('restore', [backup], env)).toMatchObject({ code: 0 });
    expect(() => refuseHalfRestored(half)).not.toThrow();
  });
});

describe('results after a restore into an empty folder', () => {
  it('make the same data packages, byte for byte, in every format', async () => {
    const [from, to] = [join(folder, 'measured'), join(folder, 'measured-again')];
    const dataBefore = process.env.BEADLINE_DATA;
    mkdirSync(from);
    process.env.BEADLINE_DATA = from;
    try {
      const lab = await makeLab();
      const { id } = await measuredAnalysis(lab);
      const wish = { analyses: [id], formats: [...EXPORT_FORMATS] };
      const before = await buildPackageOf(lab, wish);
      await closeDoorbell();
      const file = join(folder, 'measured.backup');
      const made = await run('backup', [file], { BEADLINE_DATA: from, DATABASE_URL: database.url });
      expect(made).toMatchObject({ code: 0 });
      const url = await emptyDatabase();
      expect(await run('restore', [file], { BEADLINE_DATA: to, DATABASE_URL: url })).toMatchObject({
        code: 0,
      });
      await closeDatabase();
      process.env.DATABASE_URL = url;
      process.env.BEADLINE_DATA = to;
      const after = await buildPackageOf(lab, wish);
      expect(after.view.id).not.toBe(before.view.id);
      expect(readFileSync(after.path).equals(readFileSync(before.path))).toBe(true);
    } finally {
      await closeDoorbell();
      await closeDatabase();
      process.env.DATABASE_URL = database.url;
      process.env.BEADLINE_DATA = dataBefore;
    }
  });
});

describe('with the private cluster', () => {
  it('rows come back from a cluster that stands and from one that runs', async () => {
    const lab = join(folder, 'private');
    mkdirSync(lab, { mode: 0o711 });
    cpSync(join(data, 'stacks'), join(lab, 'stacks'), { recursive: true });
    const env = { BEADLINE_DATA: lab, DATABASE_URL: undefined };
    const work = async (folderOf: string, act: (url: string) => Promise<unknown>) => {
      const supervisor = createSupervisor({ logs: join(folderOf, 'logs'), say: quiet });
      try {
        return await act((await startPrivateCluster(folderOf, { say: quiet, supervisor })).ownerUrl);
      } finally {
        await supervisor.stop();
      }
    };
    const running = join(folder, 'running.backup');
    await work(lab, async (url) => {
      await query(url, 'CREATE TABLE kept AS SELECT n, md5(n::text) AS word FROM generate_series(1, 500) n');
      expect(await run('backup', [running], env)).toMatchObject({ code: 0 });
    });
    const standing = join(folder, 'standing.backup');
    expect(await run('backup', [standing], env)).toMatchObject({ code: 0 });

    for (const file of [running, standing]) {
      const target = join(folder, `from-${file === running ? 'running' : 'standing'}`);
      const done = await run('restore', [file], { ...env, BEADLINE_DATA: target });
      expect(done).toMatchObject({ code: 0 });
      expect(hashes(join(target, 'stacks'))).toEqual(hashes(join(lab, 'stacks')));
      const sql = 'SELECT count(*)::int, count(*) FILTER (WHERE word = md5(n::text))::int FROM kept';
      expect(await work(target, (url) => query(url, sql))).toEqual([[500, 500]]);
      // Passwords of the database are new ones.
      const secrets = (of: string) => JSON.parse(readFileSync(join(of, 'secrets.json'), 'utf8'));
      expect(secrets(target).databasePassword).not.toBe(secrets(lab).databasePassword);
    }
  });

  it('a data folder without a laboratory is refused', async () => {
    const env = { BEADLINE_DATA: join(folder, 'nothing'), DATABASE_URL: undefined };
    const { code, stderr } = await run('backup', [join(folder, 'x')], env);
    expect([code, stderr]).toEqual([2, expect.stringMatching(/There is no Beadline in/)]);
    expect(await models().Lab.count()).toBeGreaterThan(0);
  });
});
