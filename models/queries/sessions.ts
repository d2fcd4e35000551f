import { newId } from '@/lib/ids';
import { notFound } from '@/lib/errors';
import { deviceWords } from '@/lib/format/device-words';
import type { SessionView } from '@/lib/views/lab-view';
import type { Transaction } from 'sequelize';
import { execute, selectRow, selectRows } from './select';

/** Longest name of a browser that is kept. */
const AGENT_MOST = 400;
/** Without use a session ends, h; and in any case after a day (`auth/session-cookie.ts`). */
const OPEN = `s.ended_at IS NULL AND s.session_version = u.session_version AND u.disabled_at IS NULL
  AND s.created_at > now() - interval '24 hours' AND s.seen_at > now() - interval '8 hours'`;

/** Writes down that a person has signed in. @returns the session's id */
export async function addSession(userId: string, sessionVersion: number, agent: string): Promise<string> {
  const id = newId();
  await execute('INSERT INTO sessions (id, user_id, session_version, agent) VALUES ($1, $2, $3, $4)', [
    id,
    userId,
    sessionVersion,
    agent.slice(0, AGENT_MOST),
  ]);
  return id;
}

/** Whether a session has not been ended; notes that it is used, once a minute. */
export async function noteSession(userId: string, id: string): Promise<boolean> {
  const row = await selectRow<{ stale: boolean }>(
    `SELECT seen_at < now() - interval '1 minute' AS stale FROM sessions
     WHERE id = $1 AND user_id = $2 AND ended_at IS NULL`,
    [id, userId],
  );
  if (row?.stale) await execute('UPDATE sessions SET seen_at = now() WHERE id = $1', [id]);
  return row !== null;
}

/** Where a person is signed in, last used first. @param ownId the session that asks, if it is one of them */
export async function listSessions(userId: string, ownId: string | null): Promise<SessionView[]> {
  const rows = await selectRows<{ id: string; agent: string; created_at: Date; seen_at: Date }>(
    `SELECT s.id, s.agent, s.created_at, s.seen_at FROM sessions s JOIN users u ON u.id = s.user_id
     WHERE s.user_id = $1 AND ${OPEN} ORDER BY s.seen_at DESC, s.id LIMIT 200`,
    [userId],
  );
  return rows.map(({ id, agent, created_at, seen_at }) => ({
    id,
    device: deviceWords(agent),
    signedInAt: created_at.toISOString(),
    lastUsedAt: seen_at.toISOString(),
    own: id === ownId,
  }));
}

/** @throws LabError NOT_FOUND for a session that is not this person's, or has ended */
export async function endSession(userId: string, id: string, transaction: Transaction): Promise<void> {
  const row = await selectRow(
    `UPDATE sessions s SET ended_at = now() FROM users u
     WHERE u.id = s.user_id AND s.id = $1 AND s.user_id = $2 AND ${OPEN} RETURNING s.id`,
    [id, userId],
    transaction,
  );
  if (!row) throw notFound('session');
}

/** Signed out by the person. */
export const leaveSession = (id: string): Promise<unknown> =>
  execute('UPDATE sessions SET ended_at = now() WHERE id = $1 AND ended_at IS NULL', [id]);

/** Sessions that ended long ago are of no use to anyone. */
export const dropOldSessions = (): Promise<unknown> =>
  execute(`DELETE FROM sessions WHERE created_at < now() - interval '30 days'`);
