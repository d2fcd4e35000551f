import NextAuth from 'next-auth';
import { authOptions, TOO_MANY_TRIES } from '@/auth/options';

export const dynamic = 'force-dynamic';

type Context = { params: Promise<{ nextauth: string[] }> };

async function handle(request: Request, context: Context): Promise<Response> {
  const response: Response = await NextAuth(authOptions())(request, context);
  return request.method === 'POST' ? withWait(response) : response;
}

/** Too many tries answer 429 with the time to wait, which the sign-in library has no status for. */
async function withWait(response: Response): Promise<Response> {
  if (response.status !== 401) return response;
  const text = await response.text();
  const waitS = new RegExp(`${TOO_MANY_TRIES}-(\\d+)`).exec(text)?.[1];
  const headers = new Headers(response.headers);
  if (waitS) headers.set('Retry-After', waitS);
  return new Response(text, { status: waitS ? 429 : 401, headers });
}

export { handle as GET, handle as POST };
