import { type ImageQuality } from './image-quality';
import { spreadFrames } from './spread-frames';

const FRAMES_MAX = 32;
const PIXELS_PER_FRAME_MAX = 8_192;
/** Most pixels are background; tracers cover about a hundredth of a frame. */
const LOW_SHARE = 0.01;
const HIGH_SHARE = 0.998;

export interface ContrastMeter {
  add(frame: number, counts: Float32Array): void;
  result(): ImageQuality['contrast'];
}

/** A display range for the whole stack, so that frames don't flicker: quantiles over frames spread over it. */
export function createContrastMeter(frames: number): ContrastMeter {
  const picked = new Set(spreadFrames(frames, FRAMES_MAX));
  const sample: number[] = [];
  return {
    add(frame, counts) {
      if (!picked.has(frame)) return;
      // An odd step never runs down one column of an even-sized frame.
      const step = Math.ceil(counts.length / PIXELS_PER_FRAME_MAX) | 1;
      for (let i = 0; i < counts.length; i += step) sample.push(counts[i]!);
    },
    result() {
      const sorted = Float32Array.from(sample).sort();
      const at = (share: number) => sorted[Math.round(share * (sorted.length - 1))] ?? 0;
      const low = at(LOW_SHARE);
      return { low, high: Math.max(at(HIGH_SHARE), low + 1) };
    },
  };
}
