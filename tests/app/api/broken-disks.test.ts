import { createHash } from 'node:crypto';
import { readFile } from 'node:fs/promises';
import { afterAll, afterEach, beforeAll, describe, expect, it } from 'vitest';
import type { ProblemView } from '@/lib/views/common';
import { callJson } from '../../helpers/call-route';
import { makeSmallDisk, mayMount, type SmallDisk } from '../../helpers/small-disk';
import {
  begin,
  bench,
  bytes,
  head,
  metadata,
  offsetOf,
  patch,
  prepareUploads,
  recording,
  send,
  stackPath,
  UPLOADS,
  VERSION,
} from '../../helpers/upload-bench';

prepareUploads();

const PAGE = 4096;
const checksum = (piece: Uint8Array) => ({
  'upload-checksum': `sha1 ${createHash('sha1').update(piece).digest('base64')}`,
});
const problem = async (response: Response) => (await response.json()) as ProblemView;
const stored = async (recordingId: string) =>
  createHash('sha256')
    .update(await readFile(stackPath(recordingId)))
    .digest('hex');
const sent = createHash('sha256').update(bytes).digest('hex');

describe.skipIf(!mayMount)('a data folder on a disk that fails', () => {
  let disk: SmallDisk;
  beforeAll(() => {
    disk = makeSmallDisk(64);
    process.env.BEADLINE_DATA = disk.folder;
    bench.dataDir = disk.folder;
  });
  afterEach(() => {
    disk.readOnly(false);
    disk.clear();
  });
  afterAll(() => disk.remove());

  it('F7 an upload that would not fit is refused before its first byte, with what is free and what is needed', async () => {
    await begin();
    const headers = { ...VERSION, 'upload-length': '80000000', 'upload-metadata': metadata() };
    const response = await send('POST', UPLOADS, headers);
    const { code, detail } = await problem(response);
    expect([response.status, code]).toEqual([507, 'STORAGE_FULL']);
    expect(detail).toMatch(/^Storage full: 6\d\.\d MB free, 80\.0 MB needed\.$/);
    // One in twenty parts stays free for those that are under way.
    disk.leave(3_000_000);
    const small = await send('POST', UPLOADS, { ...headers, 'upload-length': '1000' });
    expect([small.status, (await problem(small)).detail]).toEqual([
      507,
      'Storage full: 0 B free, 1.00 kB needed.',
    ]);
  });

  it.each([
    ['as it is', () => ({})],
    ['with its checksum', checksum],
  ])(
    'F7 a disk that is full at the first, second, ... page of a piece sent %s costs no byte that was acknowledged',
    async (_, headersOf) => {
      const other = await begin();
      expect((await patch(other.location, 0, bytes)).status).toBe(204);
      const first = bytes.subarray(0, 260_000);
      let clean = false;
      for (let pages = 0; !clean && pages < 200; pages++) {
        const { location, recordingId } = await begin();
        expect((await patch(location, 0, first)).status).toBe(204);
        disk.leave(pages * PAGE);
        const rest = bytes.subarray(first.length);
        const answer = await patch(location, first.length, rest, headersOf(rest));
        clean = answer.status === 204;
        if (!clean) {
          expect([pages, answer.status, (await problem(answer)).code]).toEqual([pages, 507, 'STORAGE_FULL']);
          const offset = await offsetOf(location);
          expect(offset).toBeGreaterThanOrEqual(first.length);
          expect(offset).toBe(Number(answer.headers.get('upload-offset') ?? offset));
          disk.clear();
          const again = bytes.subarray(offset);
          expect((await patch(location, offset, again, headersOf(again))).status).toBe(204);
        }
        expect(await stored(recordingId)).toBe(sent);
        // Whoever has come after counts from a clean disk again.
        disk.clear();
      }
      expect(clean).toBe(true);
      expect(await stored(other.recordingId)).toBe(sent);
    },
    60_000,
  );

  it('F31 a store that has become read-only refuses uploads in a sentence, and goes on where they were', async () => {
    const { location, recordingId } = await begin();
    expect((await patch(location, 0, bytes.subarray(0, 50_000))).status).toBe(204);
    disk.readOnly(true);
    const rest = bytes.subarray(50_000);
    for (const headers of [{}, checksum(rest)]) {
      const answer = await patch(location, 50_000, rest, headers);
      const { code, detail } = await problem(answer);
      expect([answer.status, code, answer.headers.get('retry-after')]).toEqual([503, 'UNAVAILABLE', '30']);
      expect(detail).toBe(
        'Uploads are not possible now: the storage can not be written. What has arrived is kept.',
      );
    }
    const creation = { ...VERSION, 'upload-length': '1000', 'upload-metadata': metadata() };
    const refused = await send('POST', UPLOADS, creation);
    expect([refused.status, (await problem(refused)).code]).toEqual([503, 'UNAVAILABLE']);
    // What was refused has left nothing behind, and what is there can be read.
    expect((await head(location)).headers.get('upload-offset')).toBe('50000');
    const health = await callJson<{ status: string; storage: string }>('GET', '/api/health');
    expect(health).toMatchObject({ status: 503, body: { status: 'down', database: 'up', storage: 'down' } });

    disk.readOnly(false);
    expect((await callJson('GET', '/api/health')).body).toMatchObject({ storage: 'up' });
    expect((await patch(location, 50_000, rest, checksum(rest))).status).toBe(204);
    expect(await stored(recordingId)).toBe(sent);
  });

  it('F31 a store that is away is told by the health, and an upload is no loss of what others have', async () => {
    const { recordingId } = await begin();
    disk.unmount();
    try {
      const creation = { ...VERSION, 'upload-length': '1000', 'upload-metadata': metadata() };
      const refused = await send('POST', UPLOADS, creation);
      expect([refused.status, (await problem(refused)).code]).toEqual([503, 'UNAVAILABLE']);
      expect((await callJson('GET', '/api/health')).body).toMatchObject({ storage: 'down' });
      expect((await recording(recordingId)).state).toBe('arriving');
    } finally {
      disk.mount();
    }
  });
});
