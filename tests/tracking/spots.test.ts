import { expect, test } from 'vitest';
import { concatSpots, createSpotSink, decodeSpots, encodeSpots, takeEncodedRuns } from '@/tracking/spots';

function someSpots(frames: number[]) {
  const sink = createSpotSink(1);
  frames.forEach((frame, i) => sink.push(frame, i + 0.25, i + 0.5, 0.1, 0.2, 100 + i, 5 + i, i & 31));
  return sink.spots();
}

test('a sink keeps every value while it grows, and forgets them when cleared', () => {
  const sink = createSpotSink(1);
  for (let i = 0; i < 1000; i++) sink.push(i, i, -i, 0.1, 0.2, i, 5, 3);
  const spots = sink.spots();
  expect(spots.count).toBe(1000);
  expect(spots.frame[999]).toBe(999);
  expect(spots.yPx[500]).toBe(-500);
  sink.clear();
  expect(sink.spots().count).toBe(0);
  expect(spots.xPx[3]).toBe(3);
});

test('spots come back from their bytes unchanged, from any address', () => {
  const spots = someSpots([0, 0, 3]);
  expect(decodeSpots(encodeSpots(spots))).toEqual(spots);
  const shifted = new Uint8Array(encodeSpots(spots).length + 1);
  shifted.set(encodeSpots(spots), 1);
  expect(decodeSpots(shifted.subarray(1))).toEqual(spots);
  expect(decodeSpots(encodeSpots(someSpots([]))).count).toBe(0);
});

test('spots come back from a Buffer that lies at any address of a pool, and are a copy of it', () => {
  const spots = someSpots([0, 2, 2, 7]);
  const bytes = encodeSpots(spots);
  for (let shift = 0; shift < 8; shift++) {
    const pool = Buffer.alloc(bytes.length + 16, 0xff);
    const buffer = pool.subarray(shift, shift + bytes.length);
    buffer.set(bytes);
    const decoded = decodeSpots(buffer);
    expect(decoded).toEqual(spots);
    pool.fill(0);
    expect(decoded.xPx[3], 'the pool is written anew').toBe(spots.xPx[3]);
  }
});

test('bytes that are cut short, of another version or not spots are refused', () => {
  const bytes = encodeSpots(someSpots([1, 2]));
  expect(() => decodeSpots(bytes.subarray(0, bytes.length - 1))).toThrow(/bytes/);
  expect(() => decodeSpots(bytes.subarray(0, 3))).toThrow(/header/);
  const newer = bytes.slice();
  newer[4] = 9;
  expect(() => decodeSpots(newer)).toThrow('Got spots v9 when expected v1.');
  const other = bytes.slice();
  other[0] = 0;
  expect(() => decodeSpots(other)).toThrow(/not spots/);
});

test('runs of frames join in order, and out of order they are refused', () => {
  const joined = concatSpots([someSpots([0, 1]), someSpots([]), someSpots([1, 4])]);
  expect([...joined.frame]).toEqual([0, 1, 1, 4]);
  expect([...joined.xPx]).toEqual([0.25, 1.25, 0.25, 1.25]);
  expect(() => concatSpots([someSpots([5]), someSpots([4])])).toThrow(
    'Spots of frame 4 came after those of frame 5.',
  );
});

test('runs given as bytes join as they would decoded, and leave the list', () => {
  const runs = [someSpots([0, 1]), someSpots([]), someSpots([1, 4])];
  const bytes = runs.map(encodeSpots);
  expect(takeEncodedRuns(bytes)).toEqual(concatSpots(runs));
  expect(bytes).toEqual([]);
  expect(takeEncodedRuns([]).count).toBe(0);
  expect(() => takeEncodedRuns([encodeSpots(someSpots([5])), encodeSpots(someSpots([4]))])).toThrow(
    RangeError,
  );
  expect(() => takeEncodedRuns([encodeSpots(someSpots([5])).subarray(0, 20)])).toThrow(/bytes/);
});
