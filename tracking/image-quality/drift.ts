import { type ImageQuality } from './image-quality';
import { medianPicture } from './median-picture';
import { addToGrid, pictureShift, spectrum, squareGrid } from './picture-shift';
import { spreadFrames } from './spread-frames';

/** Parts of the stack in which the picture's place is measured. */
const PARTS_MAX = 9;
/** Odd, so that a median is a value; spread over the whole part, so that tracers move on in between. */
const FRAMES_PER_PART = 9;
/** The way straight from the first part and the way over all parts between must end this close, px. */
const WAYS_AGREE_PX = 1.5;

export type Drift = Pick<ImageQuality, 'drift' | 'driftPx'>;

export interface DriftMeter {
  /** Frames in order. */
  add(frame: number, counts: Float32Array): void;
  result(): Drift;
}

/** Frames of each part, ascending; fewer parts when there are few frames. */
function partsOf(frames: number): number[][] {
  const count = Math.max(1, Math.min(PARTS_MAX, Math.floor(frames / FRAMES_PER_PART)));
  return Array.from({ length: count }, (_, i) => {
    const from = Math.floor((i * frames) / count);
    const size = Math.floor(((i + 1) * frames) / count) - from;
    const odd = size >= FRAMES_PER_PART ? FRAMES_PER_PART : size - ((size + 1) % 2);
    return spreadFrames(size, odd).map((frame) => from + frame);
  });
}

/**
 * The shift in px where both ways to it agree. Where nothing stays in place the pictures match by
 * chance, somewhere else each time, and the ways part.
 */
function agreed(straight: { x: number; y: number }, walked: { x: number; y: number }, bin: number) {
  const apart = bin * Math.hypot(straight.x - walked.x, straight.y - walked.y);
  return apart <= WAYS_AGREE_PX ? { x: straight.x * bin, y: straight.y * bin } : null;
}

/**
 * How the picture as a whole (windows, walls, edges of the light sheet, what sticks to them) moves against
 * its place in the first part of the stack. Tracers that flow on within a part do not count.
 */
export function createDriftMeter(width: number, height: number, frames: number): DriftMeter {
  const grid = squareGrid(width, height);
  const parts = partsOf(frames);
  const shifts: ({ x: number; y: number } | null)[] = [];
  let first: ReturnType<typeof spectrum> | null = null;
  let before: ReturnType<typeof spectrum> | null = null;
  // Sum of the steps from part to part; null from the first step on that could not be told.
  let walked: { x: number; y: number } | null = { x: 0, y: 0 };
  let pictures: Float64Array[] = [];

  const close = ({ side, bin }: NonNullable<typeof grid>) => {
    const now = spectrum(medianPicture(pictures), side);
    first ??= now;
    const step = pictureShift(before ?? now, now, side);
    walked = walked && step && { x: walked.x + step.x, y: walked.y + step.y };
    before = now;
    const straight = pictureShift(first, now, side);
    shifts.push(straight && walked && agreed(straight, walked, bin));
    pictures = [];
  };

  return {
    add(frame, counts) {
      const part = parts[shifts.length];
      if (!grid || part?.[pictures.length] !== frame) return;
      const picture = new Float64Array(grid.side ** 2);
      addToGrid(counts, width, grid, picture);
      pictures.push(picture);
      if (pictures.length === part.length) close(grid);
    },
    result() {
      // What flows is in step for a part or two and is then gone; the camera's own picture lasts to the end.
      const lasting = shifts.at(-1) ? shifts : shifts.map(() => null);
      const known = lasting.slice(1).flatMap((shift) => (shift ? [Math.hypot(shift.x, shift.y)] : []));
      return {
        driftPx: known.length > 0 ? Math.max(...known) : null,
        drift: {
          frames: shifts.map((_, i) => parts[i]![parts[i]!.length >> 1]!),
          xPx: lasting.map((shift) => shift?.x ?? null),
          yPx: lasting.map((shift) => shift?.y ?? null),
        },
      };
    },
  };
}
