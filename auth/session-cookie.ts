import { decode, encode } from 'next-auth/jwt';
import { sessionSecret } from '@/lib/env';

/** A session ends after this long without use, s: all-day annotators pause for meals and meetings. */
export const SESSION_IDLE_S = 8 * 3600;
/** A session ends this long after signing in, used or not, s. */
export const SESSION_ABSOLUTE_S = 24 * 3600;
/** A session's cookie is written anew when it is older than this, s. */
const RENEW_AFTER_S = 15 * 60;

export interface Session {
  userId: string;
  sessionVersion: number;
  labId: string | null;
  /** Its row in `sessions`; null for one that began before there were rows. */
  sessionId?: string | null;
  /** Seconds since 1970. */
  signedInAt: number;
  issuedAt: number;
}

// Browsers keep `Secure` cookies from plain HTTP, and `__Host-` is the strictest name there is.
export const isSecureSite = (): boolean => (process.env.NEXTAUTH_URL ?? '').startsWith('https://');
export const sessionCookieName = (): string =>
  isSecureSite() ? '__Host-beadline-session' : 'beadline-session';
/** Names the laboratory that a person of several works in now. */
export const LAB_COOKIE = 'beadline-lab';

export const cookieOptions = () =>
  ({ httpOnly: true, sameSite: 'lax', path: '/', secure: isSecureSite() }) as const;

/** What a session's cookie says; null when it is forged, idle too long or past its whole life. */
export async function readSession(cookie: string | undefined, nowS: number): Promise<Session | null> {
  if (!cookie) return null;
  const payload = await decode({ token: cookie, secret: sessionSecret() }).catch(() => null);
  if (!payload || typeof payload.userId !== 'string' || typeof payload.signedInAt !== 'number') return null;
  if (nowS - payload.signedInAt > SESSION_ABSOLUTE_S) return null;
  return {
    userId: payload.userId,
    sessionVersion: Number(payload.sessionVersion),
    labId: typeof payload.labId === 'string' ? payload.labId : null,
    sessionId: typeof payload.sessionId === 'string' ? payload.sessionId : null,
    signedInAt: payload.signedInAt,
    issuedAt: Number(payload.iat),
  };
}

/** A cookie's value for a session that goes on; null while the old one is young. */
export async function renewedSession(session: Session, nowS: number): Promise<string | null> {
  return nowS - session.issuedAt < RENEW_AFTER_S ? null : writeSession(session, nowS);
}

export function writeSession(session: Omit<Session, 'issuedAt'>, nowS: number): Promise<string> {
  const { userId, sessionVersion, labId, signedInAt, sessionId = null } = session;
  const leftS = Math.max(1, signedInAt + SESSION_ABSOLUTE_S - nowS);
  return encode({
    token: { sub: userId, userId, sessionVersion, labId, signedInAt, sessionId },
    secret: sessionSecret(),
    maxAge: Math.min(SESSION_IDLE_S, leftS),
  });
}

/** The value of one cookie in a `Cookie` header. */
export function cookieIn(header: string | null, name: string): string | undefined {
  for (const part of (header ?? '').split(';')) {
    const at = part.indexOf('=');
    if (at > 0 && part.slice(0, at).trim() === name) return decodeURIComponent(part.slice(at + 1).trim());
  }
  return undefined;
}
