import { expect, test } from 'vitest';
import { freeFlights, type FreeFlights } from '@/tracking/estimates/free-path';
import { PIECE_POSITIONS_MIN, type StateChange } from '@/tracking/populations/changes-of-state';
import { FREE } from '@/tracking/populations/codes';
import type { Pieces } from '@/tracking/populations/pieces';
import { createRandom, type Random } from '@/tracking/random';
import type { Tracks } from '@/tracking/types';

const IMAGE = { width: 300, height: 300 };
const FRAMES = 150;
const STEP_PX = 2;
const TRACERS = 150;
/** Captures per px of path. */
const RATE = 1 / 600;
const SAMPLES = 200;

/** Whether a tracer is caught at a place. */
type Catch = (x: number, y: number) => boolean;

/** Tracers that fly straight to the right through the image until they are caught or leave it. */
function flights(random: Random, caughtAt: Catch): FreeFlights {
  const start = [0];
  const [x, y]: [number[], number[]] = [[], []];
  const changes: StateChange[] = [];
  for (let track = 0; track < TRACERS; track++) {
    const y0 = IMAGE.height * random.uniform();
    let at = IMAGE.width * (2 * random.uniform() - 1);
    let seen = 0;
    for (let k = 0; k < FRAMES && at < IMAGE.width; k++, at += STEP_PX) {
      if (at < 0) continue;
      // A capture shows only where enough was seen before.
      if (seen >= PIECE_POSITIONS_MIN && caughtAt(at, y0)) {
        changes.push({ track, kind: 'capture', frame: seen, lnOdds: 10 });
        break;
      }
      x.push(at);
      y.push(y0);
      seen++;
    }
    start.push(x.length);
  }
  const frame = new Uint32Array(x.length);
  for (let i = 0; i < TRACERS; i++) for (let p = start[i]; p < start[i + 1]; p++) frame[p] = p - start[i];
  const tracks: Tracks = {
    count: TRACERS,
    start: Uint32Array.from(start),
    frame,
    xPx: Float32Array.from(x),
    yPx: Float32Array.from(y),
    sxPx: new Float32Array(x.length),
    syPx: new Float32Array(x.length),
    brightness: new Float32Array(x.length),
    flags: new Uint8Array(x.length),
  };
  const pieces: Pieces = {
    tracks,
    track: Uint32Array.from({ length: TRACERS }, (_, i) => i),
    population: new Uint8Array(TRACERS).fill(FREE),
    lnOdds: new Float64Array(TRACERS).fill(Number.NaN),
  };
  return freeFlights(pieces, changes, { pixelSize_m: 1e-5 }, [0, 0], IMAGE);
}

/** Anywhere alike. */
const anywhere = (random: Random): Catch => {
  return () => random.uniform() < RATE * STEP_PX;
};

/** At few places that catch most of what comes by: several tracers each. */
const atPlaces = (random: Random): Catch => {
  const reachPx = 6;
  const chance = 0.1;
  const mean = (RATE * IMAGE.width * IMAGE.height) / ((chance / STEP_PX) * (2 * reachPx) ** 2);
  const places = Array.from({ length: random.poisson(mean) }, () => ({
    x: IMAGE.width * random.uniform(),
    y: IMAGE.height * random.uniform(),
  }));
  return (x, y) =>
    places.some((at) => Math.abs(at.x - x) < reachPx && Math.abs(at.y - y) < reachPx) &&
    random.uniform() < chance;
};

test.each([
  ['anywhere', anywhere],
  ['by lines that catch several', atPlaces],
] as const)('the stated error is the scatter over samples where tracers are caught %s', (_, make) => {
  const random = createRandom(41);
  const samples = Array.from({ length: SAMPLES }, () => flights(random, make(random)));
  const ln = samples.map(({ captures, pathM }) => Math.log(captures / pathM));
  const mean = ln.reduce((a, b) => a + b, 0) / SAMPLES;
  const scatter = Math.sqrt(ln.reduce((sum, v) => sum + (v - mean) ** 2, 0) / (SAMPLES - 1));
  const stated = samples.map(({ relativeError }) => relativeError).sort((a, b) => a - b)[SAMPLES >> 1];
  // 200 samples tell the scatter to 5 %; Student's t of some 30 blocks and the limit of Poisson add a little.
  expect(stated / scatter).toBeGreaterThan(0.8);
  expect(stated / scatter).toBeLessThan(1.25);
});
