import pg from 'pg';
import { Sequelize } from 'sequelize';

/** Connections that one process may hold; web and workers together stay below PostgreSQL's 100. */
const POOL_MAX = 8;

// A pool for each reload of a module in development would soon exhaust the server.
const shared = globalThis as unknown as { beadlineDatabase?: Sequelize };

/** The one connection pool of this process, made on first use so that a build needs no database. */
export function getSequelize(): Sequelize {
  return (shared.beadlineDatabase ??= connect(databaseUrl()));
}

export async function closeDatabase(): Promise<void> {
  await shared.beadlineDatabase?.close();
  delete shared.beadlineDatabase;
}

function databaseUrl(): string {
  const url = process.env.DATABASE_URL;
  if (!url)
    throw new Error('DATABASE_URL is not set: start through `npm start`, or name a PostgreSQL server.');
  return url;
}

export function connect(url: string, options: { max?: number } = {}): Sequelize {
  return new Sequelize(url, {
    dialect: 'postgres',
    dialectModule: pg,
    logging: false,
    define: { underscored: true },
    pool: { max: options.max ?? POOL_MAX, min: 0, acquire: 5_000, idle: 10_000 },
    dialectOptions: { application_name: 'beadline', keepAlive: true },
  });
}
