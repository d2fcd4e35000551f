import { randomBytes } from 'node:crypto';
import { join } from 'node:path';
import { afterAll, beforeAll, beforeEach, expect } from 'vitest';
import { closeDoorbell } from '@/jobs/doorbell';
import { newId } from '@/lib/ids';
import type { ProblemView } from '@/lib/views/common';
import type { RecordingView } from '@/lib/views/recording-view';
import { models } from '@/models';
import { closeSessionLocks } from '@/models/session-locks';
import { uploadMetadata } from './api-client';
import { call, callJson, webSettings, type Call } from './call-route';
import { freshDatabase, type FreshDatabase } from './fresh-database';
import { makeRun, type LabRows } from './lab-rows';
import { makeTestLab, type TestLab } from './test-lab';

export const UPLOADS = '/api/v1/uploads';
export const VERSION = { 'tus-resumable': '1.0.0' };
export const PIECE = { ...VERSION, 'content-type': 'application/offset+octet-stream' };
/** What is sent. */
export const bytes = randomBytes(300_000);

/** What a file of upload tests works in: a laboratory, and a new run for each test. */
export const bench = {} as {
  database: FreshDatabase;
  dataDir: string;
  lab: TestLab;
  token: string;
  rows: LabRows;
  runId: string;
};

/** To be called once at the top of a test file. */
export function prepareUploads(): void {
  beforeAll(async () => {
    bench.dataDir = webSettings().dataDir;
    bench.database = await freshDatabase();
    bench.lab = await makeTestLab(bench.database.url);
    const { userId, token } = bench.lab.people.experimentalist;
    const { labId } = bench.lab;
    const campaign = await models().Campaign.create({ id: newId(), labId, name: 'C', createdBy: userId });
    Object.assign(bench, { token, rows: { labId, userId, campaignId: campaign.id } });
  });
  afterAll(async ({}, suite) => {
    await closeDoorbell();
    await closeSessionLocks();
    await bench.database.dropIfGreen({}, suite);
  });
  beforeEach(async () => {
    bench.runId = (await makeRun(bench.rows)).id;
  });
}

export const metadata = (more: Record<string, string> = {}) =>
  uploadMetadata({ filename: 'stack.tif', run: bench.runId, ...more });

export const send = (method: string, path: string, headers: Record<string, string>, options: Call = {}) =>
  call(method, path, { token: bench.token, ...options, headers });

export async function begin(length = bytes.length, more: Record<string, string> = {}) {
  const headers = { ...VERSION, 'upload-length': String(length), 'upload-metadata': metadata(more) };
  const response = await send('POST', UPLOADS, headers);
  expect(response.status).toBe(201);
  const location = response.headers.get('location')!;
  return {
    location,
    id: location.split('/').at(-1)!,
    recordingId: response.headers.get('beadline-recording')!,
  };
}

export const patch = (
  location: string,
  offset: number,
  body: Uint8Array,
  more: Record<string, string> = {},
) =>
  send(
    'PATCH',
    location,
    { ...PIECE, 'upload-offset': String(offset), ...more },
    { body: Buffer.from(body) },
  );
export const head = (location: string) => send('HEAD', location, VERSION);
export const offsetOf = async (location: string) =>
  Number((await head(location)).headers.get('upload-offset'));
export const codeOf = async (response: Response) => [
  response.status,
  ((await response.json()) as ProblemView).code,
];
export const recording = async (id: string) =>
  (await callJson<RecordingView>('GET', `/api/v1/recordings/${id}`, { token: bench.token })).body;
/** Where the bytes of an unfinished upload lie, and those of a finished one. */
export const arrivingFile = (id: string) => join(bench.dataDir, 'uploads', id);
export const stackPath = (recordingId: string) => join(bench.dataDir, 'stacks', recordingId, 'stack.bin');
