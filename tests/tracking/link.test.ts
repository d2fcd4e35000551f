import { describe, expect, test } from 'vitest';
import { linkSpots } from '@/tracking/link';
import { createRandom } from '@/tracking/random';
import { createSpotSink } from '@/tracking/spots';
import { POINT_BRIDGED, SPOT_EDGE, type Spots, type Tracks } from '@/tracking/types';
import { expectWithin } from '@/tests/helpers/expect-within';

const RECIPE = { longestStepPx: 8, mayVanishFrames: 2, shortestTrackFrames: 3 };
const SIZE = { width: 256, height: 256, frames: 60 };

type Path = (frame: number) => [x: number, y: number] | null;

/** Spots of things that move on given paths, in the order that detection gives. */
function spotsOf(paths: Path[], frames = SIZE.frames, noisePx = 0.1, seed = 1): Spots {
  const random = createRandom(seed);
  const sink = createSpotSink();
  for (let f = 0; f < frames; f++) {
    const places = paths.flatMap((path, p) => {
      const place = path(f);
      if (!place) return [];
      return [{ x: place[0] + noisePx * random.normal(), y: place[1] + noisePx * random.normal(), p }];
    });
    places.sort((a, b) => a.y - b.y || a.x - b.x);
    for (const { x, y, p } of places) sink.push(f, x, y, noisePx, noisePx, p + 1, 10, 0);
  }
  return sink.spots();
}

/** Which paths the measured points of a track belong to; brightness says so. */
function ownersOf(tracks: Tracks, track: number): number[] {
  const owners = new Set<number>();
  for (let p = tracks.start[track]; p < tracks.start[track + 1]; p++) {
    if ((tracks.flags[p] & POINT_BRIDGED) === 0) owners.add(tracks.brightness[p] - 1);
  }
  return [...owners];
}

const always =
  (x: number, y: number, vx: number, vy: number): Path =>
  (f) => [x + vx * f, y + vy * f];

describe('tracks', () => {
  test('follow tracers that cross each other at full speed', () => {
    const tracks = linkSpots(
      spotsOf([always(20, 100, 3, 0.1), always(203, 101, -3, 0.1), always(116, 20, 0, 2.7)]),
      SIZE,
      RECIPE,
    );
    expect(tracks.count).toBe(3);
    for (let i = 0; i < 3; i++) expect(ownersOf(tracks, i)).toHaveLength(1);
  });

  test('are numbered by first frame, then y, then x, and their frames have no holes', () => {
    const paths: Path[] = [
      (f) => (f >= 5 ? [50, 40] : null),
      (f) => (f >= 5 ? [30, 40.001 + 2] : null),
      always(200, 200, 0, 0),
      always(100, 10, 0, 0),
    ];
    const tracks = linkSpots(spotsOf(paths, 30, 0.01), SIZE, RECIPE);
    expect([0, 1, 2, 3].map((i) => ownersOf(tracks, i)[0])).toEqual([3, 2, 0, 1]);
    for (let i = 0; i < tracks.count; i++) {
      for (let p = tracks.start[i] + 1; p < tracks.start[i + 1]; p++) {
        expect(tracks.frame[p]).toBe(tracks.frame[p - 1] + 1);
      }
    }
  });

  test('bridge a tracer that vanishes for as long as allowed, by flagged points without errors', () => {
    const blinking: Path = (f) => (f === 20 || f === 21 ? null : [30 + 2 * f, 80 + f]);
    const tracks = linkSpots(spotsOf([blinking]), SIZE, RECIPE);
    expect(tracks.count).toBe(1);
    expect(tracks.frame).toHaveLength(60);
    for (const f of [20, 21]) {
      expect(tracks.flags[f]).toBe(POINT_BRIDGED);
      expectWithin(tracks.xPx[f], 30 + 2 * f, { abs: 0.4 });
      expectWithin(tracks.yPx[f], 80 + f, { abs: 0.4 });
      expect(tracks.sxPx[f]).toBeNaN();
    }
    expect(tracks.flags[19] | tracks.flags[22]).toBe(0);
  });

  test('end where a tracer vanishes for longer than allowed', () => {
    const gone: Path = (f) => (f >= 20 && f < 23 ? null : [30 + f, 80]);
    expect(linkSpots(spotsOf([gone]), SIZE, RECIPE).count).toBe(2);
    expect(linkSpots(spotsOf([gone]), SIZE, { ...RECIPE, mayVanishFrames: 3 }).count).toBe(1);
    expect(linkSpots(spotsOf([gone]), SIZE, { ...RECIPE, mayVanishFrames: 0 }).count).toBe(2);
  });

  test('never step farther in a frame than the recipe allows', () => {
    const leap: Path = (f) => [f < 30 ? 50 : 62, 80];
    expect(linkSpots(spotsOf([leap]), SIZE, RECIPE).count).toBe(2);
    expect(linkSpots(spotsOf([leap]), SIZE, { ...RECIPE, longestStepPx: 14 }).count).toBe(1);
  });

  test('of fewer measured points than the shortest are left out', () => {
    const short: Path = (f) => (f === 10 || f === 12 ? [100, 100] : null);
    expect(linkSpots(spotsOf([short]), SIZE, RECIPE).count).toBe(0);
    expect(linkSpots(spotsOf([short]), SIZE, { ...RECIPE, shortestTrackFrames: 2 }).count).toBe(1);
    expect(linkSpots(spotsOf([short]), SIZE, { ...RECIPE, shortestTrackFrames: 1 }).count).toBe(1);
  });

  test('follow a tracer that suddenly runs off and stops again', () => {
    const burst: Path = (f) => [40 + 5 * Math.min(4, Math.max(0, f - 30)), 60];
    const slow = Array.from({ length: 30 }, (_, i) => always(8 * i, 150 + 3 * (i % 20), 0.05, 0));
    const tracks = linkSpots(spotsOf([burst, ...slow]), SIZE, RECIPE);
    expect(tracks.count).toBe(31);
  });
});

test('every spot is in one track at most, and values and flags come through unchanged', () => {
  const random = createRandom(4);
  const paths = Array.from({ length: 80 }, () =>
    always(256 * random.uniform(), 256 * random.uniform(), random.normal(), random.normal()),
  );
  const spots = spotsOf(paths);
  spots.flags.fill(SPOT_EDGE);
  const tracks = linkSpots(spots, SIZE, { ...RECIPE, shortestTrackFrames: 1 });
  const key = (frame: number, x: number, y: number) => `${frame} ${x} ${y}`;
  const left = new Set(Array.from(spots.frame, (frame, s) => key(frame, spots.xPx[s], spots.yPx[s])));
  for (let p = 0; p < tracks.frame.length; p++) {
    if (tracks.flags[p] & POINT_BRIDGED) continue;
    expect(left.delete(key(tracks.frame[p], tracks.xPx[p], tracks.yPx[p]))).toBe(true);
    expect(tracks.flags[p]).toBe(SPOT_EDGE);
  }
  expect(left.size).toBe(0);
});

test('mirrored spots give mirrored tracks', () => {
  const random = createRandom(8);
  const paths = Array.from({ length: 60 }, () =>
    always(256 * random.uniform(), 256 * random.uniform(), 2 * random.normal(), 2 * random.normal()),
  );
  const mirrored = paths.map((path): Path => (f) => {
    const place = path(f);
    return place && [255 - place[0], place[1]];
  });
  const lengths = (tracks: Tracks) =>
    Array.from({ length: tracks.count }, (_, i) => tracks.start[i + 1] - tracks.start[i]).sort(
      (a, b) => a - b,
    );
  const a = linkSpots(spotsOf(paths, 60, 0), SIZE, RECIPE);
  const b = linkSpots(spotsOf(mirrored, 60, 0), SIZE, RECIPE);
  expect(lengths(b)).toEqual(lengths(a));
});

test('no spots, frames without spots and a single spot are no trouble', () => {
  expect(linkSpots(spotsOf([]), SIZE, RECIPE).count).toBe(0);
  const once: Path = (f) => (f === 3 ? [1, 1] : null);
  expect(linkSpots(spotsOf([once]), SIZE, RECIPE).count).toBe(0);
  const rarely: Path = (f) => (f % 30 < 4 ? [20, 20] : null);
  expect(linkSpots(spotsOf([rarely]), SIZE, RECIPE).count).toBe(2);
});

test('spots out of order or beyond the recording are refused', () => {
  const spots = spotsOf([always(1, 1, 0, 0)], 3);
  expect(() => linkSpots(spots, { ...SIZE, frames: 2 }, RECIPE)).toThrow('A spot is in frame 2');
  spots.frame.reverse();
  expect(() => linkSpots(spots, SIZE, RECIPE)).toThrow('Spots of frame 1 came after those of frame 2.');
  expect(() => linkSpots(spots, SIZE, { ...RECIPE, longestStepPx: 0 })).toThrow(RangeError);
});
