import { cookies, headers } from 'next/headers';
import { forbidden, redirect } from 'next/navigation';
import { cache } from 'react';
import type { Action } from '@/lib/access';
import { PATH_HEADER } from '@/lib/path-header';
import { isDatabaseAway } from '@/models/database-away';
import { log } from './log';
import { LAB_COOKIE, sessionCookieName } from './session-cookie';
import { may, viewerOfSession, type Viewer } from './viewer';

/** Where a page sends those who are not signed in. */
export const SIGN_IN_PATH = '/sign-in';
/** Where a page leads while the database is away. */
const AWAY_PATH = '/away';

/** The signed-in person of a page's request, looked up once per request; null for nobody. */
export const getViewer = cache(async (): Promise<Viewer | null> => {
  const jar = await cookies();
  return viewerOfSession(jar.get(sessionCookieName())?.value, jar.get(LAB_COOKIE)?.value);
});

/** While the database is away a page can't be drawn: the one that it leads to waits, and comes back. */
async function viewerOfPage(): Promise<Viewer | null> {
  try {
    return await getViewer();
  } catch (cause) {
    if (!isDatabaseAway(cause)) throw cause;
    log.warn({ err: cause }, 'the database is away');
  }
  redirect(`${AWAY_PATH}?next=${encodeURIComponent((await headers()).get(PATH_HEADER) ?? '/')}`);
}

/**
 * The viewer of a page. Nobody signed in: goes to the sign-in page, and from there to `path`.
 * A role without the action: the nearest `forbidden.tsx` answers with 403.
 * @param path of the page itself.
 */
export async function requireViewer(action: Action, path?: string): Promise<Viewer> {
  const viewer = await viewerOfPage();
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
