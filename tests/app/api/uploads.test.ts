import { createHash, randomBytes } from 'node:crypto';
import { existsSync, readFileSync, statSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { reconcileUploads } from '@/app/api/uploads/reconcile-uploads';
import { closeDoorbell } from '@/jobs/doorbell';
import { newId } from '@/lib/ids';
import type { ProblemView } from '@/lib/views/common';
import type { RecordingView } from '@/lib/views/recording-view';
import { models } from '@/models';
import { closeSessionLocks, releaseSessionLock, trySessionLock } from '@/models/session-locks';
import { uploadMetadata } from '../../helpers/api-client';
import { call, callJson, webSettings, type Call } from '../../helpers/call-route';
import { freshDatabase, type FreshDatabase } from '../../helpers/fresh-database';
import { makeRun, type LabRows } from '../../helpers/lab-rows';
import { makeTestLab, type TestLab } from '../../helpers/test-lab';

// The clauses quoted are those of tus 1.0.0 (tus.io/protocols/resumable-upload).

const UPLOADS = '/api/v1/uploads';
const VERSION = { 'tus-resumable': '1.0.0' };
const PIECE = { ...VERSION, 'content-type': 'application/offset+octet-stream' };
const bytes = randomBytes(300_000);

let database: FreshDatabase;
let dataDir: string;
let lab: TestLab;
let token: string;
let rows: LabRows;
let runId: string;

beforeAll(async () => {
  ({ dataDir } = webSettings());
  database = await freshDatabase();
  lab = await makeTestLab(database.url);
  const { userId } = lab.people.experimentalist;
  ({ token } = lab.people.experimentalist);
  const campaign = await models().Campaign.create({
    id: newId(),
    labId: lab.labId,
    name: 'C',
    createdBy: userId,
  });
  rows = { labId: lab.labId, userId, campaignId: campaign.id };
});
afterAll(async ({}, suite) => {
  await closeDoorbell();
  await closeSessionLocks();
  await database.dropIfGreen({}, suite);
});
beforeEach(async () => {
  runId = (await makeRun(rows)).id;
});

const metadata = (more: Record<string, string> = {}) =>
  uploadMetadata({ filename: 'stack.tif', run: runId, ...more });
const send = (method: string, path: string, headers: Record<string, string>, options: Call = {}) =>
  call(method, path, { token, ...options, headers });

async function begin(length = bytes.length, more: Record<string, string> = {}) {
  const headers = { ...VERSION, 'upload-length': String(length), 'upload-metadata': metadata(more) };
  const response = await send('POST', UPLOADS, headers);
  expect(response.status).toBe(201);
  return {
    location: response.headers.get('location')!,
    id: response.headers.get('location')!.split('/').at(-1)!,
    recordingId: response.headers.get('beadline-recording')!,
  };
}

const patch = (location: string, offset: number, body: Uint8Array, more: Record<string, string> = {}) =>
  send(
    'PATCH',
    location,
    { ...PIECE, 'upload-offset': String(offset), ...more },
    { body: Buffer.from(body) },
  );
const head = (location: string) => send('HEAD', location, VERSION);
const offsetOf = async (location: string) => Number((await head(location)).headers.get('upload-offset'));
const codeOf = async (response: Response) => [response.status, ((await response.json()) as ProblemView).code];
const recording = async (id: string) =>
  (await callJson<RecordingView>('GET', `/api/v1/recordings/${id}`, { token })).body;
const stored = (id: string) => join(dataDir, 'uploads', id);

describe('the core protocol', () => {
  it('OPTIONS names version, extensions, largest size and checksums, without signing in', async () => {
    const response = await call('OPTIONS', UPLOADS);
    expect(response.status).toBe(204);
    expect(response.headers.get('tus-version')).toBe('1.0.0');
    expect(response.headers.get('tus-extension')!.split(',').sort()).toEqual(
      ['checksum', 'creation', 'creation-with-upload', 'expiration', 'termination'].sort(),
    );
    expect(Number(response.headers.get('tus-max-size'))).toBeGreaterThan(0);
    expect(response.headers.get('tus-checksum-algorithm')!.split(',')).toContain('sha1');
  });

  it.each([{}, { 'tus-resumable': '0.2.2' }])(
    'the version %j answers 412 with Tus-Version, and nothing is begun',
    async (version) => {
      const headers = {
        ...(version as Record<string, string>),
        'upload-length': '1',
        'upload-metadata': metadata(),
      };
      const response = await send('POST', UPLOADS, headers);
      expect([response.status, response.headers.get('tus-version')]).toEqual([412, '1.0.0']);
      expect(await models().Upload.count({ where: { runId } })).toBe(0);
    },
  );

  it('each answer carries Tus-Resumable and names the recording', async () => {
    const { location, recordingId } = await begin();
    for (const response of [
      await head(location),
      await patch(location, 0, bytes.subarray(0, 10)),
      await patch(location, 3, bytes.subarray(0, 10)),
    ]) {
      expect(response.headers.get('tus-resumable')).toBe('1.0.0');
      expect(response.headers.get('beadline-recording')).toBe(recordingId);
    }
  });

  it('HEAD gives offset, length and metadata as sent, and is not cached', async () => {
    const { location } = await begin();
    const response = await head(location);
    expect(response.status).toBe(200);
    expect(response.headers.get('upload-offset')).toBe('0');
    expect(response.headers.get('upload-length')).toBe(String(bytes.length));
    expect(response.headers.get('upload-metadata')).toBe(metadata());
    expect(response.headers.get('cache-control')).toBe('no-store');
  });

  it('a stack in three pieces arrives byte for byte, and is checked once all are in', async () => {
    const { location, recordingId } = await begin();
    expect(await recording(recordingId)).toMatchObject({ state: 'arriving', receivedBytes: 0 });
    for (const [from, to] of [
      [0, 100_000],
      [100_000, 250_000],
      [250_000, 300_000],
    ]) {
      const response = await patch(location, from, bytes.subarray(from, to));
      expect([response.status, response.headers.get('upload-offset')]).toEqual([204, String(to)]);
    }
    expect(readFileSync(join(dataDir, 'stacks', recordingId, 'stack.bin')).equals(bytes)).toBe(true);
    expect((await recording(recordingId)).state).toBe('checking');
    expect(await models().JobRun.count({ where: { subjectId: recordingId, kind: 'ingest-recording' } })).toBe(
      1,
    );
  });

  it('HEAD on a finished upload still answers, and an empty piece at its end changes nothing', async () => {
    const { location, recordingId } = await begin();
    await patch(location, 0, bytes);
    expect(await offsetOf(location)).toBe(bytes.length);
    const again = await patch(location, bytes.length, Buffer.alloc(0));
    expect([again.status, again.headers.get('upload-offset')]).toEqual([204, String(bytes.length)]);
    expect(await models().JobRun.count({ where: { subjectId: recordingId } })).toBe(1);
  });

  // B36
  it.each([1, 50_000])('the wrong offset %d answers 409 and the offset stays', async (wrong) => {
    const { location } = await begin();
    await patch(location, 0, bytes.subarray(0, 20_000));
    expect(await codeOf(await patch(location, wrong, bytes.subarray(0, 10)))).toEqual([409, 'OFFSET']);
    expect(await offsetOf(location)).toBe(20_000);
  });

  it.each([
    ['another content type', { 'content-type': 'application/json', 'upload-offset': '0' }, 415],
    ['no offset', {}, 400],
    ['a negative offset', { 'upload-offset': '-1' }, 400],
  ])('a piece with %s is refused', async (_, more, status) => {
    const { location } = await begin();
    const response = await send('PATCH', location, { ...PIECE, ...more }, { body: 'x' });
    expect(response.status).toBe(status);
    expect(await offsetOf(location)).toBe(0);
  });

  // B37
  it('more bytes than announced answer 413', async () => {
    const { location } = await begin(1000);
    const more = { 'content-length': '1001' };
    const response = await patch(location, 0, bytes.subarray(0, 1001), more);
    expect(response.status).toBe(413);
    expect(((await response.json()) as ProblemView).detail).toBe('Larger than announced (1,000 bytes).');
  });

  it('a method in X-HTTP-Method-Override replaces that of the request', async () => {
    const { location } = await begin();
    const headers = { ...PIECE, 'upload-offset': '0', 'x-http-method-override': 'PATCH' };
    const response = await send('POST', location, headers, { body: Buffer.from(bytes.subarray(0, 500)) });
    expect([response.status, response.headers.get('upload-offset')]).toEqual([204, '500']);
  });

  it('a connection that breaks keeps what had arrived', async () => {
    const { location, recordingId } = await begin();
    const broken = new ReadableStream<Uint8Array>({
      async start(controller) {
        controller.enqueue(bytes.subarray(0, 120_000));
        await new Promise((resolve) => setTimeout(resolve, 200));
        controller.error(new Error('connection lost'));
      },
    });
    await send('PATCH', location, { ...PIECE, 'upload-offset': '0' }, { body: broken });
    const offset = await offsetOf(location);
    expect(offset).toBe(120_000);
    expect((await patch(location, offset, bytes.subarray(offset))).status).toBe(204);
    expect(readFileSync(join(dataDir, 'stacks', recordingId, 'stack.bin')).equals(bytes)).toBe(true);
  });

  it('bytes that were sent are not handed out', async () => {
    const { location } = await begin();
    expect((await send('GET', location, VERSION)).status).toBe(405);
  });

  // B39
  it.each(['..%2F..%2Fsecrets.json', '%00', 'no-such-id', newId()])('the id %s is not there', async (id) => {
    expect((await head(`${UPLOADS}/${id}`)).status).toBe(404);
  });
});

describe('creation', () => {
  it.each([
    ['no length', {}],
    ['a negative length', { 'upload-length': '-1' }],
    ['a length that comes later', { 'upload-defer-length': '1' }],
    ['both', { 'upload-length': '5', 'upload-defer-length': '1' }],
  ])('with %s answers 400', async (_, more) => {
    const headers = { ...VERSION, 'upload-metadata': metadata(), ...(more as Record<string, string>) };
    expect((await send('POST', UPLOADS, headers)).status).toBe(400);
  });

  // B40
  it.each([
    ['filename !!!'],
    ['filename YQ==,filename Yg=='],
    [`filename ${Buffer.from('a\r\nSet-Cookie: b').toString('base64')}`],
    [`filename ${Buffer.from([0xff, 0xfe]).toString('base64')}`],
    [' ,filename YQ=='],
    ['filename YQ== Yg=='],
  ])('with the metadata %j answers 400', async (bad) => {
    const run = `run ${Buffer.from(runId).toString('base64')}`;
    const headers = { ...VERSION, 'upload-length': '5', 'upload-metadata': `${bad},${run}` };
    const response = await send('POST', UPLOADS, headers);
    const body = (await response.json()) as ProblemView;
    expect([response.status, body.detail.slice(0, 27)]).toEqual([
      400,
      'Upload-Metadata is invalid.'.slice(0, 27),
    ]);
  });

  it('above the largest size answers 413 with the limit', async () => {
    const headers = { ...VERSION, 'upload-length': '50000000001', 'upload-metadata': metadata() };
    const response = await send('POST', UPLOADS, headers);
    expect([response.status, ((await response.json()) as ProblemView).detail]).toEqual([
      413,
      'Limit is 50 GB.',
    ]);
  });

  it('into another laboratory’s run is not there', async () => {
    const other = await makeTestLab(database.url, 'Other');
    const headers = { ...VERSION, 'upload-length': '5', 'upload-metadata': metadata() };
    const response = await call('POST', UPLOADS, { token: other.people.experimentalist.token, headers });
    expect(response.status).toBe(404);
  });

  it('with a body takes it in at once', async () => {
    const headers = { ...PIECE, 'upload-length': String(bytes.length), 'upload-metadata': metadata() };
    const response = await send('POST', UPLOADS, headers, { body: Buffer.from(bytes.subarray(0, 4000)) });
    expect([response.status, response.headers.get('upload-offset')]).toEqual([201, '4000']);
    const whole = { ...PIECE, 'upload-length': '100', 'upload-metadata': metadata() };
    const done = await send('POST', UPLOADS, whole, { body: Buffer.from(bytes.subarray(0, 100)) });
    expect((await recording(done.headers.get('beadline-recording')!)).state).toBe('checking');
  });

  it('keeps the last part of a path as the name', async () => {
    const { recordingId } = await begin(10, { filename: '..\\..\\evil/stack.tif' });
    expect((await recording(recordingId)).name).toBe('stack.tif');
  });
});

describe('checksum', () => {
  const sum = (algorithm: string, data: Uint8Array) =>
    `${algorithm} ${createHash(algorithm).update(data).digest('base64')}`;
  const piece = bytes.subarray(0, 40_000);

  it.each(['sha1', 'sha256'])('a piece with the right %s counts', async (algorithm) => {
    const { location } = await begin();
    const response = await patch(location, 0, piece, { 'upload-checksum': sum(algorithm, piece) });
    expect([response.status, await offsetOf(location)]).toEqual([204, 40_000]);
  });

  // B38
  it.each(['sha1', 'sha256'])('a wrong %s answers 460, and the piece is dropped', async (algorithm) => {
    const { location, recordingId, id } = await begin();
    await patch(location, 0, piece);
    const rest = bytes.subarray(40_000);
    const wrong = await patch(location, 40_000, rest, { 'upload-checksum': sum(algorithm, piece) });
    expect(wrong.status).toBe(460);
    expect([await offsetOf(location), statSync(stored(id)).size]).toEqual([40_000, 40_000]);
    expect((await recording(recordingId)).state).toBe('arriving');
    expect((await patch(location, 40_000, rest, { 'upload-checksum': sum(algorithm, rest) })).status).toBe(
      204,
    );
    expect(readFileSync(join(dataDir, 'stacks', recordingId, 'stack.bin')).equals(bytes)).toBe(true);
  });

  it.each(['md5 abc', 'sha1 tooshort', 'sha1', 'SHA1 x y'])('%j answers 400', async (bad) => {
    const { location } = await begin();
    expect((await patch(location, 0, piece, { 'upload-checksum': bad })).status).toBe(400);
    expect(await offsetOf(location)).toBe(0);
  });

  it('a piece that broke off before it could be verified counts for nothing', async () => {
    const { location } = await begin();
    const broken = new ReadableStream<Uint8Array>({
      async start(controller) {
        controller.enqueue(piece);
        await new Promise((resolve) => setTimeout(resolve, 100));
        controller.error(new Error('connection lost'));
      },
    });
    const headers = { ...PIECE, 'upload-offset': '0', 'upload-checksum': sum('sha1', bytes) };
    await send('PATCH', location, headers, { body: broken });
    expect(await offsetOf(location)).toBe(0);
  });
});

describe('one sender at a time', () => {
  it('a second sender is told to wait while the first is sending', async () => {
    const { location } = await begin();
    let finish: () => void = () => undefined;
    const slow = new ReadableStream<Uint8Array>({
      start(controller) {
        controller.enqueue(bytes.subarray(0, 1000));
        finish = () => {
          controller.enqueue(bytes.subarray(1000, 2000));
          controller.close();
        };
      },
    });
    const first = send('PATCH', location, { ...PIECE, 'upload-offset': '0' }, { body: slow });
    await new Promise((resolve) => setTimeout(resolve, 200));
    const second = await patch(location, 0, bytes.subarray(0, 10));
    expect(second.status).toBe(423);
    finish();
    expect((await first).headers.get('upload-offset')).toBe('2000');
  });

  it('a sender in another process holds the upload too', async () => {
    const { location, id } = await begin();
    const holder = (await import('pg')).default;
    const client = new holder.Client({ connectionString: database.url });
    await client.connect();
    await client.query('SELECT pg_advisory_lock(hashtextextended($1, 0))', [`upload:${id}`]);
    expect((await patch(location, 0, bytes.subarray(0, 10))).status).toBe(423);
    await client.end();
    expect((await patch(location, 0, bytes.subarray(0, 10))).status).toBe(204);
    expect(await trySessionLock(`upload:${id}`)).toBe(true);
    await releaseSessionLock(`upload:${id}`);
  });
});

describe('termination and expiration', () => {
  it('an unfinished upload can be given up: nothing is left behind', async () => {
    const { location, id, recordingId } = await begin();
    await patch(location, 0, bytes.subarray(0, 1000));
    expect((await send('DELETE', location, VERSION)).status).toBe(204);
    expect(existsSync(stored(id)) || existsSync(`${stored(id)}.json`)).toBe(false);
    expect((await head(location)).status).toBe(404);
    expect(await models().Recording.findByPk(recordingId)).toBeNull();
  });

  it('a finished one can’t', async () => {
    const { location, recordingId } = await begin();
    await patch(location, 0, bytes);
    expect((await send('DELETE', location, VERSION)).status).toBe(409);
    expect((await recording(recordingId)).state).toBe('checking');
  });

  it('the principal investigator may give up another’s, but not go on with it', async () => {
    const { location } = await begin();
    const other = { token: lab.people.principal_investigator.token };
    expect((await send('HEAD', location, VERSION, other)).status).toBe(403);
    expect((await send('DELETE', location, VERSION, other)).status).toBe(204);
  });

  it('answers say when an upload expires, and each piece puts that off', async () => {
    const { location, id } = await begin();
    await models().Upload.update({ expiresAt: new Date(Date.now() + 60_000) }, { where: { id } });
    const response = await patch(location, 0, bytes.subarray(0, 10));
    const expires = Date.parse(response.headers.get('upload-expires')!);
    expect(expires).toBeGreaterThan(Date.now() + 6 * 86_400_000);
  });

  it('an expired upload answers 410 and is removed with its bytes', async () => {
    const { location, id, recordingId } = await begin();
    await models().Upload.update({ expiresAt: new Date(Date.now() - 1000) }, { where: { id } });
    expect((await head(location)).status).toBe(410);
    await reconcileUploads();
    expect(existsSync(stored(id))).toBe(false);
    expect(await models().Recording.findByPk(recordingId)).toBeNull();
  });
});

describe('after a crash', () => {
  it('a finished file whose commit was lost before the move is adopted', async () => {
    const { location, recordingId, id } = await begin();
    await patch(location, 0, bytes.subarray(0, 299_999));
    const { appendFile } = await import('node:fs/promises');
    await appendFile(stored(id), bytes.subarray(299_999));
    await reconcileUploads();
    expect((await recording(recordingId)).state).toBe('checking');
    expect(readFileSync(join(dataDir, 'stacks', recordingId, 'stack.bin')).equals(bytes)).toBe(true);
  });

  it('a finished file whose commit was lost after the move is adopted, once', async () => {
    const { location, recordingId, id } = await begin();
    await patch(location, 0, bytes.subarray(0, 299_999));
    const { appendFile, mkdir, rename } = await import('node:fs/promises');
    await appendFile(stored(id), bytes.subarray(299_999));
    await mkdir(join(dataDir, 'stacks', recordingId), { recursive: true });
    await rename(stored(id), join(dataDir, 'stacks', recordingId, 'stack.bin'));
    await reconcileUploads();
    await reconcileUploads();
    expect((await recording(recordingId)).state).toBe('checking');
    expect(await models().JobRun.count({ where: { subjectId: recordingId } })).toBe(1);
  });

  it('an unfinished upload is left alone', async () => {
    const { location } = await begin();
    await patch(location, 0, bytes.subarray(0, 1000));
    await reconcileUploads();
    expect(await offsetOf(location)).toBe(1000);
  });
});

describe('a folder of frames', () => {
  const folder = async (files: number, size: number) =>
    (
      await callJson<{ id: string; recordingId: string }>('POST', `/api/v1/runs/${runId}/folders`, {
        token,
        json: { name: 'frames', files, bytes: size },
      })
    ).body;

  it('is checked when its last file is in, whatever the order', async () => {
    const { id, recordingId } = await folder(3, 30);
    for (const position of ['2', '0', '1']) {
      expect((await recording(recordingId)).state).toBe('arriving');
      const { location, recordingId: same } = await begin(10, {
        filename: `f${position}.tif`,
        folder: id,
        position,
      });
      expect(same).toBe(recordingId);
      await patch(location, 0, bytes.subarray(0, 10));
    }
    expect(await recording(recordingId)).toMatchObject({ state: 'checking', kind: 'folder', bytes: 30 });
    expect(existsSync(join(dataDir, 'stacks', recordingId, 'files', '000002.bin'))).toBe(true);
    expect(await models().JobRun.count({ where: { subjectId: recordingId } })).toBe(1);
  });

  it('two last files at once ask for one check', async () => {
    const { id, recordingId } = await folder(2, 20);
    const uploads = await Promise.all(
      ['0', '1'].map((position) => begin(10, { filename: 'f.tif', folder: id, position })),
    );
    await Promise.all(uploads.map(({ location }) => patch(location, 0, bytes.subarray(0, 10))));
    expect((await recording(recordingId)).state).toBe('checking');
    expect(await models().JobRun.count({ where: { subjectId: recordingId } })).toBe(1);
  });

  it('a place that is taken, or is none, answers 409', async () => {
    const { id } = await folder(2, 20);
    await begin(10, { folder: id, position: '0' });
    for (const position of ['0', '2']) {
      const headers = {
        ...VERSION,
        'upload-length': '10',
        'upload-metadata': metadata({ folder: id, position }),
      };
      expect((await send('POST', UPLOADS, headers)).status).toBe(409);
    }
  });

  it('its unfinished files are listed, so that they can be gone on with', async () => {
    const { id, recordingId } = await folder(2, 20);
    const { location } = await begin(10, { filename: 'f.tif', folder: id, position: '1' });
    await patch(location, 0, bytes.subarray(0, 4));
    const { body } = await callJson<{ items: unknown[] }>('GET', `/api/v1/runs/${runId}/uploads`, { token });
    expect(body.items).toMatchObject([
      { recordingId, folderId: id, position: 1, filename: 'f.tif', bytes: 10, receivedBytes: 4 },
    ]);
    expect((await recording(recordingId)).receivedBytes).toBe(4);
  });
});
