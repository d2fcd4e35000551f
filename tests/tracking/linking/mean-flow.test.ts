import { describe, expect, test } from 'vitest';
import { expectWithin } from '@/tests/helpers/expect-within';
import { linkSpots } from '@/tracking/link';
import { displacementPeaks } from '@/tracking/linking/displacement-peaks';
import { flowAt } from '@/tracking/linking/flow-field';
import { measureFlowField } from '@/tracking/linking/measure-flow-field';
import type { MotionPieces } from '@/tracking/linking/motion-pieces';
import { createRandom } from '@/tracking/random';
import { createSpotSink } from '@/tracking/spots';
import type { Spots } from '@/tracking/types';

const SIZE = { width: 240, height: 240, frames: 14 };
const LIMITS = { ...SIZE, longestStepPx: 24, mayVanishFrames: 0 };
const RECIPE = { longestStepPx: 24, mayVanishFrames: 0, shortestTrackFrames: 1 };
/** Mean distance to the nearest neighbour is half over the root of it: 7.9 px. */
const PER_PX2 = 0.004;

/** Tracers carried along x by a flow that depends on y, each a little faster or slower; brightness is the tracer. */
function carried(flow: (y: number) => number): Spots {
  const random = createRandom(5);
  const margin = 24 * SIZE.frames;
  const movers = Array.from({ length: Math.round(PER_PX2 * (SIZE.width + 2 * margin) * SIZE.height) }, () => {
    const y = SIZE.height * random.uniform();
    const vx = flow(y) + 0.3 * random.normal();
    return { x: (SIZE.width + 2 * margin) * random.uniform() - margin, y, vx, vy: 0.3 * random.normal() };
  });
  const sink = createSpotSink();
  for (let f = 0; f < SIZE.frames; f++) {
    const seen = movers
      .map(({ x, y, vx, vy }, i) => ({ i, x: x + vx * f, y: y + vy * f }))
      .map((place) => ({ ...place, x: place.x + 0.1 * random.normal(), y: place.y + 0.1 * random.normal() }))
      .filter(({ x, y }) => x >= 0 && y >= 0 && x < SIZE.width && y < SIZE.height)
      .sort((a, b) => a.y - b.y || a.x - b.x);
    for (const { i, x, y } of seen) sink.push(f, x, y, 0.1, 0.1, 1000 + i, 20, 0);
  }
  return sink.spots();
}

/** Share of the true steps that are links. */
function linkedShare(spots: Spots): number {
  const tracks = linkSpots({ ...spots, snr: new Float32Array(spots.count).fill(1) }, SIZE, RECIPE);
  let right = 0;
  for (let i = 0; i < tracks.count; i++) {
    for (let p = tracks.start[i] + 1; p < tracks.start[i + 1]; p++) {
      if (tracks.brightness[p] === tracks.brightness[p - 1]) right++;
    }
  }
  const seen = new Map<number, number>();
  let steps = 0;
  for (let s = 0; s < spots.count; s++) {
    if (seen.get(spots.brightness[s]) === spots.frame[s] - 1) steps++;
    seen.set(spots.brightness[s], spots.frame[s]);
  }
  return right / steps;
}

const shear = (y: number) => 20 * (y / SIZE.height - 0.5);
const jet = (y: number) => 16 * (1 - (2 * (y / SIZE.height) - 1) ** 2);

describe('tracers that step farther than their spacing are linked', () => {
  // A linking that begins from velocity 0 finds 0.65 to 0.9 of the steps here (measured before the flow was known to it).
  for (const [name, flow] of Object.entries({ 'uniform drift': () => 16, shear, jet })) {
    test(`where a ${name} carries them`, () => {
      expect(linkedShare(carried(flow))).toBeGreaterThan(0.99);
    });
  }
});

test('displacements pile up at the flow, block by block', () => {
  const peaks = displacementPeaks(carried(shear), LIMITS);
  const at = new Float64Array(2);
  for (const y of [60, 120, 180]) {
    flowAt(peaks!.flow, 120, y, at);
    expectWithin(at[0], shear(y), { abs: 1.5 });
    expectWithin(at[1], 0, { abs: 1 });
  }
});

test('displacements of spots that have nothing to do with each other pile up nowhere', () => {
  const random = createRandom(6);
  const sink = createSpotSink();
  for (let f = 0; f < SIZE.frames; f++) {
    const ys = Array.from({ length: 230 }, () => SIZE.height * random.uniform()).sort((a, b) => a - b);
    for (const y of ys) sink.push(f, SIZE.width * random.uniform(), y, 0.1, 0.1, 400, 20, 0);
  }
  expect(displacementPeaks(sink.spots(), LIMITS)).toBeNull();
});

describe('the mean flow of pieces of tracks', () => {
  const piecesOf = (flow: (y: number) => number, spread: number): MotionPieces => {
    const random = createRandom(8);
    const count = 1200;
    const list = (draw: () => number) => Float64Array.from({ length: count }, draw);
    const yPx = list(() => SIZE.height * random.uniform() - 0.5);
    return {
      count,
      xPx: list(() => SIZE.width * random.uniform() - 0.5),
      yPx,
      vx: yPx.map((y) => flow(y) + spread * random.normal()),
      vy: list(() => spread * random.normal()),
      stepVariance: new Float64Array(count),
      start: new Int32Array(count + 1),
      change: new Float64Array(0),
      noise: new Float64Array(0),
    };
  };
  const fieldOf = (pieces: MotionPieces) =>
    measureFlowField(pieces, new Float64Array(pieces.count).fill(1), LIMITS);

  test('is a field where it differs from place to place, wrong velocities among them or not', () => {
    const pieces = piecesOf(shear, 0.5);
    // Every twentieth piece is a wrong link.
    for (let i = 0; i < pieces.count; i += 20) pieces.vx[i] = 30;
    const at = new Float64Array(2);
    const field = fieldOf(pieces);
    for (const y of [40, 120, 200]) {
      flowAt(field, 120, y, at);
      // 12 pieces to a cell of deviation 0.5 give 0.14; the flow changes by 2 px a frame inside a cell.
      expectWithin(at[0], shear(y), { abs: 1.2 });
      expectWithin(at[1], 0, { abs: 0.5 });
    }
  });

  test('is one velocity where chance explains the differences', () => {
    const field = fieldOf(piecesOf(() => 2, 0.5));
    expect(field.vx).toHaveLength(1);
    expectWithin(field.vx[0], 2, { abs: 0.1 });
  });
});
