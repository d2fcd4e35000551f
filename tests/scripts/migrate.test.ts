import { spawn } from 'node:child_process';
import pg from 'pg';
import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest';
import { migrations } from '@/migrations/index';
import { bundlePath } from '@/scripts/platform/bundles.mjs';
import { cloneTemplate, dropDatabase } from '../helpers/fresh-database';

// Each migration is a process of its own.
vi.setConfig({ testTimeout: 120_000 });

let url: string;

beforeAll(async () => {
  url = await cloneTemplate();
  await query('DROP SCHEMA public CASCADE; CREATE SCHEMA public');
});
afterAll(() => dropDatabase(url));

async function query(sql: string): Promise<unknown[]> {
  const client = new pg.Client({ connectionString: url });
  await client.connect();
  try {
    return (await client.query(sql)).rows;
  } finally {
    await client.end();
  }
}

function migrate(...args: string[]): Promise<{ code: number | null; printed: string }> {
  const child = spawn(process.execPath, [bundlePath('migrate'), ...args], {
    env: { ...process.env, DATABASE_URL: url },
  });
  let printed = '';
  child.stdout.on('data', (text) => (printed += text));
  child.stderr.on('data', (text) => (printed += text));
  return new Promise((resolve) => child.on('close', (code) => resolve({ code, printed })));
}

const tables = () => query(`SELECT tablename FROM pg_tables WHERE schemaname = 'public' ORDER BY 1`);
const names = migrations.map(({ name }) => name);

describe('bringing the tables up to date', () => {
  it('of two that start together one makes the tables and the other finds them made', async () => {
    const results = await Promise.all([migrate(), migrate()]);
    expect(results.map(({ code }) => code)).toEqual([0, 0]);
    const printed = results.map((result) => result.printed.trim()).sort();
    expect(printed).toEqual(['', names.join('\n')]);
  });

  it('a second time changes nothing', async () => {
    const before = await tables();
    expect(await migrate()).toEqual({ code: 0, printed: '' });
    expect(await tables()).toEqual(before);
  });

  it('a migration that fails half-way leaves nothing of itself', async () => {
    await query('DROP SCHEMA public CASCADE; CREATE SCHEMA public');
    // The name of a later table is taken, so the first migration breaks after some of its statements.
    await query('CREATE TABLE analyses (id int)');
    const { code, printed } = await migrate();
    expect(code).toBe(1);
    expect(printed).toContain('"analyses" already exists');
    expect(await tables()).toEqual([{ tablename: 'analyses' }, { tablename: 'schema_migrations' }]);
    await query('DROP TABLE analyses');
    expect((await migrate()).code).toBe(0);
  });

  it('the newest migration can be taken back and made again with the same columns', async () => {
    const columns = () =>
      query(`SELECT table_name, column_name, data_type FROM information_schema.columns
        WHERE table_schema = 'public' ORDER BY 1, 2`);
    const before = await columns();
    expect(await migrate('down')).toMatchObject({ code: 0 });
    expect(await query('SELECT name FROM schema_migrations ORDER BY 1')).toHaveLength(names.length - 1);
    expect(await migrate()).toMatchObject({ code: 0, printed: `${names.at(-1)}\n` });
    expect(await columns()).toEqual(before);
  });
});
