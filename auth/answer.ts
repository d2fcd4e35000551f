/** What a handler hands back when it is more than plain data. */
export class Answer {
  constructor(
    readonly body: unknown,
    readonly status = 200,
    readonly headers: Record<string, string> = {},
  ) {}
}

/** 201 with the address of what was made. */
export const created = (body: unknown, location: string): Answer =>
  new Answer(body, 201, { Location: location });

/** 204: done, nothing to say. */
export const done = (): Answer => new Answer(undefined, 204);

/** JSON with `ETag` where the thing has a revision. */
export function answerResponse(answer: Answer, requestId: string): Response {
  const headers: Record<string, string> = {
    'Cache-Control': 'private, no-store',
    'X-Request-Id': requestId,
    ...answer.headers,
  };
  const revision = revisionOf(answer.body);
  if (revision !== null) headers.ETag ??= `"${revision}"`;
  if (answer.body === undefined) return new Response(null, { status: answer.status, headers });
  headers['Content-Type'] ??= 'application/json';
  return new Response(JSON.stringify(answer.body), { status: answer.status, headers });
}

function revisionOf(body: unknown): number | null {
  if (typeof body !== 'object' || body === null || !('revision' in body)) return null;
  return typeof body.revision === 'number' ? body.revision : null;
}
