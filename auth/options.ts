import type { AuthOptions } from 'next-auth';
import Credentials from 'next-auth/providers/credentials';
import { sessionSecret } from '@/lib/env';
import { addSession, leaveSession } from '@/models/queries/sessions';
import { cookieOptions, SESSION_ABSOLUTE_S, SESSION_IDLE_S, sessionCookieName } from './session-cookie';
import { signInWith } from './sign-in';

/** Error text of a sign-in that was tried too often; the number after it is how long to wait, s. */
export const TOO_MANY_TRIES = 'TooManyTries';

/** Made at each request, since the settings are there only when the server runs. */
export function authOptions(): AuthOptions {
  return {
    secret: sessionSecret(),
    pages: { signIn: '/sign-in' },
    session: { strategy: 'jwt', maxAge: SESSION_IDLE_S },
    cookies: { sessionToken: { name: sessionCookieName(), options: cookieOptions() } },
    providers: [
      Credentials({
        name: 'E-mail and password',
        credentials: { email: { type: 'email' }, password: { type: 'password' } },
        async authorize(credentials, request) {
          const result = await signInWith(
            String(credentials?.email ?? ''),
            String(credentials?.password ?? ''),
            addressOf(request.headers ?? {}),
          );
          if (result.ok) {
            const { id, sessionVersion } = result.person;
            const agent = String(request.headers?.['user-agent'] ?? '');
            return { id, sessionVersion, sessionId: await addSession(id, sessionVersion, agent) };
          }
          if (result.waitS !== null) throw new Error(`${TOO_MANY_TRIES}-${result.waitS}`);
          return null;
        },
      }),
    ],
    events: {
      async signOut({ token }) {
        if (typeof token?.sessionId === 'string') await leaveSession(token.sessionId);
      },
    },
    callbacks: {
      jwt({ token, user }) {
        const nowS = Math.floor(Date.now() / 1000);
        if (user) {
          token.userId = user.id;
          token.sessionVersion = (user as { sessionVersion?: number }).sessionVersion;
          token.sessionId = (user as { sessionId?: string }).sessionId;
          token.signedInAt = nowS;
        }
        // A renewed cookie must not outlive the whole life of its session.
        if (typeof token.signedInAt === 'number' && nowS - token.signedInAt > SESSION_ABSOLUTE_S) return {};
        return token;
      },
      // Pages ask `getViewer`; what the browser can read of a session is when it ends.
      session: ({ session }) => ({ expires: session.expires }),
    },
  };
}

/** The last hop that the web server itself has seen. */
function addressOf(headers: Record<string, unknown>): string {
  const forwarded = String(headers['x-forwarded-for'] ?? '').split(',');
  return forwarded.at(-1)?.trim() || 'unknown';
}
