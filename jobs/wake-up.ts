import pg from 'pg';
import type { Transaction } from 'sequelize';
import { rawClient } from '@/models/raw-client';

/** Channel of PostgreSQL on which workers hear that there is work, at once and all of them. */
const CHANNEL = 'beadline_work';

/** Calls all workers when, and only when, the transaction commits. */
export async function callWorkers(transaction: Transaction): Promise<void> {
  await rawClient(transaction).query(`NOTIFY ${CHANNEL}`);
}

/** A worker's ear: a connection that only listens. Without it a worker still looks by itself, only later. */
export interface WakeUp {
  /** Whether somebody called since this was last asked. Opens a connection that was lost anew. */
  heard(): boolean;
  /** Waits for a call, at most so long. */
  pause(ms: number, signal: AbortSignal): Promise<void>;
  close(): Promise<void>;
}

export function openWakeUp(connectionString: string): WakeUp {
  let called = false;
  let closed = false;
  let client: pg.Client | null = null;
  let opening: Promise<void> | null = null;
  let ring: (() => void) | null = null;

  const open = async () => {
    const one = new pg.Client({ connectionString, application_name: 'beadline wake-up', keepAlive: true });
    const lost = () => {
      if (client === one) client = null;
    };
    one.on('error', lost).on('end', lost);
    one.on('notification', () => {
      called = true;
      ring?.();
    });
    try {
      await one.connect();
      await one.query(`LISTEN ${CHANNEL}`);
      client = one;
    } catch {
      // The database is away: whoever works finds that out, and the next look opens it again.
      await one.end().catch(() => undefined);
    }
    if (closed) await one.end().catch(() => undefined);
  };
  const tend = () => {
    if (client || closed) return;
    opening ??= open().finally(() => void (opening = null));
  };
  tend();

  return {
    heard() {
      tend();
      const was = called;
      called = false;
      return was;
    },
    pause(ms, signal) {
      return new Promise((resolve) => {
        if (signal.aborted || called) return resolve();
        const done = () => {
          clearTimeout(timer);
          signal.removeEventListener('abort', done);
          ring = null;
          resolve();
        };
        const timer = setTimeout(done, ms);
        ring = done;
        signal.addEventListener('abort', done, { once: true });
      });
    },
    async close() {
      closed = true;
      await opening;
      await client?.end().catch(() => undefined);
      client = null;
    },
  };
}
