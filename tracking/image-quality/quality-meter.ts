import { createContrastMeter } from './contrast';
import { createDriftMeter } from './drift';
import { type ImageQuality } from './image-quality';
import { createNoiseMeter } from './noise';
import { spreadFrames } from './spread-frames';

const BRIGHTNESS_FRAMES_MAX = 200;
/** So many pixels at 4095, say, are no chance: a 12-bit camera wrote them in 16 bits. */
const CEILING_PIXELS_MIN = 10;

/** What one frame's counts have. */
export interface FrameRange {
  lowest: number;
  highest: number;
}

export interface QualityMeter {
  /** Every frame of the stack in order, finite counts. @returns the frame's range. */
  add(frame: number, counts: Float32Array): FrameRange;
  result(): ImageQuality;
}

/** Whether `count` is the largest number of 10, 12 or 14 bits. */
const isCeiling = (count: number) => count === 1023 || count === 4095 || count === 16383;

/**
 * Measures image quality in one pass over a stack; memory doesn't grow with it, but for a number per frame.
 * @param maxCount largest count a pixel can have, or Infinity
 */
export function createQualityMeter(shape: {
  width: number;
  height: number;
  frames: number;
  maxCount: number;
}): QualityMeter {
  const { width, height, frames, maxCount } = shape;
  const meters = [
    createNoiseMeter(frames),
    createDriftMeter(width, height, frames),
    createContrastMeter(frames),
  ] as const;
  const means = new Float64Array(frames);
  let [lowest, highest, atHighest] = [Infinity, -Infinity, 0];

  return {
    add(frame, counts) {
      let [low, high, sum] = [Infinity, -Infinity, 0];
      for (let i = 0; i < counts.length; i++) {
        const value = counts[i]!;
        sum += value;
        if (value < low) low = value;
        if (value > high) high = value;
      }
      means[frame] = sum / counts.length;
      if (high > highest) [highest, atHighest] = [high, 0];
      if (high === highest) for (let i = 0; i < counts.length; i++) if (counts[i] === highest) atHighest++;
      lowest = Math.min(lowest, low);
      for (const meter of meters) meter.add(frame, counts);
      return { lowest: low, highest: high };
    },
    result() {
      const [noise, drift, contrast] = meters;
      const isInferred = isCeiling(highest) && highest < maxCount && atHighest >= CEILING_PIXELS_MIN;
      const saturation = isInferred ? highest : maxCount;
      const picked = spreadFrames(frames, BRIGHTNESS_FRAMES_MAX);
      return {
        noiseCounts: noise.result(),
        saturationCounts: Number.isFinite(maxCount) ? saturation : null,
        saturatedShare:
          Number.isFinite(maxCount) && highest >= saturation ? atHighest / (width * height * frames) : 0,
        ...drift.result(),
        brightness: { frames: picked, meanCounts: picked.map((frame) => means[frame]!) },
        contrast: contrast.result(),
        range: { lowestCounts: lowest, highestCounts: highest },
      };
    },
  };
}
