import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { axisAround, logGrid, shareOnLogAxis } from '@/lib/charts/log-axis';
import { partWidths } from '@/components/ui/population-thread';
import { tiePath } from '@/components/ui/tie-path';
import { analysisStages, filledBeads, placeBeads } from '@/components/ui/thread-beads';
import { frameStep } from '@/components/ui/time-line';
import { frameTicks, frameToPx, pxToFrame, timeLineMarks } from '@/components/ui/time-line-marks';
import { expectWithin } from '../../helpers/expect-within';

describe('progress thread', () => {
  it('fills the last bead of a stage only when the stage is finished', () => {
    fc.assert(
      fc.property(
        fc.double({ min: 0, max: 1, noNaN: true }),
        fc.integer({ min: 1, max: 20 }),
        (share, beads) => {
          const filled = filledBeads(share, beads);
          expect(filled).toBeGreaterThanOrEqual(0);
          expect(filled === beads).toBe(share === 1);
          expect(filled === 0).toBe(share === 0);
        },
      ),
    );
  });

  it('never runs backwards as work goes on', () => {
    let before = 0;
    for (let step = 0; step <= 1000; step += 1) {
      const now = filledBeads(step / 1000, 10);
      expect(now).toBeGreaterThanOrEqual(before);
      before = now;
    }
  });

  // Counts from the product's look: frames 6, detection 10, tracks 10, populations 4, estimates 3.
  it('has every stage before the current one full and every later one empty', () => {
    const stages = analysisStages({ stage: 'tracks', share: 0.65 });
    expect(stages).toEqual([
      { beads: 6, filled: 6 },
      { beads: 10, filled: 10 },
      { beads: 10, filled: 6.5 },
      { beads: 4, filled: 0 },
      { beads: 3, filled: 0 },
    ]);
    expect(analysisStages('done').every(({ beads, filled }) => beads === filled)).toBe(true);
    expect(analysisStages('waiting').every(({ filled }) => filled === 0)).toBe(true);
  });

  it('parts stages by a knot and inks the thread up to the last bead begun', () => {
    const { beads, doneToPx } = placeBeads([
      { beads: 2, filled: 2 },
      { beads: 2, filled: 0.5 },
    ]);
    // Pitch 10 px, 9 px more between stages.
    expect(beads.map(({ x }) => x)).toEqual([5, 15, 34, 44]);
    expect(beads.map(({ fill }) => fill)).toEqual(['full', 'full', 'half', 'empty']);
    expect(doneToPx).toBe(34);
  });
});

describe('interval thread', () => {
  it('places equal ratios at equal distances and keeps what is outside at the ends', () => {
    const axis = { min: 1e7, max: 1e9 };
    expectWithin(shareOnLogAxis(1e8, axis), 0.5, { abs: 1e-12 });
    expect(shareOnLogAxis(1e3, axis)).toBe(0);
    expect(shareOnLogAxis(1e12, axis)).toBe(1);
    expect(shareOnLogAxis(0, axis)).toBeNaN();
  });

  it('marks 1 and 3 of each decade', () => {
    expect(logGrid({ min: 1e7, max: 1e9 })).toEqual([1e7, 3e7, 1e8, 3e8, 1e9]);
  });

  it('chooses an axis that holds every interval', () => {
    const interval = fc
      .tuple(fc.double({ min: -10, max: 12, noNaN: true }), fc.double({ min: 0.01, max: 2, noNaN: true }))
      .map(([power, width]) => ({
        value: 10 ** power,
        low: 10 ** (power - width),
        high: 10 ** (power + width),
      }));
    fc.assert(
      fc.property(fc.array(interval, { minLength: 1, maxLength: 6 }), (intervals) => {
        const axis = axisAround(intervals)!;
        for (const { low, high } of intervals) {
          expect(axis.min).toBeLessThanOrEqual(low);
          expect(axis.max).toBeGreaterThanOrEqual(high);
        }
      }),
    );
    expect(axisAround([{ value: 0, low: 0, high: 0 }])).toBeNull();
  });
});

describe('time line', () => {
  it('finds the frame under a bead again', () => {
    for (const frame of [0, 1, 4711, 19_999]) {
      expect(pxToFrame(frameToPx(frame, 20_000, 832), 20_000, 832)).toBe(frame);
    }
    expect(pxToFrame(-50, 20_000, 832)).toBe(0);
    expect(pxToFrame(5000, 20_000, 832)).toBe(19_999);
    expect(frameToPx(0, 1, 832)).toBe(0);
  });

  it('joins beads closer than 8 px, counts them all and shows the strongest kind', () => {
    const marks = timeLineMarks(
      [
        { frame: 120, kind: 'candidate' },
        { frame: 100, kind: 'rejected' },
        { frame: 500, kind: 'confirmed' },
      ],
      1001,
      200,
    );
    expect(marks.map(({ kind, count }) => [kind, count])).toEqual([
      ['candidate', 2],
      ['confirmed', 1],
    ]);
  });

  it('moves one frame by an arrow, ten with shift, and not at all for other keys', () => {
    expect(frameStep('ArrowRight', false, 2000)).toBe(1);
    expect(frameStep('ArrowLeft', true, 2000)).toBe(-10);
    expect(frameStep('PageUp', false, 2000)).toBe(100);
    expect(frameStep('a', false, 2000)).toBeNull();
  });

  it('ticks at round frames from 0 on', () => {
    expect(frameTicks(20_000, 4)).toEqual([0, 5000, 10_000, 15_000]);
    expect(frameTicks(1, 4)).toEqual([0]);
  });
});

describe('populations', () => {
  it('gives every part its least width and all of them the whole', () => {
    const counts = fc.array(fc.integer({ min: 0, max: 1e6 }), { minLength: 3, maxLength: 3 });
    fc.assert(
      fc.property(counts, (numbers) => {
        const widths = partWidths(numbers);
        expectWithin(
          widths.reduce((a, b) => a + b),
          100,
          { abs: 1e-6 },
        );
        for (const width of widths) expect(width).toBeGreaterThanOrEqual(16 - 1e-9);
      }),
    );
  });
});

describe('tie', () => {
  it('runs from the row to the note, bent or straight', () => {
    expect(tiePath({ fromX: 10, fromY: 100, toX: 50, toY: 20 })).toBe(
      'M10 100H24Q32 100 32 92V28Q32 20 40 20H50',
    );
    expect(tiePath({ fromX: 10, fromY: 20, toX: 50, toY: 24 })).toBe('M10 20L50 24');
  });
});
