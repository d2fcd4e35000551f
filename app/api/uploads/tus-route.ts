import { LabError, notFound } from '@/lib/errors';
import { newId } from '@/lib/ids';
import { problemResponse } from '@/auth/problem';
import type { RouteHandler } from '@/auth/with-member';
import { memberRoute } from '../member-route';
import { beginUpload } from './begin-upload';
import { optionsHeaders, TUS_VERSION, versionError } from './tus-headers';
import { endUpload, headOfUpload, patchUpload } from './tus-methods';

const begin = memberRoute('POST /uploads', ({ request, viewer }) => beginUpload(request, viewer));
const head = memberRoute('HEAD /uploads/{upload}', ({ request, viewer, params }) =>
  headOfUpload(request, viewer, params.upload),
);
const patch = memberRoute('PATCH /uploads/{upload}', ({ request, viewer, params }) =>
  patchUpload(request, viewer, params.upload),
);
const end = memberRoute('DELETE /uploads/{upload}', ({ request, viewer, params }) =>
  endUpload(request, viewer, params.upload),
);

/** tus 1.0.0 at one address and those below it. */
export const tusRoute: RouteHandler = async (request, { params }) => {
  // "The X-HTTP-Method-Override request header MUST be a string which MUST be interpreted as the
  // request's method by the Server, if the header is presented. The actual method MUST be ignored."
  const method = (request.headers.get('x-http-method-override') ?? request.method).toUpperCase();
  if (method === 'OPTIONS') return new Response(null, { status: 204, headers: optionsHeaders() });
  const path = (await params).path;
  const parts = Array.isArray(path) ? path : [];
  const response = await dispatch(method, parts, asMethod(request, method));
  response.headers.set('Tus-Resumable', TUS_VERSION);
  return response;
};

function asMethod(request: Request, method: string): Request {
  if (method === request.method || !['POST', 'HEAD', 'PATCH', 'DELETE'].includes(method)) return request;
  const body = method === 'HEAD' ? null : request.body;
  const init: RequestInit & { duplex: 'half' } = { method, headers: request.headers, body, duplex: 'half' };
  return new Request(request.url, { ...init, signal: request.signal });
}

function dispatch(method: string, parts: string[], request: Request): Promise<Response> {
  const context = { params: Promise.resolve({ upload: parts[0] }) };
  const handlers: Partial<Record<string, RouteHandler>> =
    parts.length === 0
      ? { POST: begin }
      : parts.length === 1
        ? { HEAD: head, PATCH: patch, DELETE: end }
        : {};
  const handler = handlers[method];
  if (handler) {
    // "In addition, the Server MUST NOT process the request": not even ask who sends it.
    const refused = versionError(request.headers);
    return refused ? Promise.resolve(problemResponse(refused, newId())) : handler(request, context);
  }
  if (parts.length > 1) return Promise.resolve(problemResponse(notFound('upload'), newId()));
  // Bytes that were sent are never handed out here: GET is not among the methods.
  const known = Object.keys(handlers).join(', ');
  const error = new LabError('METHOD', `${method} is not known here. Known: ${known}.`, {
    headers: { Allow: known },
  });
  return Promise.resolve(problemResponse(error, newId()));
}
