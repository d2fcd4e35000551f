import { UniqueConstraintError, ConnectionAcquireTimeoutError } from 'sequelize';
import type { ZodError } from 'zod';
import { LabError, type ErrorCode, type FieldError } from '@/lib/errors';
import { CONDITION_BOUNDS } from '@/lib/schemas/conditions';
import { NAME_LENGTH_MAX } from '@/lib/schemas/text';
import { isDatabaseAway } from '@/models/database-away';
import { StaleRevisionError } from '@/models/queries/stale-revision';

const TITLES: Partial<Record<number, string>> = {
  400: 'Bad request',
  401: 'Not signed in',
  403: 'Not allowed',
  404: 'Not found',
  405: 'Method not allowed',
  409: 'Conflict',
  412: 'Changed meanwhile',
  413: 'Too large',
  415: 'Unsupported content type',
  422: 'Not acceptable as it stands',
  428: 'If-Match is missing',
  429: 'Too many requests',
  500: 'Our fault',
  503: 'Not available now',
  507: 'Storage full',
};

/** Body of a problem document (RFC 9457). */
export interface ProblemBody {
  type: string;
  title: string;
  status: number;
  detail: string;
  code: string;
  errors: FieldError[];
  requestId: string;
  /** What is stored now, when a change met a newer version. */
  current?: unknown;
}

/** Any thrown thing as a LabError; what is not one of ours says nothing of its inside. */
export function asLabError(thrown: unknown): LabError {
  if (thrown instanceof LabError) return thrown;
  if (thrown instanceof ConnectionAcquireTimeoutError) {
    return new LabError('BUSY', 'The server is busy. Try again in a moment.', {
      cause: thrown,
      headers: { 'Retry-After': '5' },
    });
  }
  if (isDatabaseAway(thrown)) {
    return new LabError('UNAVAILABLE', 'The database does not answer. Try again in a moment.', {
      cause: thrown,
      headers: { 'Retry-After': '5' },
    });
  }
  // Too many open files or sockets: over in a moment, and nobody's fault.
  if (['EMFILE', 'ENFILE'].includes(String((thrown as { code?: unknown } | null)?.code))) {
    return new LabError('BUSY', 'The server is busy. Try again in a moment.', {
      cause: thrown,
      headers: { 'Retry-After': '5' },
    });
  }
  if (isSealed(thrown)) {
    return new LabError('STATE', "This analysis was signed off: it can't be changed any more.", {
      cause: thrown,
    });
  }
  if (thrown instanceof UniqueConstraintError) {
    return new LabError('STATE', 'The same thing exists already.', { cause: thrown });
  }
  return new LabError(
    'INTERNAL',
    'Something went wrong on our side. The request id helps to find out what.',
    {
      cause: thrown,
    },
  );
}

/** The database's own refusal, for a change that slipped past every check before it. */
const isSealed = (thrown: unknown): boolean =>
  (thrown as { original?: { code?: string } } | null)?.original?.code === 'BL001';

export function problemBody(error: LabError, requestId: string): ProblemBody {
  const body: ProblemBody = {
    type: `about:blank#${error.code.toLowerCase().replaceAll('_', '-')}`,
    title: TITLES[error.status] ?? 'Problem',
    status: error.status,
    detail: error.message,
    code: error.code,
    errors: error.errors,
    requestId,
  };
  return error instanceof StaleRevisionError ? { ...body, current: error.current } : body;
}

export function problemResponse(error: LabError, requestId: string): Response {
  return new Response(JSON.stringify(problemBody(error, requestId)), {
    status: error.status,
    headers: {
      'Content-Type': 'application/problem+json',
      'Cache-Control': 'private, no-store',
      'X-Request-Id': requestId,
      ...error.headers,
    },
  });
}

/** Bad fields of a body as one error with a list; the code says what kind of field went wrong. */
export function fieldsError(error: ZodError): LabError {
  const errors = fieldErrors(error);
  const detail = errors.length === 1 ? errors[0].message : `${errors.length} fields need another value.`;
  return new LabError(codeFor(errors[0]), detail, { errors });
}

/** Bad parameters of an address. */
export function queryError(error: ZodError): LabError {
  const errors = fieldErrors(error, 'parameter');
  return new LabError('QUERY', errors[0].message, { errors });
}

type Issue = ZodError['issues'][number];

function fieldErrors(
  error: { issues: readonly Issue[] },
  kind = 'field',
  above: string[] = [],
): FieldError[] {
  return error.issues.flatMap((issue): FieldError[] => {
    const path = [...above, ...issue.path.map(String)];
    if (issue.code === 'invalid_union' && issue.message === 'Invalid input' && issue.errors.length > 0) {
      return fieldErrors({ issues: nearestForm(issue.errors) }, kind, path);
    }
    if (issue.code === 'unrecognized_keys') {
      return issue.keys.map((key) => ({
        path: [...path, key].join('.'),
        message: `Unknown ${kind} '${key.slice(0, 60)}'.`,
      }));
    }
    return [{ path: path.join('.'), message: issue.message }];
  });
}

/** Of several forms that a value may have, what is wrong with the one that it comes nearest to. */
function nearestForm(forms: readonly Issue[][]): readonly Issue[] {
  const depth = (issues: readonly Issue[]) => Math.min(...issues.map(({ path }) => path.length));
  return forms.reduce((best, form) => (depth(form) > depth(best) ? form : best));
}

function codeFor({ path, message }: FieldError): ErrorCode {
  if (message === `At most ${NAME_LENGTH_MAX} characters.`) return 'NAME_LENGTH';
  if (message.startsWith('Hidden or control characters')) return 'NAME_CHARS';
  if (message.startsWith('Unknown field')) return 'INVALID';
  if (path in CONDITION_BOUNDS) return 'FIELD_RANGE';
  if (/^(recipe|fields)\./.test(path)) return 'PARAM_RANGE';
  return 'INVALID';
}
