import { createConnection } from 'node:net';

/** A script's view of the API: a token and an address. */
export class ApiScript {
  constructor(
    readonly baseUrl: string,
    readonly token: string,
  ) {}

  request(path: string, init: RequestInit = {}): Promise<Response> {
    const headers = new Headers(init.headers);
    headers.set('Authorization', `Bearer ${this.token}`);
    return fetch(new URL(path, this.baseUrl), { ...init, headers });
  }

  /** Answer's JSON; throws with the problem's sentence when the status is none of `allowed`. */
  async json<T>(path: string, init: RequestInit = {}): Promise<T> {
    const response = await this.request(path, init);
    const text = await response.text();
    if (!response.ok) throw new Error(`${init.method ?? 'GET'} ${path}: ${response.status} ${text}`);
    return JSON.parse(text) as T;
  }

  post<T>(path: string, body: unknown): Promise<T> {
    const headers = { 'Content-Type': 'application/json' };
    return this.json<T>(path, { method: 'POST', headers, body: JSON.stringify(body) });
  }

  async text(path: string): Promise<string> {
    const response = await this.request(path);
    if (!response.ok) throw new Error(`GET ${path}: ${response.status} ${await response.text()}`);
    return response.text();
  }
}

const base64 = (text: string) => Buffer.from(text).toString('base64');

/** `Upload-Metadata` of tus 1.0.0. */
export const uploadMetadata = (entries: Record<string, string>): string =>
  Object.entries(entries)
    .map(([key, value]) => `${key} ${base64(value)}`)
    .join(',');

/** Announces an upload. @returns its address and the recording that it will be */
export async function createUpload(
  script: ApiScript,
  bytes: number,
  metadata: Record<string, string>,
): Promise<{ location: string; recordingId: string }> {
  const response = await script.request('/api/v1/uploads', {
    method: 'POST',
    headers: {
      'Tus-Resumable': '1.0.0',
      'Upload-Length': String(bytes),
      'Upload-Metadata': uploadMetadata(metadata),
    },
  });
  if (response.status !== 201) throw new Error(`${response.status} ${await response.text()}`);
  return {
    location: response.headers.get('Location') ?? '',
    recordingId: response.headers.get('Beadline-Recording') ?? '',
  };
}

/** Where the server says that the next byte belongs. */
export async function uploadOffset(script: ApiScript, location: string): Promise<number> {
  const response = await script.request(location, { method: 'HEAD', headers: { 'Tus-Resumable': '1.0.0' } });
  return Number(response.headers.get('Upload-Offset'));
}

export function patchUpload(
  script: ApiScript,
  location: string,
  offset: number,
  piece: Uint8Array<ArrayBuffer>,
): Promise<Response> {
  return script.request(location, {
    method: 'PATCH',
    headers: {
      'Tus-Resumable': '1.0.0',
      'Content-Type': 'application/offset+octet-stream',
      'Upload-Offset': String(offset),
    },
    body: piece,
  });
}

/** Announces a piece, sends only its first `sent` bytes, and cuts the connection. */
export async function breakUpload(
  script: ApiScript,
  location: string,
  offset: number,
  piece: Uint8Array,
  sent: number,
  pauseMs = 300,
): Promise<void> {
  const url = new URL(location, script.baseUrl);
  const socket = createConnection({ host: url.hostname, port: Number(url.port) });
  await new Promise<void>((resolve, reject) => {
    socket.once('connect', resolve);
    socket.once('error', reject);
  });
  const head = [
    `PATCH ${url.pathname} HTTP/1.1`,
    `Host: ${url.host}`,
    `Authorization: Bearer ${script.token}`,
    'Tus-Resumable: 1.0.0',
    'Content-Type: application/offset+octet-stream',
    `Upload-Offset: ${offset}`,
    `Content-Length: ${piece.length}`,
  ];
  socket.on('error', () => {});
  socket.write(`${head.join('\r\n')}\r\n\r\n`);
  await new Promise<void>((resolve) => socket.write(piece.subarray(0, sent), () => resolve()));
  // The server needs a moment to take what is on the wire before the wire is gone.
  await new Promise((resolve) => setTimeout(resolve, pauseMs));
  socket.destroy();
}
