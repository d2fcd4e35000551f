import type { z } from 'zod';
import type { Action } from '@/lib/access';
import { LabError } from '@/lib/errors';
import { isId, newId } from '@/lib/ids';
import { untilDatabaseIsBack } from '@/models/database-away';
import { withRetries } from '@/models/with-retries';
import { Answer, answerResponse } from './answer';
import { assertOwnSite } from './csrf';
import { once, type RequestKey } from './idempotency';
import { readIfMatch } from './if-match';
import { log } from './log';
import { asLabError, fieldsError, problemResponse, queryError } from './problem';
import { countRequest } from './rate-limit';
import { readJson } from './read-json';
import { cookieOptions, renewedSession, SESSION_IDLE_S, sessionCookieName } from './session-cookie';
import { assertMay, viewerFrom, type Viewer } from './viewer';

export type Params = Record<string, string>;
export type RouteHandler = (
  request: Request,
  context: { params: Promise<Record<string, string | string[] | undefined>> },
) => Promise<Response>;

export interface MemberRoute<Body extends z.ZodType = z.ZodType, Query extends z.ZodType = z.ZodType> {
  action: Action;
  body?: Body;
  query?: Query;
  /** The change must name the revision that it starts from. */
  ifMatch?: boolean;
  /** False where the answer holds a secret that must not be kept. */
  idempotent?: boolean;
  /** False for what pages send by the dozen: pieces of uploads. */
  counted?: boolean;
}

export interface MemberContext<Body, Query> {
  request: Request;
  viewer: Viewer;
  params: Params;
  body: Body;
  query: Query;
  /** Revisions that `If-Match` names; null for any. */
  ifMatch: number[] | null;
  requestId: string;
  /** Of a POST with an `Idempotency-Key`; null for any other request. */
  key: RequestKey | null;
}

const SAFE_METHODS = new Set(['GET', 'HEAD', 'OPTIONS']);
/** A connection that was cut is replaced at once; a database that recovers takes longer, ms. */
const READ_PATIENCE_MS = 3_000;

/**
 * Wraps a route handler: who asks (401), may they (403), does the request come from our own pages,
 * is it within limits, are query, body and preconditions good; and what is thrown becomes a problem
 * document. Plain data that the handler returns is sent as JSON.
 */
export function withMember<Body extends z.ZodType, Query extends z.ZodType>(
  route: MemberRoute<Body, Query>,
  handler: (context: MemberContext<z.output<Body>, z.output<Query>>) => Promise<unknown>,
): RouteHandler {
  return async (request, { params }) => {
    const requestId = newId();
    const startedMs = performance.now();
    let viewer: Viewer | null = null;
    let response: Response;
    const attempt = async () => {
      viewer = await viewerFrom(request.headers);
      if (!viewer) throw signedOut();
      assertMay(viewer, route.action);
      if (viewer.via === 'session') assertOwnSite(request);
      if (route.counted !== false && !SAFE_METHODS.has(request.method)) await countRequest(viewer.userId);
      const given = { request, viewer, requestId, params: await plain(params) };
      const answer = await answerTo(route, handler, given);
      await renew(answer, viewer);
      return answer;
    };
    try {
      // Reading can be tried again; whether a change got through before the database went away nobody knows.
      const patienceMs = SAFE_METHODS.has(request.method) ? READ_PATIENCE_MS : 0;
      response = await untilDatabaseIsBack(attempt, patienceMs);
    } catch (thrown) {
      const error = asLabError(thrown);
      if (error.status >= 500) {
        log.error({ err: error.cause ?? error, requestId, path: pathOf(request) }, 'request failed');
      }
      response = problemResponse(error, requestId);
    }
    log.info(
      {
        requestId,
        method: request.method,
        path: pathOf(request),
        status: response.status,
        ms: Math.round(performance.now() - startedMs),
        user: (viewer as Viewer | null)?.userId,
        lab: (viewer as Viewer | null)?.labId,
      },
      'request',
    );
    return response;
  };
}

export const signedOut = (): LabError =>
  new LabError('SIGNED_OUT', 'Sign in, or send an API token in the Authorization header.', {
    headers: { 'WWW-Authenticate': 'Bearer realm="beadline"' },
  });

async function answerTo<Body extends z.ZodType, Query extends z.ZodType>(
  route: MemberRoute<Body, Query>,
  handler: (context: MemberContext<z.output<Body>, z.output<Query>>) => Promise<unknown>,
  base: { request: Request; viewer: Viewer; requestId: string; params: Params },
): Promise<Response> {
  const { request, viewer, requestId } = base;
  const query = readQuery(request, route.query);
  const ifMatch = route.ifMatch ? readIfMatch(request.headers.get('if-match')) : null;
  const { body, text } = route.body ? await readBody(request, route.body) : { body: undefined, text: '' };
  const handle = async (key: RequestKey | null) =>
    handler({ ...base, body: body as z.output<Body>, query: query as z.output<Query>, ifMatch, key });
  // Two changes that lock the same rows crosswise: PostgreSQL gives one of them up, which nobody need know. A body
  // that is still to be read can't be read twice.
  const run = (key: RequestKey | null) =>
    route.body || !request.body ? withRetries(() => handle(key)) : handle(key);
  if (request.method !== 'POST' || route.idempotent === false) {
    return toResponse(await run(null), requestId);
  }
  let streamed: Response | null = null;
  const key = request.headers.get('idempotency-key');
  const answer = await once(viewer, key, `POST ${pathOf(request)}\n${text}`, async (requestKey) => {
    const result = await run(requestKey);
    if (result instanceof Response) streamed = result;
    const { status, body: made, headers } = asAnswer(result);
    return { status, body: { made, headers } };
  });
  if (streamed) return streamed;
  const { made, headers } = answer.body as { made?: unknown; headers?: Record<string, string> };
  const replay: Record<string, string> = answer.replayed ? { 'Idempotency-Replayed': 'true' } : {};
  return answerResponse(new Answer(made, answer.status, { ...headers, ...replay }), requestId);
}

const asAnswer = (result: unknown): Answer => (result instanceof Answer ? result : new Answer(result));

const toResponse = (result: unknown, requestId: string): Response =>
  result instanceof Response ? result : answerResponse(asAnswer(result), requestId);

function readQuery(request: Request, schema: z.ZodType | undefined): unknown {
  if (!schema) return undefined;
  const parsed = schema.safeParse(Object.fromEntries(new URL(request.url).searchParams));
  if (!parsed.success) throw queryError(parsed.error);
  return parsed.data;
}

async function readBody(request: Request, schema: z.ZodType): Promise<{ body: unknown; text: string }> {
  const { value, text } = await readJson(request);
  const parsed = schema.safeParse(value ?? {});
  if (!parsed.success) throw fieldsError(parsed.error);
  return { body: parsed.data, text };
}

/** Ids in the path that can't be ids are unknown ids: the same 404, and PostgreSQL never sees them. */
// A route without parameters in its path is handed none at all.
async function plain(
  params: Promise<Record<string, string | string[] | undefined> | undefined>,
): Promise<Params> {
  const entries = Object.entries((await params) ?? {}).flatMap(([name, value]): [string, string][] =>
    typeof value === 'string' ? [[name, value]] : [],
  );
  for (const [name, value] of entries) {
    if (name.endsWith('Id') && !isId(value)) {
      throw new LabError('NOT_FOUND', `There is no such ${name.slice(0, -2)} in this laboratory.`);
    }
  }
  return Object.fromEntries(entries);
}

async function renew(response: Response, { session }: Viewer): Promise<void> {
  const cookie = session && (await renewedSession(session, Date.now() / 1000));
  if (!cookie) return;
  const secure = cookieOptions().secure ? '; Secure' : '';
  response.headers.append(
    'Set-Cookie',
    `${sessionCookieName()}=${cookie}; Path=/; HttpOnly; SameSite=Lax; Max-Age=${SESSION_IDLE_S}${secure}`,
  );
}

const pathOf = (request: Request): string => new URL(request.url).pathname;
