import { cookies, headers } from 'next/headers';
import { unstable_rethrow } from 'next/navigation';
import type { z } from 'zod';
import type { Action } from '@/lib/access';
import { LabError } from '@/lib/errors';
import { newId } from '@/lib/ids';
import { log } from './log';
import { getViewer } from './page';
import { asLabError, fieldsError, problemBody, type ProblemBody } from './problem';
import { countRequest } from './rate-limit';
import { cookieOptions, renewedSession, sessionCookieName, SESSION_IDLE_S } from './session-cookie';
import { assertMay, type Viewer } from './viewer';

export type ActionResult<T> = { ok: true; data: T } | { ok: false; problem: ProblemBody };

/**
 * Wraps a server action: who asks, may they, is the input good. The action's own refusals and bad
 * fields come back as `problem`, so that a form can show them beside its fields; faults too, with
 * nothing of their inside.
 */
export function memberAction<Schema extends z.ZodType, T>(
  action: Action,
  schema: Schema,
  run: (context: { viewer: Viewer; input: z.output<Schema>; requestId: string }) => Promise<T>,
): (input: unknown) => Promise<ActionResult<T>> {
  return async (input) => {
    const requestId = newId();
    try {
      const viewer = await getViewer();
      if (!viewer) throw new LabError('SIGNED_OUT', 'Your session has ended. Sign in again.');
      assertMay(viewer, action);
      await countRequest(viewer.userId);
      const parsed = schema.safeParse(input);
      if (!parsed.success) throw fieldsError(parsed.error);
      await renewSession(viewer);
      return { ok: true, data: await run({ viewer, input: parsed.data, requestId }) };
    } catch (thrown) {
      unstable_rethrow(thrown);
      const error = asLabError(thrown);
      if (error.status >= 500) {
        const path = (await headers()).get('referer');
        log.error({ err: error.cause ?? error, requestId, action, path }, 'action failed');
      }
      return { ok: false, problem: problemBody(error, requestId) };
    }
  };
}

async function renewSession({ session }: Viewer): Promise<void> {
  const cookie = session && (await renewedSession(session, Date.now() / 1000));
  if (cookie) {
    (await cookies()).set(sessionCookieName(), cookie, { ...cookieOptions(), maxAge: SESSION_IDLE_S });
  }
}
