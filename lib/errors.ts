/** Codes of what can go wrong, each with its HTTP status. The words for people are in `detail`. */
export const STATUS_OF_CODE = {
  BAD_JSON: 400,
  BAD_METADATA: 400,
  QUERY: 400,
  SIGNED_OUT: 401,
  FORBIDDEN: 403,
  CROSS_SITE: 403,
  NOT_FOUND: 404,
  NOT_COMPUTED: 404,
  METHOD: 405,
  STATE: 409,
  OFFSET: 409,
  IDEMPOTENCY_CONFLICT: 409,
  GONE: 410,
  CONFLICT: 412,
  TUS_VERSION: 412,
  TOO_LARGE: 413,
  CONTENT_TYPE: 415,
  INVALID: 422,
  SUSPICIOUS: 422,
  PARAM_RANGE: 422,
  FIELD_RANGE: 422,
  NAME_LENGTH: 422,
  NAME_CHARS: 422,
  PASSWORD: 422,
  CONDITIONS_MISSING: 422,
  LOCKED: 423,
  PRECONDITION_REQUIRED: 428,
  TOO_MANY: 429,
  CHECKSUM_MISMATCH: 460,
  INTERNAL: 500,
  BUSY: 503,
  UNAVAILABLE: 503,
  STORAGE_FULL: 507,
} as const;

export type ErrorCode = keyof typeof STATUS_OF_CODE;

export interface FieldError {
  /** Path of the field with dots, as in `tracer.diameter_m`. */
  path: string;
  message: string;
}

/** Any refusal with a sentence for a person. Everything else that is thrown is a fault of ours. */
export class LabError extends Error {
  readonly code: ErrorCode;
  readonly errors: FieldError[];
  readonly headers: Record<string, string>;

  constructor(
    code: ErrorCode,
    detail: string,
    options: { errors?: FieldError[]; headers?: Record<string, string>; cause?: unknown } = {},
  ) {
    super(detail, { cause: options.cause });
    this.name = 'LabError';
    this.code = code;
    this.errors = options.errors ?? [];
    this.headers = options.headers ?? {};
  }

  get status(): number {
    return STATUS_OF_CODE[this.code];
  }
}

/** The same answer for what does not exist and for what belongs to another laboratory. */
export const notFound = (what: string): LabError =>
  new LabError('NOT_FOUND', `There is no such ${what} in this laboratory.`);
