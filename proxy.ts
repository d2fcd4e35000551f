import { randomBytes } from 'node:crypto';
import { NextResponse, type NextRequest } from 'next/server';
import { PATH_HEADER } from '@/lib/path-header';
import { pagePolicy } from '@/lib/content-security';

/** Gives each page a policy with a nonce of its own; Next reads it from the request and marks its scripts. */
export function proxy(request: NextRequest): NextResponse {
  const policy = pagePolicy(randomBytes(16).toString('base64'), process.env.NODE_ENV === 'development');
  const headers = new Headers(request.headers);
  headers.set('Content-Security-Policy', policy);
  headers.set(PATH_HEADER, request.nextUrl.pathname + request.nextUrl.search);
  const response = NextResponse.next({ request: { headers } });
  response.headers.set('Content-Security-Policy', policy);
  return response;
}

// Never the API: what passes through here is held in memory, and cut beyond 10 MB.
export const config = { matcher: ['/((?!api/|_next/).*)'] };
