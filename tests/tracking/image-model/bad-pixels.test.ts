import { describe, expect, test } from 'vitest';
import { createSpotPainter } from '@/tracking/detection/spot-painter';
import { measureImage } from '@/tracking/measure-image';
import { createRandom } from '@/tracking/random';
import type { Frame } from '@/tracking/types';

const SIDE = 96;
const FRAMES = 24;

/** Noise of 8 electrons at 2 counts each; `change` may alter a frame's counts. */
function framesWith(change: (counts: Float32Array, frame: number) => void, spots: number[][] = []): Frame[] {
  const random = createRandom(21);
  const painter = createSpotPainter(SIDE, SIDE, 0.7, 4);
  return Array.from({ length: FRAMES }, (_, frame) => {
    const electrons = new Float32Array(SIDE * SIDE).fill(8);
    for (const [x, y, n] of spots) painter.paint(electrons, x, y, n);
    const counts = electrons.map((e) => Math.round(100 + 2 * (random.poisson(e) + 1.5 * random.normal())));
    change(counts, frame);
    return { width: SIDE, height: SIDE, counts };
  });
}

function badOf(frames: Frame[]): number[] {
  const { badPixels } = measureImage(frames, { gain: 2 });
  return Array.from(badPixels.keys()).filter((i) => badPixels[i] === 1);
}

describe('bad pixels', () => {
  test('are hot, dead, stuck and blinking ones, at corners and side by side too', () => {
    const hot = 40 * SIDE + 30;
    const dead = 70 * SIDE + 12;
    const stuck = 20 * SIDE + 80;
    const blinking = 60 * SIDE + 60;
    const corner = SIDE * SIDE - 1;
    const found = badOf(
      framesWith((counts, frame) => {
        counts[0] += 90;
        counts[corner] += 90;
        counts[hot] += 60;
        counts[dead] = 0;
        counts[stuck] = 117;
        // On in every sixth frame: 16 noise widths.
        if (frame % 6 === 2) counts[blinking] += 100;
      }),
    );
    expect(found).toEqual([0, stuck, hot, blinking, dead, corner].sort((a, b) => a - b));
  });

  test('are not the pixels of narrow tracers that stand still, however bright', () => {
    const spots = [
      [20, 20, 200],
      [50.5, 20, 500],
      [70.5, 50.5, 2000],
      [30, 70, 20_000],
    ];
    expect(badOf(framesWith(() => {}, spots))).toEqual([]);
  });

  test('are not those of noise, in as few frames as can tell', () => {
    for (const frames of [2, 5, 8, 12]) {
      expect(badOf(framesWith(() => {}).slice(0, frames)), `${frames} frames`).toEqual([]);
    }
  });

  test('may lack a number now and then without being bad, but not always', () => {
    const always = 33 * SIDE + 44;
    const found = badOf(
      framesWith((counts, frame) => {
        counts[always] = Number.NaN;
        for (let i = frame % 7; i < counts.length; i += 97) counts[i] = Number.NaN;
      }),
    );
    expect(found).toEqual([always]);
  });

  test('are none when they would be a sixteenth of the image: then the recording itself is like that', () => {
    expect(badOf(framesWith((counts) => counts.fill(0, 0, SIDE * 8)))).toEqual([]);
  });
});
