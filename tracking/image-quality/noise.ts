import { clippedDeviation } from './clipped-deviation';
import { spreadFrames } from './spread-frames';

const PAIRS_MAX = 16;
/** Pixels compared of each pair: enough for 1 % in all. */
const PIXELS_MAX = 65_536;

export interface NoiseMeter {
  /** Frames in order. */
  add(frame: number, counts: Float32Array): void;
  /** Counts r.m.s. of one pixel of one frame, the median over pairs; null when there was no pair. */
  result(): number | null;
}

/** Noise from differences of frames that follow each other: what stands still cancels out. */
export function createNoiseMeter(frames: number): NoiseMeter {
  const firsts = new Set(spreadFrames(frames - 1, PAIRS_MAX));
  const deviations: number[] = [];
  let previous: Float32Array | null = null;
  return {
    add(frame, counts) {
      const isSecond = previous !== null && firsts.has(frame - 1);
      const isFirst = firsts.has(frame);
      if (!isFirst && !isSecond) return;
      const step = Math.max(1, Math.floor(counts.length / PIXELS_MAX));
      const picked = new Float32Array(Math.floor(counts.length / step));
      for (let i = 0; i < picked.length; i++) picked[i] = counts[i * step]!;
      if (isSecond) {
        const differences = picked.map((value, i) => value - previous![i]!);
        deviations.push(clippedDeviation(differences) / Math.SQRT2);
      }
      previous = isFirst ? picked : null;
    },
    result() {
      if (deviations.length === 0) return null;
      return deviations.sort((a, b) => a - b)[Math.floor(deviations.length / 2)]!;
    },
  };
}
