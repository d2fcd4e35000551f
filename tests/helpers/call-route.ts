import { mkdtempSync, readdirSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join, relative } from 'node:path';
import { log } from '@/auth/log';
import type { RouteHandler } from '@/auth/with-member';

const API_ROOT = join(process.cwd(), 'app', 'api');
const BASE = 'http://127.0.0.1:3000';

/** Settings of a web process, with a data folder of its own; to be called before the first request. */
export function webSettings(): { dataDir: string } {
  const dataDir = mkdtempSync(join(process.env.TEST_FOLDER ?? tmpdir(), 'web-'));
  process.env.BEADLINE_DATA = dataDir;
  process.env.NEXTAUTH_SECRET = 'a secret for tests only';
  process.env.NEXTAUTH_URL = BASE;
  log.level = process.env.BEADLINE_LOG ?? 'silent';
  return { dataDir };
}

/** Paths of all route files on disk, as folders below `app`: `/api/v1/runs/[runId]`. */
export function routePaths(): string[] {
  return readdirSync(API_ROOT, { recursive: true, withFileTypes: true })
    .filter((entry) => entry.isFile() && entry.name === 'route.ts')
    .map((entry) => `/api/${relative(API_ROOT, entry.parentPath)}`)
    .sort();
}

type RouteModule = Record<string, RouteHandler | undefined>;

/** The exports of a route file. */
export const routeModule = (path: string): Promise<RouteModule> =>
  import(join(process.cwd(), 'app', path, 'route.ts')) as Promise<RouteModule>;

interface Match {
  path: string;
  params: Record<string, string | string[]>;
}

/** Which route file answers an address: fixed names before parameters, rests last, as Next does. */
function match(pathname: string): Match | null {
  const parts = pathname.split('/').filter(Boolean).map(decodeURIComponent);
  const found = routePaths().flatMap((path) => {
    const params: Match['params'] = {};
    const names = path.split('/').filter(Boolean);
    for (const [i, name] of names.entries()) {
      const rest = /^\[?\[\.\.\.(\w+)\]\]?$/.exec(name);
      if (rest) {
        const left = parts.slice(i);
        if (left.length === 0 && !name.startsWith('[[')) return [];
        return [{ path, params: left.length > 0 ? { ...params, [rest[1]]: left } : params, fixed: i - 0.5 }];
      }
      if (parts[i] === undefined) return [];
      const parameter = /^\[(\w+)\]$/.exec(name);
      if (parameter) params[parameter[1]] = parts[i];
      else if (name !== parts[i]) return [];
    }
    return names.length === parts.length
      ? [{ path, params, fixed: names.length + names.filter((name) => !name.startsWith('[')).length }]
      : [];
  });
  return found.sort((a, b) => b.fixed - a.fixed)[0] ?? null;
}

export interface Call {
  token?: string;
  headers?: Record<string, string>;
  /** Sent as JSON. */
  json?: unknown;
  body?: BodyInit;
  signal?: AbortSignal;
}

/** Sends a request through the route file that would answer it, without a server in between. */
export async function call(method: string, path: string, options: Call = {}): Promise<Response> {
  const { token, json, signal } = options;
  const headers = new Headers(options.headers);
  if (token) headers.set('authorization', `Bearer ${token}`);
  if (json !== undefined) headers.set('content-type', 'application/json');
  const url = new URL(path, BASE);
  headers.set('host', url.host);
  const body = json === undefined ? options.body : JSON.stringify(json);
  const found = match(url.pathname);
  if (!found) throw new Error(`No route file answers ${path}.`);
  const handler = (await routeModule(found.path))[method];
  if (!handler) throw new Error(`${found.path} does not export ${method}.`);
  const init: RequestInit & { duplex: 'half' } = { method, headers, body, signal, duplex: 'half' };
  return handler(new Request(url, init), { params: Promise.resolve(found.params) });
}

/** Status and JSON of an answer at once. */
export async function callJson<T = Record<string, unknown>>(
  method: string,
  path: string,
  options: Call = {},
): Promise<{ status: number; headers: Headers; body: T }> {
  const response = await call(method, path, options);
  const text = await response.text();
  const body = (text === '' ? null : JSON.parse(text)) as T;
  return { status: response.status, headers: response.headers, body };
}
