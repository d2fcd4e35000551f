import { createHash } from 'node:crypto';
import { describe, expect, it } from 'vitest';
import { arrivingRecordings, percentOf } from '@/lib/uploads/arriving';
import { fingerprintOf, refuseOtherFile } from '@/lib/uploads/fingerprint';
import { folderNameOf, framesOfFolder } from '@/lib/uploads/folder-files';
import { SpeedMeter } from '@/lib/uploads/speed';
import type { UploadView } from '@/lib/views/recording-view';
import { expectWithin } from '@/tests/helpers/expect-within';

describe('the speed of an upload', () => {
  it('is bytes over time, and the time left is what is missing over the speed', () => {
    const meter = new SpeedMeter();
    meter.add(0, 0);
    meter.add(4_000_000, 2_000);
    expectWithin(meter.bytesPerS(2_000)!, 2_000_000, { rel: 1e-12 });
    expectWithin(meter.secondsLeft(10_000_000, 2_000)!, 3, { rel: 1e-12 });
  });

  it('forgets what is older than its window', () => {
    const meter = new SpeedMeter();
    for (let s = 0; s <= 100; s += 1) meter.add(s * 1_000_000, s * 1_000);
    for (let s = 1; s <= 100; s += 1) meter.add(100_000_000 + s * 10_000, (100 + s) * 1_000);
    expectWithin(meter.bytesPerS(200_000)!, 10_000, { rel: 1e-9 });
  });

  it('sinks while nothing arrives, and is unknown before two moments are known', () => {
    const meter = new SpeedMeter();
    expect(meter.bytesPerS(0)).toBeNull();
    meter.add(0, 0);
    meter.add(1_000_000, 1_000);
    expect(meter.bytesPerS(9_000)!).toBeLessThan(meter.bytesPerS(1_000)!);
    meter.reset();
    expect(meter.secondsLeft(1, 9_000)).toBeNull();
  });

  it('starts anew when a transfer does', () => {
    const meter = new SpeedMeter();
    meter.add(0, 0);
    meter.add(9_000_000, 1_000);
    meter.add(0, 2_000);
    expect(meter.bytesPerS(2_000)).toBeNull();
  });
});

describe('the fingerprint of a file', () => {
  it('covers both ends and nothing twice', async () => {
    const bytes = Uint8Array.from({ length: 200_000 }, (_, i) => (i * 7) % 251);
    const oracle = createHash('sha256')
      .update(bytes.subarray(0, 65_536))
      .update(bytes.subarray(200_000 - 65_536));
    expect(await fingerprintOf(new Blob([bytes]))).toEqual({ bytes: 200_000, ends: oracle.digest('hex') });
    const short = bytes.subarray(0, 100_000);
    const all = createHash('sha256').update(short).digest('hex');
    expect((await fingerprintOf(new Blob([short]))).ends).toBe(all);
  });

  it('refuses a file of another length, naming both lengths', () => {
    const expected = { filename: 'a.tif', bytes: 1_234_567, ends: null };
    const sentence = refuseOtherFile(expected, { name: 'b.tif', bytes: 12, ends: 'x' });
    expect(sentence).toContain('12 bytes');
    expect(sentence).toContain('1\u2009234\u2009567');
  });

  it('refuses another file of the same length, and takes the same one under a new name', () => {
    const expected = { filename: 'a.tif', bytes: 12, ends: 'aa' };
    expect(refuseOtherFile(expected, { name: 'a.tif', bytes: 12, ends: 'bb' })).toContain('another file');
    expect(refuseOtherFile(expected, { name: 'renamed.tif', bytes: 12, ends: 'aa' })).toBeNull();
  });

  it('goes by the name where this browser did not begin the upload', () => {
    const expected = { filename: 'a.tif', bytes: 12, ends: null };
    expect(refuseOtherFile(expected, { name: 'a.tif', bytes: 12, ends: 'cc' })).toBeNull();
    expect(refuseOtherFile(expected, { name: 'b.tif', bytes: 12, ends: 'cc' })).toContain('another file');
  });
});

describe('a folder of frames', () => {
  const entry = (path: string) => ({ path, file: path });

  it('comes in the order of its numbers, without hidden files and notes', () => {
    const { frames, leftOut } = framesOfFolder(
      ['run/f10.tif', 'run/f2.tif', 'run/notes.txt', 'run/.f1.tif', 'run/F1.PNG'].map(entry),
    );
    expect(frames.map(({ path }) => path)).toEqual(['run/F1.PNG', 'run/f2.tif', 'run/f10.tif']);
    expect(leftOut).toBe(2);
  });

  it('is named by the first part of its paths', () => {
    expect(folderNameOf(['sheet-a/f1.tif'])).toBe('sheet-a');
    expect(folderNameOf(['f1.tif'])).toBe('frames');
  });
});

describe('uploads that wait for their file', () => {
  const upload = (recordingId: string, over: Partial<UploadView> = {}): UploadView => ({
    id: `u-${recordingId}`,
    recordingId,
    runId: 'r',
    folderId: null,
    position: null,
    filename: `${recordingId}.tif`,
    bytes: 100,
    receivedBytes: 62,
    expiresAt: null,
    ...over,
  });

  it('are one row per recording, without those being sent from here', () => {
    const rows = arrivingRecordings(
      [
        upload('a'),
        upload('b', { folderId: 'f' }),
        upload('b', { folderId: 'f', receivedBytes: 8 }),
        upload('c'),
      ],
      new Set(['c']),
    );
    expect(rows.map((row) => [row.recordingId, row.bytes, row.receivedBytes, row.uploads.length])).toEqual([
      ['a', 100, 62, 1],
      ['b', 200, 70, 2],
    ]);
  });

  it('say 100 % only when all is there', () => {
    expect(percentOf(999_999, 1_000_000)).toBe(99);
    expect(percentOf(1_000_000, 1_000_000)).toBe(100);
    expect(percentOf(0, 0)).toBe(0);
  });
});
