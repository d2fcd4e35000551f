import { describe, expect, test } from 'vitest';
import { widenForFewLines, widthByParts } from '@/tracking/estimates/line-spread';
import { linesBend } from '@/tracking/estimates/lines-bend';
import { nearPoints } from '@/tracking/estimates/near-points';
import type { PairMotion } from '@/tracking/estimates/pair-motion';
import { shareOnOneLine } from '@/tracking/estimates/share-on-one-line';
import { sumError } from '@/tracking/estimates/shared-motion';
import { createRandom } from '@/tracking/random';
import { studentHalfWidth } from '@/tracking/student-t';
import { expectWithin } from '@/tests/helpers/expect-within';

/** A pair 10 px apart whose motions have a correlation. */
function pair(trackA: number, trackB: number, alike: number, rigid: boolean): PairMotion {
  return {
    trackA,
    trackB,
    measured: 50,
    common: 50,
    dxPx: 6,
    dyPx: 8,
    telling: true,
    rigid,
    rigidWhenTurned: false,
    together: 100 * alike,
    asOne: 100,
  };
}

const lineEach = (tracks: number) => Int32Array.from({ length: tracks }, (_, i) => i);

describe('errors of sums', () => {
  test('independent parts add in square, related ones in full', () => {
    const part = Float64Array.of(3, 4, -12);
    expectWithin(sumError(part, []), 13, { rel: 1e-12 });
    // (3 + 4)^2 + 12^2 = 193.
    expectWithin(sumError(part, [[0, 1]]), Math.sqrt(193), { rel: 1e-12 });
    // A product that would lower the error doesn't.
    expectWithin(sumError(part, [[0, 2]]), 13, { rel: 1e-12 });
  });

  test('few lines widen an error by n / (n - 1) and by Student’s t', () => {
    const ten = new Float64Array(10).fill(2);
    const expected = Math.sqrt(10 / 9) * (studentHalfWidth(0.95, 9) / 1.959963985);
    expectWithin(widenForFewLines(1, ten), expected, { rel: 1e-6 });
    // Kish 1965: weights 3, 1, 1, 1 are worth 36 / 12 = 3 lines.
    const three = Math.sqrt(3 / 2) * (studentHalfWidth(0.95, 2) / 1.959963985);
    expectWithin(widenForFewLines(1, Float64Array.of(3, 1, 1, 1)), three, { rel: 1e-6 });
  });

  test('a sum of squares is as certain as its fourth powers say', () => {
    // Satterthwaite 1946: ten equal parts are 2 x 10^2 / 10 = 20 degrees of freedom, small ones beside them add none.
    const ten = new Float64Array(1000).fill(1e-6).fill(-2, 0, 10);
    expectWithin(widthByParts(ten), studentHalfWidth(0.95, 20) / 1.959963985, { rel: 1e-6 });
    // 2 x 12^2 / 84 = 3.4.
    const few = Float64Array.of(3, -1, 1, 1);
    expectWithin(widthByParts(few), studentHalfWidth(0.95, 3) / 1.959963985, { rel: 1e-6 });
  });
});

test('the share of pairs on one line is right although none can be told', () => {
  const random = createRandom(5);
  const pairs: PairMotion[] = [];
  // A third of 3,000 pairs move as one up to noise of 3 times their motion, the others at random.
  for (let i = 0; i < 3000; i++)
    pairs.push(pair(2 * i, 2 * i + 1, (i % 3 === 0 ? 1 : 0) + 3 * random.normal(), false));
  const { share, error } = shareOnOneLine(pairs, lineEach(6000), () => 1);
  expectWithin(error, 3000 * (3 / Math.sqrt(3000)), { rel: 0.1 });
  expectWithin(share, 1 / 3, { abs: 4 * (3 / Math.sqrt(3000)) });
});

describe('lines bend', () => {
  test('where near tracers move alike without keeping their distance', () => {
    const alike = Array.from({ length: 30 }, (_, i) => pair(2 * i, 2 * i + 1, 0.8, false));
    expect(linesBend({ pairs: alike, line: lineEach(60) }, 4, 20)).toBe(true);
    // Further apart than is looked at.
    expect(linesBend({ pairs: alike, line: lineEach(60) }, 4, 9)).toBe(false);
  });

  test('not where those that move alike move as one, nor where pairs of the same two lines repeat themselves', () => {
    const random = createRandom(6);
    const apart = Array.from({ length: 60 }, (_, i) => pair(2 * i, 2 * i + 1, 0.3 * random.normal(), false));
    const rigid = Array.from({ length: 30 }, (_, i) => pair(200 + 2 * i, 201 + 2 * i, 1, true));
    expect(linesBend({ pairs: [...apart, ...rigid], line: lineEach(300) }, 4, 20)).toBe(false);
    const again = Array.from({ length: 30 }, (_, i) => pair(2 * i, 2 * i + 1, 0.8, false));
    expect(linesBend({ pairs: again, line: Int32Array.from({ length: 60 }, (_, i) => i % 2) }, 4, 20)).toBe(
      false,
    );
  });
});

test('near points are those that comparing all points finds', () => {
  const random = createRandom(7);
  const x = Array.from({ length: 150 }, () => 100 * random.uniform());
  const y = Array.from({ length: 150 }, () => 60 * random.uniform());
  const found = nearPoints(x, y, 8).map(({ i, j }) => `${i} ${j}`);
  const expected: string[] = [];
  for (let j = 0; j < 150; j++)
    for (let i = 0; i < j; i++) if (Math.hypot(x[i] - x[j], y[i] - y[j]) <= 8) expected.push(`${i} ${j}`);
  expect(found.sort()).toEqual(expected.sort());
});
