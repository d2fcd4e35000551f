import pg from 'pg';
import type { Sequelize } from 'sequelize';
import { closeDatabase, getSequelize } from '@/models/database';
import { newId } from '@/lib/ids';

/** PostgreSQL's code for a template that somebody is connected to or is cloning at this moment. */
const OBJECT_IN_USE = '55006';

export interface FreshDatabase {
  url: string;
  /** The pool of this process, which the models use too. */
  sequelize: Sequelize;
  /** For `afterAll`: closes the pool; drops the database unless a test of the file failed. */
  dropIfGreen: (context: object, suite: { tasks: readonly TaskLike[] }) => Promise<void>;
}

/**
 * A database of its own for one test file, cloned from the migrated template. It becomes the database of this
 * process: models and queries work on it without being told.
 */
export async function freshDatabase(): Promise<FreshDatabase> {
  const url = await cloneTemplate();
  await closeDatabase();
  process.env.DATABASE_URL = url;
  return {
    url,
    sequelize: getSequelize(),
    // The runner reads from the pattern that no fixture is wanted.
    async dropIfGreen({}, suite) {
      await closeDatabase();
      if (!suite.tasks.some(hasFailed)) await dropDatabase(url);
    },
  };
}

/** Clones the migrated template. @returns the address of the new database */
export async function cloneTemplate(): Promise<string> {
  const template = templateUrl();
  const url = new URL(template);
  const name = `test_${newId().replaceAll('-', '')}`;
  const sql = `CREATE DATABASE ${name} TEMPLATE ${url.pathname.slice(1)}`;
  for (let tries = 1; ; tries++) {
    try {
      await onServer(template, sql);
      break;
    } catch (error) {
      if ((error as { code?: string }).code !== OBJECT_IN_USE || tries === 50) throw error;
      await new Promise((resolve) => setTimeout(resolve, 100));
    }
  }
  url.pathname = `/${name}`;
  return url.href;
}

/** Drops a database, also while somebody is connected to it. */
export async function dropDatabase(url: string): Promise<void> {
  await onServer(url, `DROP DATABASE IF EXISTS ${new URL(url).pathname.slice(1)} WITH (FORCE)`);
}

function templateUrl(): string {
  const url = process.env.TEST_DATABASE_URL;
  if (!url)
    throw new Error(
      'TEST_DATABASE_URL is not set. Run this file through `npm test -- tests/...`, which brings up a ' +
        'throw-away PostgreSQL with the tables in it.',
    );
  return url;
}

async function onServer(url: string, sql: string): Promise<void> {
  const server = new URL(url);
  server.pathname = '/postgres';
  const client = new pg.Client({ connectionString: server.href });
  await client.connect();
  try {
    await client.query(sql);
  } finally {
    await client.end();
  }
}

interface TaskLike {
  result?: { state?: string };
  tasks?: readonly TaskLike[];
}

const hasFailed = (task: TaskLike): boolean =>
  task.result?.state === 'fail' || (task.tasks ?? []).some(hasFailed);
