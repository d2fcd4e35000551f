import { expect, test } from 'vitest';
import { scoreTracks } from '@/tracking/assess/track-scores';
import { expectWithin } from '@/tests/helpers/expect-within';

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
