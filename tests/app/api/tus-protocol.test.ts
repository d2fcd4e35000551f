import { createHash } from 'node:crypto';
import { readFileSync, statSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { newId } from '@/lib/ids';
import type { ProblemView } from '@/lib/views/common';
import { models } from '@/models';
import { call } from '../../helpers/call-route';
import { makeTestLab } from '../../helpers/test-lab';
import {
  UPLOADS,
  VERSION,
  PIECE,
  bytes,
  bench,
  prepareUploads,
  metadata,
  send,
  begin,
  patch,
  head,
  offsetOf,
  codeOf,
  recording,
  arrivingFile,
  stackPath,
} from '../../helpers/upload-bench';

// The clauses quoted are those of tus 1.0.0 (tus.io/protocols/resumable-upload).

prepareUploads();

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
      expect(await models().Upload.count({ where: { runId: bench.runId } })).toBe(0);
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
    expect(readFileSync(stackPath(recordingId)).equals(bytes)).toBe(true);
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
    expect(readFileSync(stackPath(recordingId)).equals(bytes)).toBe(true);
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
    const run = `run ${Buffer.from(bench.runId).toString('base64')}`;
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
    const other = await makeTestLab(bench.database.url, 'Other');
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
    expect([await offsetOf(location), statSync(arrivingFile(id)).size]).toEqual([40_000, 40_000]);
    expect((await recording(recordingId)).state).toBe('arriving');
    expect((await patch(location, 40_000, rest, { 'upload-checksum': sum(algorithm, rest) })).status).toBe(
      204,
    );
    expect(readFileSync(stackPath(recordingId)).equals(bytes)).toBe(true);
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
