import { cookies } from 'next/headers';
import { forbidden, redirect } from 'next/navigation';
import { cache } from 'react';
import type { Action } from '@/lib/access';
import { LAB_COOKIE, sessionCookieName } from './session-cookie';
import { may, viewerOfSession, type Viewer } from './viewer';

/** Where a page sends those who are not signed in. */
export const SIGN_IN_PATH = '/sign-in';

/** The signed-in person of a page's request, looked up once per request; null for nobody. */
export const getViewer = cache(async (): Promise<Viewer | null> => {
  const jar = await cookies();
  return viewerOfSession(jar.get(sessionCookieName())?.value, jar.get(LAB_COOKIE)?.value);
});

/**
 * The viewer of a page. Nobody signed in: goes to the sign-in page, and from there to `path`.
 * A role without the action: the nearest `forbidden.tsx` answers with 403.
 * @param path of the page itself.
 */
export async function requireViewer(action: Action, path?: string): Promise<Viewer> {
  const viewer = await getViewer();
  if (!viewer) {
    redirect(path ? `${SIGN_IN_PATH}?next=${encodeURIComponent(path)}` : SIGN_IN_PATH);
  }
  if (!may(viewer, action)) forbidden();
  return viewer;
}

/** Wraps a page: `export default memberPage('see-data', async (viewer, props) => ...)`. */
export function memberPage<Props, Result>(
  action: Action,
  page: (viewer: Viewer, props: Props) => Promise<Result>,
): (props: Props) => Promise<Result> {
  return async (props) => page(await requireViewer(action), props);
}
