import { describe, expect, test } from 'vitest';
import { linkSpots } from '@/tracking/link';
import { createRandom } from '@/tracking/random';
import { createSpotSink } from '@/tracking/spots';
import { POINT_BRIDGED, type Spots, type Tracks } from '@/tracking/types';

const SIZE = { width: 300, height: 300, frames: 40 };
const RECIPE = { longestStepPx: 8, mayVanishFrames: 3, shortestTrackFrames: 3, spotSizePx: 1.2 };
const MEETS_AT = 20;
/** Nearer than this, two tracers are seen as one. */
const ONE_SPOT_PX = 2;

type Place = [x: number, y: number];
interface Mover {
  electrons: number;
  at: (frame: number) => Place;
}

/** Two tracers that meet in mid-film, and forty others of all brightnesses that let statistics be measured. */
function filmOf(pair: [Mover, Mover]): Spots {
  const random = createRandom(21);
  const others: Mover[] = Array.from({ length: 40 }, (_, i) => {
    const [x, y] = [20 + 35 * (i % 8), 170 + 24 * Math.floor(i / 8)];
    const [vx, vy] = [0.15 * random.normal(), 0.15 * random.normal()];
    return { electrons: 450 * Math.exp(0.45 * random.normal()), at: (f) => [x + vx * f, y + vy * f] };
  });
  const sink = createSpotSink();
  for (let f = 0; f < SIZE.frames; f++) {
    const spots: { x: number; y: number; electrons: number }[] = [];
    const [a, b] = pair.map((mover) => mover.at(f));
    const [lightA, lightB] = pair.map(({ electrons }) => electrons);
    const light = lightA + lightB;
    if (Math.hypot(a[0] - b[0], a[1] - b[1]) < ONE_SPOT_PX) {
      const middle = (k: number) => (lightA * a[k] + lightB * b[k]) / light;
      spots.push({ x: middle(0), y: middle(1), electrons: light });
    } else {
      spots.push({ x: a[0], y: a[1], electrons: lightA }, { x: b[0], y: b[1], electrons: lightB });
    }
    for (const { at, electrons } of others) spots.push({ x: at(f)[0], y: at(f)[1], electrons });
    spots.forEach((spot) => {
      spot.x += 0.1 * random.normal();
      spot.y += 0.1 * random.normal();
      spot.electrons *= Math.exp(0.06 * random.normal());
    });
    spots.sort((p, q) => p.y - q.y || p.x - q.x);
    for (const { x, y, electrons } of spots) sink.push(f, x, y, 0.1, 0.1, electrons, 20, 0);
  }
  return sink.spots();
}

/** Where the track that begins at a place ends, and how many of its frames were measured. */
function follow(tracks: Tracks, from: Place): { end: Place; frames: number; measured: number } {
  for (let i = 0; i < tracks.count; i++) {
    const p = tracks.start[i];
    if (Math.hypot(tracks.xPx[p] - from[0], tracks.yPx[p] - from[1]) > 1) continue;
    const last = tracks.start[i + 1] - 1;
    let measured = 0;
    for (let k = p; k <= last; k++) if ((tracks.flags[k] & POINT_BRIDGED) === 0) measured++;
    return { end: [tracks.xPx[last], tracks.yPx[last]], frames: last - p + 1, measured };
  }
  throw new Error(`No track begins at ${from.join(', ')}.`);
}

function expectToKeepIdentity(pair: [Mover, Mover]) {
  const tracks = linkSpots(filmOf(pair), SIZE, RECIPE);
  expect(tracks.count).toBe(42);
  for (const { at } of pair) {
    const { end, frames } = follow(tracks, at(0));
    expect(frames).toBe(SIZE.frames);
    expect(Math.hypot(end[0] - at(39)[0], end[1] - at(39)[1])).toBeLessThan(1);
  }
  return tracks;
}

describe('two tracers that meet and are seen as one for some frames', () => {
  test('go on as they were when they cross at full speed', () => {
    expectToKeepIdentity([
      { electrons: 400, at: (f) => [100 + 0.5 * (f - MEETS_AT), 60 + 0.3 * (f - MEETS_AT)] },
      { electrons: 420, at: (f) => [100 - 0.5 * (f - MEETS_AT), 60.2 - 0.3 * (f - MEETS_AT)] },
    ]);
  });

  // Motion is the same whichever of the two goes which way after a turn by 90 degrees; only brightness tells.
  for (const [bright, dim] of [
    [900, 300],
    [300, 900],
  ]) {
    test(`keep their brightness of ${bright} and ${dim} when they part square to where they came from`, () => {
      const reach = (f: number) => 1.5 * Math.sqrt(Math.abs(f - MEETS_AT));
      const way = (sign: number) => (f: number) =>
        (f < MEETS_AT ? [100 + sign * reach(f), 60] : [100, 60 + sign * reach(f)]) as Place;
      expectToKeepIdentity([
        { electrons: bright, at: way(1) },
        { electrons: dim, at: way(-1) },
      ]);
    });
  }

  test('share the spots of a long meeting, so that neither vanishes for longer than allowed', () => {
    const apart = (f: number) => (f < 18 ? 18 - f : f > 22 ? f - 22 : 0.2);
    const pair: [Mover, Mover] = [
      { electrons: 700, at: (f) => [80 + 2 * f, 60 + apart(f)] },
      { electrons: 300, at: (f) => [80 + 2 * f, 60 - apart(f)] },
    ];
    const tracks = expectToKeepIdentity(pair);
    const measured = pair.map(({ at }) => follow(tracks, at(0)).measured);
    // Five frames show one spot for both, and each spot is in one track at most.
    expect(measured[0] + measured[1]).toBe(2 * SIZE.frames - 5);
    expect(Math.min(...measured)).toBeGreaterThanOrEqual(SIZE.frames - 4);
  });
});
