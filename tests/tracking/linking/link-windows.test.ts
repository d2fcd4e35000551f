import { expect, test } from 'vitest';
import { linkInWindows } from '@/tracking/linking/link-windows';
import { BRIGHTNESS_UNTOLD } from '@/tracking/linking/brightness-statistics';
import { firstStatistics } from '@/tracking/linking/motion-statistics';
import { createRandom } from '@/tracking/random';
import { heldSpots } from '@/tracking/spot-source';
import { createSpotSink } from '@/tracking/spots';
import type { Spots } from '@/tracking/types';

const LIMITS = { width: 200, height: 200, frames: 300, longestStepPx: 6, mayVanishFrames: 2 };

/** Tracers that wander about for the whole recording, now and then missed. */
function wanderers(tracers: number): Spots {
  const random = createRandom(12);
  const movers = Array.from({ length: tracers }, () => ({
    x: 200 * random.uniform(),
    y: 200 * random.uniform(),
  }));
  const sink = createSpotSink();
  for (let f = 0; f < LIMITS.frames; f++) {
    for (const mover of movers) {
      mover.x = Math.min(199, Math.max(0, mover.x + 0.4 * random.normal()));
      mover.y = Math.min(199, Math.max(0, mover.y + 0.4 * random.normal()));
    }
    const seen = movers.filter(() => random.uniform() > 0.02).sort((a, b) => a.y - b.y || a.x - b.x);
    for (const { x, y } of seen) sink.push(f, x, y, 0.1, 0.1, 400, 20, 0);
  }
  return sink.spots();
}

const link = (spots: Spots, windowFrames: number) => {
  const motion = firstStatistics(spots, LIMITS);
  const known = { motion, brightness: BRIGHTNESS_UNTOLD, spotSizePx: 1.2, quick: false };
  return linkInWindows(heldSpots(spots, LIMITS.frames), LIMITS, known, windowFrames, 40);
};

test('a recording linked some frames at a time has the links that it has as a whole, but for a few in a crowd', () => {
  const spots = wanderers(60);
  const whole = link(spots, 1000);
  const windows = link(spots, 64);
  let same = 0;
  for (let s = 0; s < spots.count; s++) if (windows.before[s] === whole.before[s]) same++;
  // Tracers that meet where a window begins may be decided otherwise. Common practice, no source.
  expect(same / spots.count).toBeGreaterThan(0.998);
});

test('links of windows are one to one, both ways alike, and lead across the borders of windows', () => {
  const spots = wanderers(120);
  const { before, after } = link(spots, 50);
  let across = 0;
  let broken = 0;
  for (let s = 0; s < spots.count; s++) {
    const b = before[s];
    if (after[s] >= 0 && before[after[s]] !== s) broken++;
    if (b < 0) continue;
    if (after[b] !== s || spots.frame[b] >= spots.frame[s]) broken++;
    if (Math.floor(spots.frame[b] / 50) < Math.floor(spots.frame[s] / 50)) across++;
  }
  expect(broken).toBe(0);
  // 5 borders, 120 tracers, hardly one of which ends there.
  expect(across).toBeGreaterThan(0.95 * 5 * 120);
});
