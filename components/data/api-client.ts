import { noticeRefusal } from '@/components/shell/session-ended';
import type { FieldError } from '@/lib/errors';
import type { ProblemView } from '@/lib/views/common';

/** A refusal of the API, with the sentence that a person reads. */
export class ApiError extends Error {
  constructor(
    readonly status: number,
    readonly code: string,
    detail: string,
    readonly errors: readonly FieldError[] = [],
    readonly requestId: string | null = null,
  ) {
    super(detail);
    this.name = 'ApiError';
  }
}

/** The link itself failed: nothing is known of what the server did. */
export const LINK_LOST = 'LINK_LOST';

interface ApiRequest {
  method?: 'GET' | 'POST' | 'PATCH' | 'PUT' | 'DELETE';
  body?: unknown;
  /** Revision that the change starts from. */
  revision?: number;
  /** Same key, same request: a repeated POST is done once. */
  idempotencyKey?: string;
  signal?: AbortSignal;
}

/**
 * Asks the API of this site.
 * @returns the answer's JSON; undefined for an empty answer.
 * @throws ApiError for every refusal, and with code `LINK_LOST` when no answer came.
 */
export async function api<T>(path: string, request: ApiRequest = {}): Promise<T> {
  const { method = 'GET', body, revision, idempotencyKey, signal } = request;
  const headers: Record<string, string> = { Accept: 'application/json' };
  if (body !== undefined || method !== 'GET') headers['Content-Type'] = 'application/json';
  if (revision !== undefined) headers['If-Match'] = `"${revision}"`;
  if (idempotencyKey) headers['Idempotency-Key'] = idempotencyKey;
  let response: Response;
  try {
    const text = body === undefined ? undefined : JSON.stringify(body);
    response = await fetch(path, { method, headers, body: text, signal, credentials: 'same-origin' });
  } catch (cause) {
    if (signal?.aborted) throw cause;
    throw new ApiError(0, LINK_LOST, 'The link to the server was lost.');
  }
  if (!response.ok) throw await refusal(response);
  if (response.status === 204 || response.headers.get('content-length') === '0') return undefined as T;
  return (await response.json()) as T;
}

async function refusal(response: Response): Promise<ApiError> {
  try {
    const problem = (await response.json()) as ProblemView;
    noticeRefusal(problem.code);
    return new ApiError(response.status, problem.code, problem.detail, problem.errors, problem.requestId);
  } catch {
    return new ApiError(response.status, 'INTERNAL', `The server answered with status ${response.status}.`);
  }
}
