import type { Frame } from '@/tracking/types';

/** A square of whole pixels inside a frame. */
export interface Square {
  leftPx: number;
  topPx: number;
  sizePx: number;
}

/** The part of a frame in a square, as a frame of its own: what is drawn small need not be converted large. */
export function cutFrame({ width, counts }: Frame, { leftPx, topPx, sizePx }: Square): Frame {
  const cut = new Float32Array(sizePx * sizePx);
  for (let row = 0; row < sizePx; row++) {
    const from = (topPx + row) * width + leftPx;
    cut.set(counts.subarray(from, from + sizePx), row * sizePx);
  }
  return { width: sizePx, height: sizePx, counts: cut };
}
