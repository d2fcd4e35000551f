import { createHash, randomBytes } from 'node:crypto';
import { expect } from 'vitest';
import { closeDatabase } from '@/models/database';
import { ApiScript, uploadMetadata } from './api-client';
import { makeTestLab } from './test-lab';
import { until } from './until';

export const VERSION = { 'Tus-Resumable': '1.0.0' };
export const PIECE_TYPE = { 'Content-Type': 'application/offset+octet-stream' };
export const UPLOADS = '/api/v1/uploads';
/** What is sent: a NumPy array of 3 frames, 20,000 bytes with its header, so that it becomes a recording. */
export const FILE = new Uint8Array(
  Buffer.concat([
    Buffer.from([0x93, 0x4e, 0x55, 0x4d, 0x50, 0x59, 1, 0, 118, 0]),
    Buffer.from("{'descr': '|u1', 'fortran_order': False, 'shape': (3, 72, 92), }".padEnd(117) + '\n'),
    randomBytes(3 * 72 * 92),
  ]),
);

export interface Sent {
  body?: Uint8Array | ReadableStream<Uint8Array>;
  /** Without it the version is sent as the protocol wants it. */
  version?: Record<string, string>;
}

/** A client of the upload protocol that adds nothing to what it is told to send. */
export class TusClient {
  constructor(
    readonly script: ApiScript,
    readonly runId: string,
  ) {}

  /** A laboratory of its own with a run, at a running server. */
  static async inNewLab(baseUrl: string, databaseUrl: string): Promise<TusClient> {
    const lab = await makeTestLab(databaseUrl);
    const script = new ApiScript(baseUrl, lab.people.experimentalist.token);
    const campaign = await script.post<{ id: string }>('/api/v1/campaigns', { name: 'Uploads' });
    const run = await script.post<{ id: string }>(`/api/v1/campaigns/${campaign.id}/runs`, { name: 'Run' });
    return new TusClient(script, run.id);
  }

  /** The same person at another server that shares database and store. */
  at(baseUrl: string): TusClient {
    return new TusClient(new ApiScript(baseUrl, this.script.token), this.runId);
  }

  send(method: string, path: string, headers: Record<string, string> = {}, sent: Sent = {}) {
    const { body, version = VERSION } = sent;
    const init = { method, headers: { ...version, ...headers }, body, duplex: 'half' };
    return this.script.request(path, init as RequestInit);
  }

  metadata = (more: Record<string, string> = {}) =>
    uploadMetadata({ filename: 'stack.npy', run: this.runId, ...more });

  /** A creation request as it should be, with changes. */
  post(headers: Record<string, string> = {}, sent: Sent = {}) {
    const usual = { 'Upload-Length': String(FILE.length), 'Upload-Metadata': this.metadata() };
    return this.send('POST', UPLOADS, { ...usual, ...headers }, sent);
  }

  async begin(length = FILE.length): Promise<{ url: string; recordingId: string }> {
    const response = await this.post({ 'Upload-Length': String(length) });
    expect(response.status).toBe(201);
    return {
      url: response.headers.get('location') ?? '',
      recordingId: response.headers.get('beadline-recording') ?? '',
    };
  }

  patch(url: string, offset: number | string, body: Sent['body'], more: Record<string, string> = {}) {
    return this.send('PATCH', url, { ...PIECE_TYPE, 'Upload-Offset': String(offset), ...more }, { body });
  }

  head = (url: string) => this.send('HEAD', url);

  offset = async (url: string) => Number((await this.head(url)).headers.get('upload-offset') ?? NaN);

  async state(recordingId: string): Promise<string> {
    return (await this.script.json<{ state: string }>(`/api/v1/recordings/${recordingId}`)).state;
  }

  /** SHA-256 of what the server has, once it has checked it. */
  async storedSha256(recordingId: string): Promise<string | null> {
    const look = () =>
      this.script.json<{ state: string; sha256: string | null }>(`/api/v1/recordings/${recordingId}`);
    const { sha256 } = await until(look, ({ state }) => state === 'ready' || state === 'refused', {
      withinMs: 60_000,
      everyMs: 100,
    });
    return sha256;
  }

  /** Uploads into the run that are not finished. */
  async unfinished(): Promise<number> {
    const { items } = await this.script.json<{ items: unknown[] }>(`/api/v1/runs/${this.runId}/uploads`);
    return items.length;
  }
}

export const closeTusClient = closeDatabase;

/** `Upload-Checksum` of a piece. */
export const checksumOf = (algorithm: string, data: Uint8Array): string =>
  `${algorithm} ${createHash(algorithm).update(data).digest('base64')}`;
