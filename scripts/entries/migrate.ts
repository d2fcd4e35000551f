import { Umzug } from 'umzug';
import { QueryTypes } from 'sequelize';
import type { QueryInterface } from 'sequelize';
import { connect } from '@/models/database';
import { migrations } from '@/migrations/index';
import { grantToApplication } from './grant-to-application';

/** Any number will do, as long as every process that migrates asks for the same one. */
const ADVISORY_LOCK = 7_204_318_801;

const url = process.env.DATABASE_URL;
if (!url) {
  process.stderr.write('DATABASE_URL is not set: name the PostgreSQL server whose tables are to be made.\n');
  process.exit(2);
}

// With a pool of one, all statements share a session: the lock and the transaction hold for what a migration
// does through its query interface, and a process that is killed releases both.
const sequelize = connect(url, { max: 1 });
const run = (sql: string, bind: unknown[] = []) => sequelize.query(sql, { bind });

const storage = {
  async executed(): Promise<string[]> {
    const rows = await sequelize.query<{ name: string }>('SELECT name FROM schema_migrations ORDER BY name', {
      type: QueryTypes.SELECT,
    });
    return rows.map(({ name }) => name);
  },
  // The note that a migration ran is part of its transaction: one without the other can't be left behind.
  async logMigration({ name }: { name: string }): Promise<void> {
    await run('INSERT INTO schema_migrations (name) VALUES ($1)', [name]);
    await run('COMMIT');
    process.stdout.write(`${name}\n`);
  },
  async unlogMigration({ name }: { name: string }): Promise<void> {
    await run('DELETE FROM schema_migrations WHERE name = $1', [name]);
    await run('COMMIT');
    process.stdout.write(`${name} taken back\n`);
  },
};

type Step = (queryInterface: QueryInterface) => Promise<void>;

async function inTransaction(step: Step): Promise<void> {
  await run('BEGIN');
  try {
    await step(sequelize.getQueryInterface());
  } catch (error) {
    await run('ROLLBACK');
    throw error;
  }
}

const umzug = new Umzug({
  migrations: migrations.map(({ name, up, down }) => ({
    name,
    up: () => inTransaction(up),
    down: () => inTransaction(down),
  })),
  storage,
  logger: undefined,
});

try {
  await run('SELECT pg_advisory_lock($1)', [ADVISORY_LOCK]);
  await run(
    'CREATE TABLE IF NOT EXISTS schema_migrations (name text PRIMARY KEY, applied_at timestamptz NOT NULL DEFAULT now())',
  );
  if (process.argv[2] === 'down') await umzug.down();
  else {
    await umzug.up();
    const role = process.env.BEADLINE_APPLICATION_ROLE;
    if (role) await grantToApplication(url, role, run);
  }
} catch (error) {
  process.stderr.write(`The tables could not be brought up to date: ${(error as Error).message}\n`);
  const cause = (error as Error).cause;
  if (cause instanceof Error) process.stderr.write(`${cause.stack}\n`);
  process.exitCode = 1;
} finally {
  await sequelize.close();
}
