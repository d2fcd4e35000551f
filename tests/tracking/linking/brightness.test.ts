import { describe, expect, test } from 'vitest';
import { expectWithin } from '@/tests/helpers/expect-within';
import { linkSpots } from '@/tracking/link';
import { measureBrightness } from '@/tracking/linking/brightness-statistics';
import { createRandom, type Random } from '@/tracking/random';
import { createSpotSink } from '@/tracking/spots';
import type { Spots } from '@/tracking/types';

const SIZE = { width: 200, height: 200, frames: 40 };
const RECIPE = { longestStepPx: 8, mayVanishFrames: 2, shortestTrackFrames: 3 };
const TRACERS = 120;
const CROWD = 400;

/** Crowded tracers whose brightness is as told; `before` links each spot to the right one. */
function crowd(
  light: (random: Random, tracer: number, frame: number) => number,
  tracers = TRACERS,
  errorPx = 0.2,
): {
  spots: Spots;
  before: Int32Array;
} {
  const paths = createRandom(3);
  const random = createRandom(4);
  const start = Array.from({ length: tracers }, () => ({
    x: 200 * paths.uniform(),
    y: 200 * paths.uniform(),
    vx: paths.normal(),
    vy: paths.normal(),
  }));
  const sink = createSpotSink();
  const before: number[] = [];
  const last = new Int32Array(tracers).fill(-1);
  for (let frame = 0; frame < SIZE.frames; frame++) {
    const seen = start
      .map(({ x, y, vx, vy }, tracer) => ({
        tracer,
        x: x + frame * vx + errorPx * paths.normal(),
        y: y + frame * vy + errorPx * paths.normal(),
      }))
      .filter(({ x, y }) => x >= 0 && y >= 0 && x < 200 && y < 200)
      .sort((a, b) => a.y - b.y || a.x - b.x);
    for (const { tracer, x, y } of seen) {
      before.push(last[tracer]);
      last[tracer] = sink.count;
      sink.push(frame, x, y, errorPx, errorPx, light(random, tracer, frame), 20, 0);
    }
  }
  return { spots: sink.spots(), before: Int32Array.from(before) };
}

describe('what brightness tells', () => {
  test('is measured: variance between tracers, error of one spot, persistence', () => {
    const draw = createRandom(9);
    const own = Array.from({ length: TRACERS }, () => 6 + 0.5 * draw.normal());
    const { spots, before } = crowd((random, tracer) => Math.exp(own[tracer] + 0.1 * random.normal()));
    const told = measureBrightness(spots, before);
    // 120 tracers give a variance from their median to about 20 %.
    expectWithin(told.variance, 0.25, { rel: 0.4 });
    expectWithin(told.mean, 6, { abs: 0.2 });
    expect(told.persistence).toBeGreaterThan(0.99);
    // An SNR of 20 and exp(6) electrons let expect a variance of 1 / 20^2 + exp(-6).
    expectWithin(told.errorScale * (1 / 400 + Math.exp(-6)), 0.01, { rel: 0.2 });
  });

  test('is nothing where all tracers are alike or where brightness does not last', () => {
    const alike = crowd((random) => 400 * Math.exp(0.1 * random.normal()));
    expect(measureBrightness(alike.spots, alike.before).variance).toBe(0);
    const flicker = crowd((random) => 400 * Math.exp(0.8 * random.normal()));
    expect(measureBrightness(flicker.spots, flicker.before).variance).toBe(0);
  });

  test('changes no link then', () => {
    const constant = crowd(() => 400).spots;
    const noisy = crowd((random) => 400 * Math.exp(0.1 * random.normal())).spots;
    const a = linkSpots(constant, SIZE, RECIPE);
    const b = linkSpots(noisy, SIZE, RECIPE);
    expect(b.xPx).toEqual(a.xPx);
    expect(b.yPx).toEqual(a.yPx);
    expect(b.start).toEqual(a.start);
  });

  test('keeps more identities in a crowd than equal brightness does', () => {
    const draw = createRandom(9);
    const own = Array.from({ length: CROWD }, () => 400 * Math.exp(0.5 * draw.normal()));
    const light = (random: Random, tracer: number) => own[tracer] * Math.exp(0.05 * random.normal());
    const { spots, before } = crowd(light, CROWD, 0.7);
    const dull = { ...spots, brightness: new Float32Array(spots.count).fill(400) };
    const right = new Set<string>();
    before.forEach((b, s) => {
      if (b >= 0) right.add(`${spots.xPx[b]} ${spots.yPx[b]} ${spots.xPx[s]} ${spots.yPx[s]}`);
    });
    const wrong = (of: Spots) => {
      const { count, start, xPx, yPx } = linkSpots(of, SIZE, { ...RECIPE, mayVanishFrames: 0 });
      let links = 0;
      for (let i = 0; i < count; i++) {
        for (let p = start[i] + 1; p < start[i + 1]; p++) {
          if (!right.has(`${xPx[p - 1]} ${yPx[p - 1]} ${xPx[p]} ${yPx[p]}`)) links++;
        }
      }
      return links;
    };
    expect(wrong(dull)).toBeGreaterThan(10);
    expect(wrong(spots)).toBeLessThan(0.5 * wrong(dull));
  });
});
