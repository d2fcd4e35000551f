import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { ProblemView } from '@/lib/views/common';
import { closeDatabase } from '@/models/database';
import { sharedServer } from '../helpers/server';
import { makeTestLab, type LabPerson } from '../helpers/test-lab';

const { baseUrl, databaseUrl } = sharedServer();
let person: LabPerson;

beforeAll(async () => {
  person = (await makeTestLab(databaseUrl)).people.experimentalist;
});
afterAll(closeDatabase);

const get = (path: string, headers: Record<string, string> = {}) =>
  fetch(`${baseUrl}${path}`, { headers, redirect: 'manual' });

/** Cookies of answers, as a browser would send them back. */
class Jar {
  private readonly cookies = new Map<string, string>();
  take(response: Response): Response {
    for (const line of response.headers.getSetCookie()) {
      const [name, value] = line.split(';')[0].split(/=(.*)/s);
      this.cookies.set(name, value);
    }
    return response;
  }
  get header(): string {
    return [...this.cookies].map(([name, value]) => `${name}=${value}`).join('; ');
  }
}

async function signIn(jar: Jar, email: string, password: string): Promise<Response> {
  const { csrfToken } = (await jar.take(await get('/api/auth/csrf')).json()) as { csrfToken: string };
  const body = new URLSearchParams({ csrfToken, email, password, json: 'true' });
  const headers = { cookie: jar.header };
  const init = { method: 'POST', headers, body, redirect: 'manual' } as const;
  return jar.take(await fetch(`${baseUrl}/api/auth/callback/credentials`, init));
}

describe('signing in over HTTP', () => {
  it('sets a cookie that scripts can’t read and that opens pages and API', async () => {
    const jar = new Jar();
    const response = await signIn(jar, person.email, person.password);
    expect(response.status).toBe(200);
    const session = response.headers.getSetCookie().find((line) => line.startsWith('beadline-session='));
    expect(session).toMatch(/; Path=\/; Expires=.*; HttpOnly; SameSite=Lax/);
    const me = await get('/api/v1/me', { cookie: jar.header });
    expect(((await me.json()) as { email: string }).email).toBe(person.email);
    expect((await get('/campaigns', { cookie: jar.header })).status).toBe(200);
  });

  it('what the browser can read of a session is when it ends', async () => {
    const jar = new Jar();
    await signIn(jar, person.email, person.password);
    const session = await get('/api/auth/session', { cookie: jar.header });
    expect(Object.keys((await session.json()) as object)).toEqual(['expires']);
  });

  it('after too many tries answers 429 with the time to wait', async () => {
    const jar = new Jar();
    const statuses: number[] = [];
    let wait: string | null = null;
    for (let i = 0; i < 6; i++) {
      const response = await signIn(jar, 'someone-else@lab.test', 'wrong');
      statuses.push(response.status);
      wait = response.headers.get('retry-after');
    }
    expect(statuses).toEqual([401, 401, 401, 401, 401, 429]);
    expect(Number(wait)).toBeGreaterThan(0);
  });

  it('a page without signing in leads to the sign-in page', async () => {
    const response = await get('/campaigns');
    expect([307, 303, 302]).toContain(response.status);
    expect(response.headers.get('location')).toContain('/sign-in');
  });
});

describe('an icon', () => {
  it('stands where browsers look for it when no page names one, as beside a file', async () => {
    const response = await get('/favicon.ico');
    expect(response.status).toBe(200);
    // Microsoft's ICO container: reserved 0, type 1, three pictures.
    expect([...new Uint16Array(await response.arrayBuffer(), 0, 3)]).toEqual([0, 1, 3]);
  });
});

describe('every answer', () => {
  it.each([
    '/sign-in',
    '/nowhere',
    '/favicon.svg',
    '/api/v1/me',
    '/api/health',
    '/api/v1/uploads',
    '/api/v1/nothing',
  ])('of %s carries the headers of security', async (path) => {
    const { headers } = await get(path);
    const policy = headers.get('content-security-policy')!;
    for (const part of [
      "object-src 'none'",
      "base-uri 'none'",
      "frame-ancestors 'none'",
      "form-action 'self'",
    ]) {
      expect(policy.split('; ')).toContain(part);
    }
    expect(headers.get('x-content-type-options')).toBe('nosniff');
    expect(headers.get('referrer-policy')).toBe('strict-origin-when-cross-origin');
    expect(headers.get('cross-origin-opener-policy')).toBe('same-origin');
    expect(headers.get('cross-origin-resource-policy')).toBe('same-origin');
    expect(headers.get('permissions-policy')).toBe('camera=(), microphone=(), geolocation=()');
    expect(headers.get('strict-transport-security')).toBe('max-age=31536000; includeSubDomains');
    expect(headers.get('x-powered-by')).toBeNull();
  });

  // Content Security Policy Level 3, sections 6.7.1 and 8.2: with a nonce and 'strict-dynamic' a script
  // that somebody smuggled into a page does not run.
  it('that is a page lets only scripts with its own nonce run, and marks all of its own', async () => {
    const jar = new Jar();
    await signIn(jar, person.email, person.password);
    const nonces = new Set<string>();
    for (const path of ['/sign-in', '/', '/campaigns', '/account', '/nowhere', '/campaigns']) {
      const response = await get(path, path === '/sign-in' ? {} : { cookie: jar.header });
      const policy = response.headers.get('content-security-policy')!;
      const scripts = policy.split('; ').find((part) => part.startsWith('script-src '))!;
      const [, nonce] =
        /^script-src 'self' 'nonce-([A-Za-z0-9+/]{22}==)' 'strict-dynamic'$/.exec(scripts) ?? [];
      expect([path, nonce]).toEqual([path, expect.any(String)]);
      const tags = (await response.text()).match(/<script\b[^>]*>/g) ?? [];
      expect(tags.length).toBeGreaterThan(0);
      for (const tag of tags) expect(tag).toContain(`nonce="${nonce}"`);
      nonces.add(nonce!);
    }
    expect(nonces.size).toBe(6);
  });

  it('that is no page may run nothing at all', async () => {
    const { headers } = await get('/api/v1/me');
    expect(headers.get('content-security-policy')).toMatch(/^default-src 'none'; /);
    expect(headers.get('content-security-policy')).not.toContain('script-src');
  });

  it('of the API is kept by no cache', async () => {
    const response = await get('/api/v1/me', { authorization: `Bearer ${person.token}` });
    expect(response.headers.get('cache-control')).toBe('private, no-store');
    expect(response.headers.get('x-request-id')).toMatch(/^[0-9a-f-]{36}$/);
  });

  it.each([
    ['GET', '/api/v1/nothing', 404, 'NOT_FOUND'],
    ['POST', '/api/nothing/at/all', 404, 'NOT_FOUND'],
    ['PUT', '/api/v1/me', 405, 'METHOD'],
    ['DELETE', '/api/v1/campaigns', 405, 'METHOD'],
  ])('to %s %s is a problem document', async (method, path, status, code) => {
    const response = await fetch(`${baseUrl}${path}`, {
      method,
      headers: { authorization: `Bearer ${person.token}` },
    });
    expect(response.headers.get('content-type')).toBe('application/problem+json');
    expect([response.status, ((await response.json()) as ProblemView).code]).toEqual([status, code]);
  });
});

it('the health route says that database, queue and workers are there', async () => {
  const response = await get('/api/health');
  expect(response.status).toBe(200);
  expect(await response.json()).toEqual({
    status: 'up',
    database: 'up',
    queue: 'up',
    storage: 'up',
    workers: 2,
  });
});
