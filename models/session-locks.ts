import pg from 'pg';
import { ConnectionError } from 'sequelize';
import { databaseUrl } from '@/lib/env';

/**
 * Advisory locks that last longer than a query, all held by one connection of their own: a lock
 * must not take a connection from the pool for as long as an upload runs. When the process dies
 * its connection ends, and with it every lock.
 */
const shared = globalThis as unknown as {
  beadlineLocks?: Promise<pg.Client>;
  beadlineLockEvents?: LockEvents;
};

/** What a holder of locks wants to hear. */
export interface LockEvents {
  /** The connection is gone, and with it every lock of this process: others may hold them from now on. */
  lost: () => void;
  /** Another process would like to have this lock. */
  wanted: (name: string) => void;
}

/** Tells this process of what happens to its locks. Set once. */
export function onLockEvents(events: LockEvents): void {
  shared.beadlineLockEvents = events;
}

/** Channel by which processes ask each other for locks. */
const WANTED = 'beadline_locks_wanted';

function connection(): Promise<pg.Client> {
  return (shared.beadlineLocks ??= open());
}

async function open(): Promise<pg.Client> {
  const client = new pg.Client({
    connectionString: databaseUrl(),
    application_name: 'beadline locks',
    keepAlive: true,
  });
  const forget = () => {
    delete shared.beadlineLocks;
    shared.beadlineLockEvents?.lost();
  };
  client.on('error', forget);
  client.on('end', forget);
  client.on('notification', ({ payload }) => shared.beadlineLockEvents?.wanted(payload ?? ''));
  try {
    await client.connect();
    await client.query(`LISTEN ${WANTED}`);
  } catch (cause) {
    forget();
    throw cause;
  }
  return client;
}

/** Questions about locks can't be wrong: what fails is the way to the database. */
function asAway(cause: Error): never {
  throw new ConnectionError(cause);
}

/**
 * Takes the lock when no other process has it. The caller sees to it that its own process asks for
 * a name once at a time: to PostgreSQL all of a connection's locks are one owner's.
 */
export async function trySessionLock(name: string): Promise<boolean> {
  const client = await connection().catch(asAway);
  const result = await client
    .query<{ taken: boolean }>('SELECT pg_try_advisory_lock(hashtextextended($1, 0)) AS taken', [name])
    .catch(asAway);
  return result.rows[0].taken;
}

/** Asks whichever process holds the lock to let go of it, if it can. */
export async function askForSessionLock(name: string): Promise<void> {
  const client = await connection().catch(asAway);
  await client.query('SELECT pg_notify($1, $2)', [WANTED, name]).catch(asAway);
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
