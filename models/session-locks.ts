import pg from 'pg';
import { databaseUrl } from '@/lib/env';

/**
 * Advisory locks that last longer than a query, all held by one connection of their own: a lock
 * must not take a connection from the pool for as long as an upload runs. When the process dies
 * its connection ends, and with it every lock.
 */
const shared = globalThis as unknown as { beadlineLocks?: Promise<pg.Client> };

function connection(): Promise<pg.Client> {
  return (shared.beadlineLocks ??= open());
}

async function open(): Promise<pg.Client> {
  const client = new pg.Client({
    connectionString: databaseUrl(),
    application_name: 'beadline locks',
    keepAlive: true,
  });
  const forget = () => delete shared.beadlineLocks;
  client.on('error', forget);
  client.on('end', forget);
  try {
    await client.connect();
  } catch (cause) {
    forget();
    throw cause;
  }
  return client;
}

/**
 * Takes the lock when no other process has it. The caller sees to it that its own process asks for
 * a name once at a time: to PostgreSQL all of a connection's locks are one owner's.
 */
export async function trySessionLock(name: string): Promise<boolean> {
  const client = await connection();
  const result = await client.query<{ taken: boolean }>(
    'SELECT pg_try_advisory_lock(hashtextextended($1, 0)) AS taken',
    [name],
  );
  return result.rows[0].taken;
}

export async function releaseSessionLock(name: string): Promise<void> {
  // A lost connection has let go already.
  const client = await shared.beadlineLocks?.catch(() => null);
  await client?.query('SELECT pg_advisory_unlock(hashtextextended($1, 0))', [name]).catch(() => undefined);
}

export async function closeSessionLocks(): Promise<void> {
  const client = await shared.beadlineLocks?.catch(() => null);
  delete shared.beadlineLocks;
  await client?.end();
}
