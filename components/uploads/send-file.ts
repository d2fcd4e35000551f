import { DetailedError, Upload } from 'tus-js-client';

/** A link that breaks loses at most this much. */
const CHUNK_BYTES = 8 * 1024 * 1024;
const RETRY_DELAYS_MS = [0, 1000, 3000, 5000, 10_000, 20_000, 30_000];
/** States of the server in which the same request may work a little later. */
const PASSING = new Set([408, 409, 423, 425, 429]);

export interface SendRequest {
  file: File;
  /** For a new upload; the server reads them. */
  metadata?: Record<string, string>;
  /** Address of an upload that was begun earlier. */
  uploadUrl?: string;
  onBytes: (bytes: number) => void;
  onRecording: (recordingId: string) => void;
  /** A piece did not get through and is sent again. */
  onRetry: () => void;
  onUploadUrl?: (url: string) => void;
}

/** Why a file did not get through. */
export class SendError extends Error {
  constructor(
    message: string,
    /** Status of the answer; 0 where none came: the link was lost. */
    readonly status: number,
  ) {
    super(message);
    this.name = 'SendError';
  }
}

export interface Sending {
  /** Settles when all bytes are safe on the server; rejects with a SendError. */
  done: Promise<void>;
  pause(): void;
  resume(): void;
  /** Gives it up: the server drops what it has. */
  end(): Promise<void>;
}

/** Sends one file by tus: in pieces, with patience, from where the server stands. */
export function sendFile(request: SendRequest): Sending {
  let settle: { resolve: () => void; reject: (error: SendError) => void };
  const done = new Promise<void>((resolve, reject) => {
    settle = { resolve, reject };
  });
  const upload = new Upload(request.file, {
    endpoint: '/api/v1/uploads',
    uploadUrl: request.uploadUrl ?? null,
    metadata: request.metadata,
    chunkSize: CHUNK_BYTES,
    retryDelays: RETRY_DELAYS_MS,
    uploadDataDuringCreation: request.uploadUrl === undefined,
    // Fingerprints by name and date confuse files; this page keeps its own, of the content.
    storeFingerprintForResuming: false,
    removeFingerprintOnSuccess: true,
    onShouldRetry: (error) => {
      const again = mayPass(error);
      if (again) request.onRetry();
      return again;
    },
    onProgress: (sent) => request.onBytes(sent),
    onUploadUrlAvailable: () => {
      if (upload.url) request.onUploadUrl?.(upload.url);
    },
    onAfterResponse: (_, response) => {
      const id = response.getHeader('Beadline-Recording');
      if (id) request.onRecording(id);
    },
    onSuccess: () => settle.resolve(),
    onError: (error) => settle.reject(asSendError(error)),
  });
  upload.start();
  return {
    done,
    pause: () => void upload.abort(),
    resume: () => upload.start(),
    end: () => upload.abort(true),
  };
}

/** Drops an upload that this page does not send. */
export const endUpload = (id: string) => Upload.terminate(`/api/v1/uploads/${id}`);

function mayPass(error: DetailedError): boolean {
  const status = error.originalResponse?.getStatus() ?? 0;
  // A piece at the wrong offset is put right by asking again; a place that is taken stays taken.
  if (status === 409 && error.originalRequest?.getMethod() === 'POST') return false;
  return status === 0 || status >= 500 || PASSING.has(status);
}

function asSendError(error: Error | DetailedError): SendError {
  const response = error instanceof DetailedError ? error.originalResponse : null;
  if (!response) return new SendError('The link was lost.', 0);
  return new SendError(sentenceIn(response.getBody()), response.getStatus());
}

/** The detail of a problem document, or the plain text that the server gave. */
export function sentenceIn(body: string): string {
  try {
    const problem = JSON.parse(body) as { detail?: unknown };
    if (typeof problem.detail === 'string' && problem.detail) return problem.detail;
  } catch {
    // Plain text then.
  }
  return body.trim().slice(0, 300) || 'The server refused it without a reason.';
}
