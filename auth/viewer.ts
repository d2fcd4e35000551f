import {
  grantFor,
  scopesOf,
  whoMay,
  ACTIONS,
  ROLE_NAMES,
  type Action,
  type Role,
  type Scope,
} from '@/lib/access';
import { LabError } from '@/lib/errors';
import {
  findAccount,
  findTokenOwner,
  touchToken,
  type Account,
  type LabOfPerson,
} from '@/models/queries/find-account';
import { noteSession } from '@/models/queries/sessions';
import { bearerToken, hashToken } from './tokens';
import { cookieIn, LAB_COOKIE, readSession, sessionCookieName, type Session } from './session-cookie';

/** Who asks, in which laboratory, with which rights. */
export interface Viewer {
  userId: string;
  name: string;
  email: string;
  labId: string;
  lab: { id: string; name: string; slug: string };
  labs: LabOfPerson[];
  roles: Role[];
  /** Of the token, or of the roles in a browser session. */
  scopes: Scope[];
  via: 'session' | 'token';
  session: Session | null;
}

/** The viewer that a request's headers name; null when nobody is signed in. */
export async function viewerFrom(headers: Headers): Promise<Viewer | null> {
  const authorization = headers.get('authorization');
  if (authorization !== null) return viewerOfToken(bearerToken(authorization));
  const cookies = headers.get('cookie');
  return viewerOfSession(cookieIn(cookies, sessionCookieName()), cookieIn(cookies, LAB_COOKIE));
}

export async function viewerOfSession(
  sessionCookie: string | undefined,
  labCookie: string | undefined,
): Promise<Viewer | null> {
  const session = await readSession(sessionCookie, Date.now() / 1000);
  if (!session) return null;
  const [account, isOpen] = await Promise.all([
    findAccount(session.userId),
    session.sessionId ? noteSession(session.userId, session.sessionId) : true,
  ]);
  if (!account || !isOpen || account.sessionVersion !== session.sessionVersion) return null;
  const lab =
    account.labs.find(({ id }) => id === labCookie) ??
    account.labs.find(({ id }) => id === session.labId) ??
    account.labs[0];
  return lab ? viewerOf(account, lab, scopesOf(lab.roles), session) : null;
}

async function viewerOfToken(token: string | null): Promise<Viewer | null> {
  if (!token) return null;
  const owner = await findTokenOwner(hashToken(token));
  if (!owner) return null;
  const account = await findAccount(owner.userId);
  const lab = account?.labs.find(({ id }) => id === owner.labId);
  if (!account || !lab) return null;
  await touchToken(owner.tokenId);
  // A role that was taken away takes its part of older tokens with it.
  const allowed = scopesOf(lab.roles);
  const scopes = owner.scopes.filter((scope) => allowed.includes(scope));
  return viewerOf(account, lab, scopes, null);
}

function viewerOf(account: Account, lab: LabOfPerson, scopes: Scope[], session: Session | null): Viewer {
  return {
    userId: account.userId,
    name: account.name,
    email: account.email,
    labId: lab.id,
    lab: { id: lab.id, name: lab.name, slug: lab.slug },
    labs: account.labs,
    roles: lab.roles,
    scopes,
    via: session ? 'session' : 'token',
    session,
  };
}

/** Whether the viewer may do it at all, perhaps only to what is theirs. */
export function may(viewer: Viewer, action: Action): boolean {
  return grantFor(viewer.roles, action) !== null && viewer.scopes.includes(ACTIONS[action].scope);
}

/** Whether the viewer may do it to what these people made. */
export function mayTo(viewer: Viewer, action: Action, makers: readonly (string | null)[]): boolean {
  if (!may(viewer, action)) return false;
  return grantFor(viewer.roles, action) === 'yes' || makers.includes(viewer.userId);
}

/** @throws LabError FORBIDDEN with who may, when the viewer's roles or token don't allow the action. */
export function assertMay(viewer: Viewer, action: Action): void {
  if (grantFor(viewer.roles, action) === null) {
    const roles = viewer.roles.map((role) => ROLE_NAMES[role].toLowerCase()).join(' and ');
    throw new LabError(
      'FORBIDDEN',
      `Your role here (${roles}) does not include this. It takes: ${whoMay(action)}.`,
    );
  }
  const { scope } = ACTIONS[action];
  if (!viewer.scopes.includes(scope)) {
    throw new LabError('FORBIDDEN', `This token lacks the scope '${scope}'.`);
  }
}

/**
 * @param makers ids of those who made the thing, or the run or campaign it belongs to.
 * @throws LabError FORBIDDEN when the viewer may do it only to their own.
 */
export function assertMayTo(viewer: Viewer, action: Action, makers: readonly (string | null)[]): void {
  assertMay(viewer, action);
  if (!mayTo(viewer, action, makers)) {
    throw new LabError(
      'FORBIDDEN',
      'You may do this only to what you made yourself, or in a run of yours. Ask its owner or the principal investigator.',
    );
  }
}
