import { describe, expect, it } from 'vitest';
import { clippedDeviation } from '@/tracking/image-quality/clipped-deviation';
import { transformSquare } from '@/tracking/image-quality/fft';
import { medianPicture } from '@/tracking/image-quality/median-picture';
import { createQualityMeter } from '@/tracking/image-quality/quality-meter';
import { spreadFrames } from '@/tracking/image-quality/spread-frames';
import { createRandom } from '@/tracking/random';
import { expectWithin } from '../../helpers/expect-within';

const SIZE = 96;

/** Marks on a window: some hundred soft dots at places given once, moved as a whole by (x, y). */
function windowPicture(seed: number) {
  const random = createRandom(seed);
  const dots = Array.from({ length: 150 }, () => [
    random.uniform() * SIZE,
    random.uniform() * SIZE,
    20 + 40 * random.uniform(),
  ]);
  return (x: number, y: number, scale = 1) => {
    const counts = new Float32Array((SIZE * scale) ** 2).fill(100);
    for (const [dotX, dotY, height] of dots) {
      const [cx, cy, sigma] = [dotX! * scale + x, dotY! * scale + y, 2 * scale];
      for (let v = Math.max(0, Math.floor(cy - 4 * sigma)); v < Math.min(SIZE * scale, cy + 4 * sigma); v++) {
        for (
          let u = Math.max(0, Math.floor(cx - 4 * sigma));
          u < Math.min(SIZE * scale, cx + 4 * sigma);
          u++
        ) {
          const at = v * SIZE * scale + u;
          counts[at] = counts[at]! + height! * Math.exp(-((u - cx) ** 2 + (v - cy) ** 2) / (2 * sigma ** 2));
        }
      }
    }
    return counts;
  };
}

function measured(frames: number, pictureAt: (frame: number) => Float32Array, maxCount = 65535, side = SIZE) {
  const meter = createQualityMeter({ width: side, height: side, frames, maxCount });
  for (let frame = 0; frame < frames; frame++) meter.add(frame, pictureAt(frame));
  return meter.result();
}

const whole = (counts: Float32Array) => counts.map(Math.round);
const noisy = (deviation: number, seed = 5) => {
  const random = createRandom(seed);
  return (counts: Float32Array) => whole(counts.map((value) => value + deviation * random.normal()));
};

describe('noise of an image', () => {
  it.each([0.7, 2, 9])('of %s counts is found, whatever stands still', (deviation) => {
    const picture = windowPicture(1)(0, 0);
    const add = noisy(deviation);
    const { noiseCounts } = measured(20, () => add(picture));
    // Rounding to whole counts adds 1/12 to the variance (W. F. Sheppard, 1898).
    expectWithin(noiseCounts!, Math.sqrt(deviation ** 2 + 1 / 12), { rel: 0.02 });
  });

  it('is not raised much by tracers that move', () => {
    const add = noisy(4);
    const { noiseCounts } = measured(20, (frame) => add(spots(frame)));
    expectWithin(noiseCounts!, Math.sqrt(16 + 1 / 12), { rel: 0.06 });
  });

  it('is unknown for a single frame', () => {
    expect(measured(1, () => windowPicture(1)(0, 0)).noiseCounts).toBeNull();
  });

  it('of a normal sample cut at 3 deviations is made whole again', () => {
    const random = createRandom(2);
    const sample = Float32Array.from({ length: 40_000 }, () => 3 * random.normal());
    expectWithin(clippedDeviation(sample), 3, { rel: 0.02 });
    const spoilt = sample.map((value, i) => (i % 100 === 0 ? 500 : value));
    expectWithin(clippedDeviation(spoilt), 3, { rel: 0.02 });
    expect(clippedDeviation(new Float32Array(10))).toBe(0);
  });
});

/** Forty bright tracers that flow to the right, 3 px per frame, and leave. */
function spots(frame: number): Float32Array {
  const counts = new Float32Array(SIZE * SIZE).fill(50);
  for (let k = 0; k < 40; k++) {
    const [x, y] = [(k * 37 + 3 * frame) % 400, (k * 61) % SIZE];
    if (x >= SIZE - 1) continue;
    for (const at of [y * SIZE + x, y * SIZE + x + 1]) counts[at] = counts[at]! + 300;
  }
  return counts;
}

describe('drift of a picture', () => {
  it.each([
    { x: 0, y: 0 },
    { x: 3.5, y: -1.25 },
    { x: -6, y: 8 },
  ])('to ($x, $y) px at the end is found in noise', ({ x, y }) => {
    const picture = windowPicture(7);
    const add = noisy(5);
    const frames = 90;
    const part = (frame: number) => Math.floor((frame * 9) / frames) / 8;
    const { drift, driftPx } = measured(frames, (frame) => add(picture(x * part(frame), y * part(frame))));
    expect(drift.frames).toHaveLength(9);
    for (let i = 0; i < 9; i++) {
      // A quarter of a pixel is what the page shows; medians and edges cost a little of what is possible.
      expectWithin(drift.xPx[i]!, (x * i) / 8, { abs: 0.25 });
      expectWithin(drift.yPx[i]!, (y * i) / 8, { abs: 0.25 });
    }
    expectWithin(driftPx!, Math.hypot(x, y), { abs: 0.3 });
  });

  it('is given in pixels of the frame when frames are large', () => {
    const scale = 6;
    const picture = windowPicture(3);
    const pictures = [picture(0, 0, scale), picture(10, -4, scale)];
    const { drift } = measured(18, (frame) => pictures[frame < 9 ? 0 : 1]!, 65535, SIZE * scale);
    expectWithin(drift.xPx[1]!, 10, { abs: 0.5 });
    expectWithin(drift.yPx[1]!, -4, { abs: 0.5 });
  });

  it('is not the flow of tracers', () => {
    const add = noisy(4);
    const picture = windowPicture(9)(0, 0);
    const flowing = measured(90, (frame) => add(spots(frame).map((value, i) => value + picture[i]!)));
    expectWithin(flowing.driftPx!, 0, { abs: 0.25 });
    expect(measured(90, (frame) => add(spots(frame))).driftPx).toBeNull();
  });

  it('is unknown when nothing stays in place, and in frames too small to tell', () => {
    const add = noisy(20);
    expect(measured(90, () => add(new Float32Array(SIZE * SIZE).fill(100))).driftPx).toBeNull();
    expect(measured(30, () => new Float32Array(64).fill(1), 255, 8).drift.frames).toEqual([]);
  });
});

describe('brightness, saturation and display range', () => {
  it('brightness is the mean of each frame, thinned to 200 with both ends', () => {
    const { brightness } = measured(501, (frame) => new Float32Array(SIZE * SIZE).fill(frame));
    expect(brightness.frames).toHaveLength(200);
    expect([brightness.frames[0], brightness.frames.at(-1)]).toEqual([0, 500]);
    expect(brightness.meanCounts).toEqual(brightness.frames);
  });

  it.each([
    { what: 'the largest count of the samples', maxCount: 255, level: 255, share: 1 / SIZE },
    { what: 'the ceiling of a 12-bit camera in 16 bits', maxCount: 65535, level: 4095, share: 1 / SIZE },
    { what: 'no ceiling', maxCount: 65535, level: 4000, share: 0 },
  ])('pixels at $what count as saturated', ({ maxCount, level, share }) => {
    const frame = new Float32Array(SIZE * SIZE).fill(7).fill(level, 0, SIZE);
    const { saturatedShare, saturationCounts } = measured(5, () => frame, maxCount);
    expectWithin(saturatedShare, share, { abs: 1e-12 });
    expect(saturationCounts).toBe(share > 0 ? level : maxCount);
  });

  it('floating point samples have no ceiling', () => {
    expect(measured(2, () => new Float32Array(SIZE * SIZE).fill(4095), Infinity)).toMatchObject({
      saturationCounts: null,
      saturatedShare: 0,
    });
  });

  it('the display range leaves a flat picture some contrast, and shows tracers white', () => {
    expect(measured(2, () => new Float32Array(SIZE * SIZE).fill(9)).contrast).toEqual({ low: 9, high: 10 });
    const { contrast, range } = measured(20, spots);
    expect(contrast.low).toBe(50);
    expect(contrast.high).toBeGreaterThan(300);
    expect(range).toMatchObject({ lowestCounts: 50 });
  });
});

describe('parts of the measurement', () => {
  it('frames are spread evenly with both ends', () => {
    expect(spreadFrames(3, 8)).toEqual([0, 1, 2]);
    expect(spreadFrames(101, 5)).toEqual([0, 25, 50, 75, 100]);
    expect(spreadFrames(9, 1)).toEqual([0]);
    expect(spreadFrames(0, 4)).toEqual([]);
  });

  it('the median picture is that of a plain sort', () => {
    const random = createRandom(4);
    const pictures = Array.from({ length: 9 }, () =>
      Float64Array.from({ length: 50 }, () => random.integer(6)),
    );
    const sorted = Array.from({ length: 50 }, (_, i) => pictures.map((p) => p[i]!).sort((a, b) => a - b)[4]);
    expect([...medianPicture(pictures)]).toEqual(sorted);
  });

  it('the transform is the sum that defines it, and its own inverse', () => {
    const n = 8;
    const random = createRandom(6);
    const values = Float64Array.from({ length: n * n }, () => random.normal());
    const [re, im] = [values.slice(), new Float64Array(n * n)];
    transformSquare(re, im, n, -1);
    for (let v = 0; v < n; v++) {
      for (let u = 0; u < n; u++) {
        let [sumRe, sumIm] = [0, 0];
        values.forEach((value, i) => {
          const angle = (-2 * Math.PI * (u * (i % n) + v * Math.floor(i / n))) / n;
          sumRe += value * Math.cos(angle);
          sumIm += value * Math.sin(angle);
        });
        expectWithin(re[v * n + u]!, sumRe, { abs: 1e-10 });
        expectWithin(im[v * n + u]!, sumIm, { abs: 1e-10 });
      }
    }
    transformSquare(re, im, n, 1);
    re.forEach((value, i) => expectWithin(value / (n * n), values[i]!, { abs: 1e-12 }));
  });
});
