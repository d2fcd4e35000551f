import { setTimeout as pause } from 'node:timers/promises';
import { ConnectionAcquireTimeoutError, ConnectionError, DatabaseError } from 'sequelize';

/**
 * SQLSTATE of a server that is stopping, starting or recovering (57P), of a connection that is gone (08), of one that
 * takes no more (53300), and of a disk that is full or fails under it (53100, 58030): all of them pass.
 */
const PASSING = /^(57P0|08|53300|53100|58030)/;
/** What the driver says of a connection that ended under a question; it has no code. */
const CUT = /Connection terminated|connection is closed|Client has encountered a connection error/i;
/** Codes of the network below it. */
const NETWORK = new Set(['ECONNREFUSED', 'ECONNRESET', 'EPIPE', 'ETIMEDOUT']);

/** Whether something failed only because the database is away, and would work once it is back. */
export function isDatabaseAway(thrown: unknown): boolean {
  if (thrown instanceof ConnectionAcquireTimeoutError) return false;
  if (thrown instanceof ConnectionError) return true;
  // A line that is cut under a question says of itself only that it was reset.
  if (thrown instanceof DatabaseError && NETWORK.has(String((thrown.original as { code?: unknown }).code)))
    return true;
  const error = thrown as { code?: unknown; message?: unknown; original?: unknown; parent?: unknown } | null;
  if (!error || typeof error !== 'object') return false;
  const code = typeof error.code === 'string' ? error.code : '';
  if (PASSING.test(code) || (NETWORK.has(code) && 'port' in error)) return true;
  if (typeof error.message === 'string' && CUT.test(error.message)) return true;
  return error.original !== undefined && error.original !== thrown && isDatabaseAway(error.original);
}

/** What went wrong under a question to the bare driver, told apart from any other network's failing. */
export function asDatabaseFailure(cause: unknown): unknown {
  const code = cause instanceof Error ? (cause as { code?: unknown }).code : undefined;
  return NETWORK.has(String(code)) ? new ConnectionError(cause as Error) : cause;
}

/** Between two tries, ms. */
const AGAIN_MS = 500;

/**
 * Does the work again for as long as the database is away.
 * @param work must be harmless when done twice: a commit may have come through although its answer was lost
 * @throws what the work throws, once `withinMs` have passed or when it is about something else
 */
export async function untilDatabaseIsBack<T>(work: () => Promise<T>, withinMs: number): Promise<T> {
  const end = Date.now() + withinMs;
  for (;;) {
    try {
      return await work();
    } catch (cause) {
      if (!isDatabaseAway(cause) || Date.now() >= end) throw cause;
      await pause(AGAIN_MS);
    }
  }
}
