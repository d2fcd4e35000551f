import type { Tracks } from '../types';
import { BLOCKS, blockOf } from './image-blocks';
import { nearPoints } from './near-points';
import type { TrappedPool } from './trapped-pool';

/** Frames looked at, evenly over the recording: the pattern changes slowly. */
const FRAMES_MAX = 40;
/** Bins of distance up to the reach. */
const BINS = 240;

/** Trapped tracers and pairs of them per frame, by block of the image and by projected distance. */
export interface PairsByDistance {
  binM: number;
  bins: number;
  blocks: number;
  /** Tracers of each block. */
  tracers: Float64Array;
  /**
   * Pairs, `blocks` rows of `bins`: half of each pair goes to the block of either tracer, and it is
   * weighted for the pairs that are missed where one of the two lies outside the image (translation
   * correction, Ohser 1983).
   */
  pairs: Float64Array;
}

/** Counts pairs of trapped tracers that are seen in the same frame. */
export function pairsByDistance(
  tracks: Tracks,
  pool: TrappedPool,
  image: { width: number; height: number; frames: number },
  reachPx: number,
  pixelSizeM: number,
): PairsByDistance {
  const blocks = BLOCKS;
  const tracers = new Float64Array(blocks);
  const pairs = new Float64Array(blocks * BINS);
  const chosen: number[] = [];
  for (let i = 0; i < tracks.count; i++) if (pool.chosen[i] === 1) chosen.push(i);
  const step = Math.max(1, Math.floor(image.frames / FRAMES_MAX));
  let frames = 0;
  for (let frame = Math.floor(step / 2); frame < image.frames; frame += step) {
    frames++;
    const x: number[] = [];
    const y: number[] = [];
    for (const i of chosen) {
      const at = tracks.start[i] + frame - tracks.frame[tracks.start[i]];
      if (at < tracks.start[i] || at >= tracks.start[i + 1]) continue;
      x.push(tracks.xPx[at]);
      y.push(tracks.yPx[at]);
    }
    const block = x.map((_, i) => blockOf(x[i], y[i], image));
    for (const of of block) tracers[of]++;
    for (const { i, j } of nearPoints(x, y, reachPx)) {
      const dx = Math.abs(x[i] - x[j]);
      const dy = Math.abs(y[i] - y[j]);
      const bin = Math.min(BINS - 1, Math.floor((Math.hypot(dx, dy) / reachPx) * BINS));
      const half = 0.5 / ((1 - dx / image.width) * (1 - dy / image.height));
      pairs[block[i] * BINS + bin] += half;
      pairs[block[j] * BINS + bin] += half;
    }
  }
  const scale = 1 / Math.max(1, frames);
  return {
    binM: (reachPx * pixelSizeM) / BINS,
    bins: BINS,
    blocks,
    tracers: tracers.map((n) => n * scale),
    pairs: pairs.map((n) => n * scale),
  };
}

/** Pairs of each block with distances from one to another, m; edges are those of bins. */
export function pairsBetween(of: PairsByDistance, lowM: number, highM: number): Float64Array {
  const from = Math.round(lowM / of.binM);
  const to = Math.min(of.bins, Math.round(highM / of.binM));
  return Float64Array.from({ length: of.blocks }, (_, block) => {
    let sum = 0;
    for (let bin = from; bin < to; bin++) sum += of.pairs[block * of.bins + bin];
    return sum;
  });
}
