import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { expectWithin } from '@/tests/helpers/expect-within';
import { clearSpots, detectIn, evenModel, rearranged, spottedFrame, type PlainSpot } from './small-frames';

// The frame in another pose shows the same spots in that pose. What differs is the order of sums in single
// precision and, where a fit stops, less than its last step: a hundredth of a standard error.
const SAME = { errors: 0.01, rel: 5e-3 };
// The light level is measured from what is in view, and with it the background moves a little.
const ANOTHER_VIEW = { errors: 0.1, rel: 0.01 };

const RUNS = { numRuns: 25, seed: 7 };
const seeds = fc.nat(1_000_000);

function expectSameSpots(found: PlainSpot[], expected: PlainSpot[], { errors, rel } = SAME): void {
  expect(found.length).toBe(expected.length);
  for (const spot of expected) {
    const near = found.reduce((best, other) =>
      Math.hypot(other.x - spot.x, other.y - spot.y) < Math.hypot(best.x - spot.x, best.y - spot.y)
        ? other
        : best,
    );
    expectWithin(near.x, spot.x, { abs: errors * spot.sx });
    expectWithin(near.y, spot.y, { abs: errors * spot.sy });
    expectWithin(near.sx, spot.sx, { rel });
    expectWithin(near.sy, spot.sy, { rel });
    expectWithin(near.brightness, spot.brightness, { rel });
  }
}

describe('spots', () => {
  const WIDTH = 52;
  const HEIGHT = 44;

  test('are found in most frames of these tests', () => {
    const counts = [1, 2, 3, 4, 5].map(
      (seed) => clearSpots(detectIn([spottedFrame(WIDTH, HEIGHT, seed)])).length,
    );
    for (const count of counts) expect(count).toBeGreaterThan(4);
  });

  test('of a transposed frame are the transposed spots', () => {
    fc.assert(
      fc.property(seeds, (seed) => {
        const frame = spottedFrame(WIDTH, HEIGHT, seed);
        const turned = rearranged(frame, HEIGHT, WIDTH, (x, y) => [y, x]);
        const expected = clearSpots(detectIn([frame])).map(({ x, y, sx, sy, brightness }) => ({ x: y, y: x, sx: sy, sy: sx, brightness })); // prettier-ignore
        expectSameSpots(clearSpots(detectIn([turned])), expected);
      }),
      RUNS,
    );
  });

  test('of a mirrored frame are the mirrored spots, left to right and upside down', () => {
    fc.assert(
      fc.property(seeds, fc.boolean(), fc.boolean(), (seed, acrossX, acrossY) => {
        const frame = spottedFrame(WIDTH, HEIGHT, seed);
        const mirrorX = (x: number) => (acrossX ? WIDTH - 1 - x : x);
        const mirrorY = (y: number) => (acrossY ? HEIGHT - 1 - y : y);
        const mirrored = rearranged(frame, WIDTH, HEIGHT, (x, y) => [mirrorX(x), mirrorY(y)]);
        const expected = clearSpots(detectIn([frame])).map((spot) => ({
          ...spot,
          x: mirrorX(spot.x),
          y: mirrorY(spot.y),
        }));
        expectSameSpots(clearSpots(detectIn([mirrored])), expected);
      }),
      RUNS,
    );
  });

  test('move by whole pixels with what is in view', () => {
    const most = 12;
    fc.assert(
      fc.property(seeds, fc.nat(most), fc.nat(most), (seed, left, top) => {
        const wide = spottedFrame(WIDTH + most, HEIGHT + most, seed);
        const view = (dx: number, dy: number) =>
          clearSpots(detectIn([rearranged(wide, WIDTH, HEIGHT, (x, y) => [x + dx, y + dy])])).map((spot) => ({
            ...spot,
            x: spot.x + dx,
            y: spot.y + dy,
          }));
        // What is near the border of either view is cut differently.
        const border = 8;
        const inBoth = ({ x, y }: PlainSpot) =>
          x > left + border && y > top + border && x < WIDTH - border && y < HEIGHT - border;
        expectSameSpots(view(left, top).filter(inBoth), view(0, 0).filter(inBoth), ANOTHER_VIEW);
      }),
      RUNS,
    );
  });

  test('have the same electrons whatever a count stands for', () => {
    fc.assert(
      fc.property(
        seeds,
        fc.constantFrom(0.25, 0.5, 2, 16),
        fc.integer({ min: -64, max: 512 }),
        (seed, scale, offset) => {
          const frame = spottedFrame(WIDTH, HEIGHT, seed);
          const model = evenModel(WIDTH, HEIGHT);
          const scaled = { ...frame, counts: frame.counts.map((count) => offset + scale * (count - 100)) };
          const scaledModel = {
            ...model,
            gainCountsPerE: scale * model.gainCountsPerE,
            offsetCounts: offset,
          };
          // Powers of two and whole offsets are exact in single precision.
          expect(detectIn([scaled], scaledModel)).toEqual(detectIn([frame], model));
        },
      ),
      RUNS,
    );
  });

  test('of a frame do not depend on the order in which frames come', () => {
    fc.assert(
      fc.property(seeds, (seed) => {
        const frames = [0, 1, 2].map((f) => spottedFrame(WIDTH, HEIGHT, seed + f));
        const forward = detectIn(frames);
        const backward = detectIn([...frames].reverse());
        for (const f of [0, 1, 2]) {
          const of = (frame: number, xs: Float32Array, at: Uint32Array) =>
            [...xs].filter((_, i) => at[i] === frame);
          expect(of(2 - f, backward.xPx, backward.frame)).toEqual(of(f, forward.xPx, forward.frame));
          expect(of(2 - f, backward.syPx, backward.frame)).toEqual(of(f, forward.syPx, forward.frame));
        }
      }),
      RUNS,
    );
  });
});
