import { describe, expect, test } from 'vitest';
import { expectWithin } from '@/tests/helpers/expect-within';
import { BRIGHTNESS_UNTOLD } from '@/tracking/linking/brightness-statistics';
import { flowAt } from '@/tracking/linking/flow-field';
import { linkPass } from '@/tracking/linking/link-pass';
import { firstStatistics, measureStatistics } from '@/tracking/linking/motion-statistics';
import { createSpotTable } from '@/tracking/linking/spot-table';
import { createRandom, type Random } from '@/tracking/random';
import { createSpotSink } from '@/tracking/spots';
import type { Spots } from '@/tracking/types';

const LIMITS = { width: 260, height: 260, frames: 30, longestStepPx: 10, mayVanishFrames: 0 };
const ERROR_PX = 0.05;

interface Crowd {
  spots: Spots;
  /** The spot before each in truth. */
  before: Int32Array;
}

/** Tracers all over the image that start with a velocity and change it by `jitter` (variance, px^2) a frame. */
function crowd(kinds: { tracers: number; vx: number; spread: number; jitter: number }[]): Crowd {
  const random = createRandom(17);
  const movers = kinds.flatMap(({ tracers, vx, spread, jitter }) =>
    Array.from({ length: tracers }, () => ({
      x: LIMITS.width * random.uniform(),
      y: LIMITS.height * random.uniform(),
      vx: vx + spread * random.normal(),
      vy: spread * random.normal(),
      kick: Math.sqrt(jitter),
    })),
  );
  const sink = createSpotSink();
  const before: number[] = [];
  const last = new Int32Array(movers.length).fill(-1);
  for (let frame = 0; frame < LIMITS.frames; frame++) {
    const seen = movers.map((mover, i) => ({ i, x: noisy(random, mover.x), y: noisy(random, mover.y) }));
    seen.sort((a, b) => a.y - b.y || a.x - b.x);
    for (const { i, x, y } of seen) {
      if (x < 0 || y < 0 || x >= LIMITS.width || y >= LIMITS.height) continue;
      before.push(last[i] >= 0 && sink.count > 0 ? last[i] : -1);
      last[i] = sink.count;
      sink.push(frame, x, y, ERROR_PX, ERROR_PX, 400, 20, 0);
    }
    for (const mover of movers) {
      const [kickX, kickY] = [mover.kick * random.normal(), mover.kick * random.normal()];
      // Velocity changes evenly from one frame to the next. Whoever leaves comes in on the other side, as another tracer.
      mover.x += mover.vx + 0.5 * kickX;
      mover.y += mover.vy + 0.5 * kickY;
      mover.vx += kickX;
      mover.vy += kickY;
    }
    movers.forEach((mover, i) => {
      const inside = mover.x >= 0 && mover.y >= 0 && mover.x < LIMITS.width && mover.y < LIMITS.height;
      if (inside) return;
      mover.x = (mover.x + LIMITS.width) % LIMITS.width;
      mover.y = (mover.y + LIMITS.height) % LIMITS.height;
      last[i] = -1;
    });
  }
  const spots = sink.spots();
  return {
    spots,
    before: Int32Array.from(before, (b, s) => (b >= 0 && spots.frame[s] - spots.frame[b] === 1 ? b : -1)),
  };
}

const noisy = (random: Random, value: number) => value + ERROR_PX * random.normal();

describe('the motion of tracers', () => {
  const glide = { tracers: 120, vx: 3, spread: 0.2, jitter: 0.004 };
  const jerk = { tracers: 80, vx: 0, spread: 0.2, jitter: 0.09 };

  test('is told apart into two populations with their flow, share and process noise', () => {
    const { spots, before } = crowd([glide, jerk]);
    const first = firstStatistics(spots, LIMITS);
    const { populations } = measureStatistics(spots, before, LIMITS, first, 2);
    expect(populations).toHaveLength(2);
    const [fast, slow] = populations;
    const flow = new Float64Array(2);
    flowAt(fast.flow, 130, 130, flow);
    expectWithin(flow[0], 3, { abs: 0.15 });
    expectWithin(flow[1], 0, { abs: 0.15 });
    flowAt(slow.flow, 130, 130, flow);
    expectWithin(flow[0], 0, { abs: 0.3 });
    // Those that leave are replaced, so the faster ones have more, shorter tracks: shares are of pieces.
    expectWithin(fast.share, 0.6, { abs: 0.15 });
    expectWithin(fast.jitter, glide.jitter, { rel: 0.4 });
    expectWithin(slow.jitter, jerk.jitter, { rel: 0.4 });
  });

  test('stays that of one population where all tracers move alike', () => {
    const { spots, before } = crowd([{ ...glide, tracers: 200 }]);
    const { populations } = measureStatistics(spots, before, LIMITS, firstStatistics(spots, LIMITS), 2);
    expect(populations).toHaveLength(1);
    expectWithin(populations[0].flow.vx[0], 3, { abs: 0.1 });
  });

  test('links a crowd with fewer mistakes when its two populations are known', () => {
    const { spots, before } = crowd([
      { ...glide, tracers: 500 },
      { ...jerk, tracers: 500, jitter: 0.3 },
    ]);
    const table = createSpotTable(spots, BRIGHTNESS_UNTOLD);
    const first = firstStatistics(spots, LIMITS);
    const mistakes = (most: 1 | 2) => {
      const motion = measureStatistics(spots, before, LIMITS, first, most);
      expect(motion.populations).toHaveLength(most);
      const linked = linkPass(table, LIMITS, motion, BRIGHTNESS_UNTOLD);
      return linked.reduce((sum, b, s) => sum + (b >= 0 && b !== before[s] ? 1 : 0), 0);
    };
    expect(mistakes(1)).toBeGreaterThan(100);
    expect(mistakes(2)).toBeLessThan(0.8 * mistakes(1));
  });
});
