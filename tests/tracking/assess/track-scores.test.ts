import { expect, test } from 'vitest';
import { scoreTracks } from '@/tracking/assess/track-scores';
import { createRandom, mixSeed, type Random } from '@/tracking/random';
import { expectWithin } from '@/tests/helpers/expect-within';
import { bruteForceScores } from './brute-force-scores';

interface Piece {
  x: number;
  y: number;
  from: number;
  to: number;
}

function tracksOf(pieces: Piece[]) {
  const start = [0];
  const frame: number[] = [];
  const xPx: number[] = [];
  const yPx: number[] = [];
  for (const { x, y, from, to } of pieces) {
    for (let f = from; f <= to; f++) {
      frame.push(f);
      xPx.push(x);
      yPx.push(y);
    }
    start.push(frame.length);
  }
  return { start, frame, xPx, yPx };
}

const TRUTH = tracksOf([
  { x: 0, y: 0, from: 0, to: 9 },
  { x: 100, y: 0, from: 0, to: 9 },
]);

test('a case worked by hand: one track off by a pixel, one half missed, one spurious', () => {
  // Definitions: Chenouard et al., Nat. Methods 11, 281 (2014); d = 35, d(X, Phi) = 100, spurious 50.
  const scores = scoreTracks(
    TRUTH,
    tracksOf([
      { x: 1, y: 0, from: 0, to: 9 },
      { x: 100, y: 0, from: 0, to: 4 },
      { x: 50, y: 50, from: 0, to: 9 },
    ]),
    10,
  );
  expectWithin(scores.alpha, 0.65, { abs: 1e-4 });
  expectWithin(scores.beta, 0.4333, { abs: 1e-4 });
  expectWithin(scores.jaccard, 0.5, { abs: 1e-4 });
  expectWithin(scores.jaccardTracks, 0.6667, { abs: 1e-4 });
  expectWithin(scores.rmsePx, 0.8165, { abs: 1e-4 });
});

test('the truth itself scores 1, nothing at all scores 0', () => {
  expect(scoreTracks(TRUTH, TRUTH, 10)).toMatchObject({
    alpha: 1,
    beta: 1,
    jaccard: 1,
    jaccardTracks: 1,
    rmsePx: 0,
  });
  expect(scoreTracks(TRUTH, tracksOf([]), 10)).toMatchObject({
    alpha: 0,
    beta: 0,
    jaccard: 0,
    jaccardTracks: 0,
  });
});

test('of all ways of pairing the one with the least distance counts', () => {
  // Oracle: the definitions with every pairing tried out.
  let unpaired = 0;
  for (let seed = 1; seed <= 400; seed++) {
    const random = createRandom(mixSeed(seed, 0x5c0));
    const truth = wanderers(1 + random.integer(4), random);
    const estimated = wanderers(random.integer(6), random);
    for (const gatePx of [2, 5]) {
      const scores = scoreTracks(truth, estimated, 8, gatePx);
      const expected = bruteForceScores(truth, estimated, 8, gatePx);
      expectWithin(scores.alpha, expected.alpha, { abs: 1e-12 });
      expectWithin(scores.beta, expected.beta, { abs: 1e-12 });
      expectWithin(scores.jaccard, expected.jaccard, { abs: 1e-12 });
      expectWithin(scores.jaccardTracks, expected.jaccardTracks, { abs: 1e-12 });
      if (expected.jaccard === 0) unpaired++;
      else expectWithin(scores.rmsePx, expected.rmsePx, { abs: 1e-12 });
      expect(scores.beta).toBeLessThanOrEqual(scores.alpha + 1e-12);
      expect(scores.alpha).toBeGreaterThanOrEqual(-1e-12);
    }
  }
  expect(unpaired, 'cases in which nothing is paired').toBeGreaterThan(10);
  expect(unpaired, 'cases in which nothing is paired').toBeLessThan(400);
});

test('scores stay the same when the order of tracks changes and when truth and time are mirrored', () => {
  for (let seed = 1; seed <= 20; seed++) {
    const random = createRandom(mixSeed(seed, 0x0d3));
    const truth = wanderers(4, random);
    const estimated = wanderers(5, random);
    const scores = scoreTracks(truth, estimated, 8);
    const backwards = (tracks: typeof truth) => {
      const pieces = tracks.start.slice(1).map((end, i) => ({ from: tracks.start[i], end }));
      const order = pieces.reverse().flatMap(({ from, end }) => range(from, end).reverse());
      const start = [0];
      for (const { from, end } of pieces) start.push(start[start.length - 1] + end - from);
      return {
        start,
        frame: order.map((p) => 7 - tracks.frame[p]),
        xPx: order.map((p) => -tracks.xPx[p]),
        yPx: order.map((p) => tracks.yPx[p]),
      };
    };
    const mirrored = scoreTracks(backwards(truth), backwards(estimated), 8);
    expectWithin(mirrored.alpha, scores.alpha, { abs: 1e-12 });
    expectWithin(mirrored.beta, scores.beta, { abs: 1e-12 });
    expectWithin(mirrored.jaccard, scores.jaccard, { abs: 1e-12 });
    expectWithin(mirrored.jaccardTracks, scores.jaccardTracks, { abs: 1e-12 });
  }
});

test('one estimated track that changes from one tracer to another counts for one of them only', () => {
  const scores = scoreTracks(TRUTH, joined(), 10);
  // 6 of 20 true points are in the paired track, 4 estimated points are not: 6 / (20 + 10 - 6).
  expectWithin(scores.jaccard, 0.25, { abs: 1e-9 });
  expectWithin(scores.jaccardTracks, 0.5, { abs: 1e-9 });
});

function joined() {
  const a = tracksOf([{ x: 0, y: 0, from: 0, to: 5 }]);
  const b = tracksOf([{ x: 100, y: 0, from: 6, to: 9 }]);
  return {
    start: [0, 10],
    frame: [...a.frame, ...b.frame],
    xPx: [...a.xPx, ...b.xPx],
    yPx: [...a.yPx, ...b.yPx],
  };
}

const range = (from: number, to: number) => Array.from({ length: to - from }, (_, k) => from + k);

/** Tracks with holes that wander about a few places, so that several come near each other. */
function wanderers(count: number, random: Random) {
  const start = [0];
  const frame: number[] = [];
  const xPx: number[] = [];
  const yPx: number[] = [];
  for (let i = 0; i < count; i++) {
    const x = 4 * random.integer(2);
    const first = random.integer(3);
    const last = 7 - random.integer(3);
    for (let f = first; f <= last; f++) {
      if (random.uniform() < 0.2) continue;
      frame.push(f);
      xPx.push(x + random.normal());
      yPx.push(random.normal());
    }
    start.push(frame.length);
  }
  if (frame.length > 0 || count === 0) return { start, frame, xPx, yPx };
  return { start: start.map((_, i) => Math.min(i, 1)), frame: [0], xPx: [0], yPx: [0] };
}
