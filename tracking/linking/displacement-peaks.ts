import type { Spots } from '../types';
import { uniformFlow, type FlowField } from './flow-field';
import type { LinkLimits } from './link-limits';

/** Spots whose displacements are counted; more would only take time. */
const SPOTS_ENOUGH = 12_000;
/** Spots that a block should have, so that those that move alike stand out from chance pairs. */
const SPOTS_PER_BLOCK = 250;
const BLOCKS_MOST = 12;
/** Bins of the histogram to either side of 0. */
const HALF_BINS = 16;
const BIN_LEAST_PX = 0.5;
const SIDE = 2 * HALF_BINS + 1;
/** A peak must rise above chance by so many standard deviations of a count, and hold this share of the spots. */
const PEAK_SIGMAS = 8;
const PEAK_SHARE = 0.15;

/** Where most tracers of a place go in a frame, without linking any. */
export interface DisplacementPeaks {
  flow: FlowField;
  /** Width of a bin, px: peaks are known to about that. */
  binPx: number;
}

/**
 * A first guess of the mean flow from displacements between all spots of consecutive frames up to
 * the longest step: pairs of one tracer pile up at its displacement, all others spread evenly over
 * the disc. The histogram's peak, block by block, finds drifts that are longer than the distance of
 * tracers, where the nearest spot is hardly ever the right one (the correlation of two exposures,
 * Adrian, Annu. Rev. Fluid Mech. 23, 261 (1991), taken between found positions instead of pictures).
 *
 * @returns null where no peak rises above chance.
 */
export function displacementPeaks(spots: Spots, limits: LinkLimits): DisplacementPeaks | null {
  const { width, height, longestStepPx } = limits;
  const blocks = Math.min(SPOTS_ENOUGH, spots.count) / SPOTS_PER_BLOCK;
  const columns = blocksAlong(width, height, blocks);
  const rows = blocksAlong(height, width, blocks);
  const binPx = Math.max(BIN_LEAST_PX, longestStepPx / HALF_BINS);
  const bins = new Int32Array((columns * rows + 1) * SIDE * SIDE);
  const seen = countPairs(spots, limits, columns, rows, binPx, bins);

  const whole = columns * rows;
  const everywhere = peakOf(bins, whole, seen, binPx, longestStepPx);
  const vx = new Float64Array(whole);
  const vy = new Float64Array(whole);
  const found: number[] = [];
  for (let block = 0; block < whole; block++) {
    const peak = peakOf(bins, block, seen, binPx, longestStepPx);
    if (!peak) continue;
    found.push(block);
    vx[block] = peak.vx;
    vy[block] = peak.vy;
  }
  if (found.length === 0) return everywhere && { flow: uniformFlow(everywhere.vx, everywhere.vy), binPx };
  // A block without a peak of its own goes with those nearest to it.
  for (let block = 0; block < whole; block++) {
    if (found.includes(block)) continue;
    const off = (other: number) =>
      (Math.floor(other / columns) - Math.floor(block / columns)) ** 2 +
      ((other % columns) - (block % columns)) ** 2;
    const least = Math.min(...found.map(off));
    const near = found.filter((other) => off(other) === least);
    vx[block] = near.reduce((sum, other) => sum + vx[other], 0) / near.length;
    vy[block] = near.reduce((sum, other) => sum + vy[other], 0) / near.length;
  }
  const flow = { columns, rows, cellWidthPx: width / columns, cellHeightPx: height / rows, vx, vy };
  return { flow, binPx };
}

/** Blocks along a side, square as far as it goes. */
function blocksAlong(side: number, other: number, blocks: number): number {
  return Math.max(1, Math.min(BLOCKS_MOST, Math.round(Math.sqrt((blocks * side) / other))));
}

/**
 * Counts displacements into the histogram of the first spot's block and of the whole picture, from
 * runs of frames spread over the recording; returns spots by block, those of all behind them.
 */
function countPairs(
  { count, frame, xPx, yPx }: Spots,
  { width, height, longestStepPx }: LinkLimits,
  columns: number,
  rows: number,
  binPx: number,
  bins: Int32Array,
): Int32Array {
  const starts = frameStarts(frame, count);
  const every = Math.max(1, Math.ceil(count / SPOTS_ENOUGH));
  const seen = new Int32Array(columns * rows + 1);
  for (let k = 0; k + 2 < starts.length; k += every) {
    const [from, to, end] = [starts[k], starts[k + 1], starts[k + 2]];
    if (frame[to] !== frame[from] + 1) continue;
    let low = to;
    for (let a = from; a < to; a++) {
      const column = Math.min(columns - 1, Math.max(0, Math.floor(((xPx[a] + 0.5) / width) * columns)));
      const row = Math.min(rows - 1, Math.max(0, Math.floor(((yPx[a] + 0.5) / height) * rows)));
      const block = row * columns + column;
      seen[block]++;
      seen[columns * rows]++;
      while (low < end && yPx[low] < yPx[a] - longestStepPx) low++;
      for (let b = low; b < end && yPx[b] <= yPx[a] + longestStepPx; b++) {
        const dx = xPx[b] - xPx[a];
        const dy = yPx[b] - yPx[a];
        if (dx * dx + dy * dy > longestStepPx * longestStepPx) continue;
        const bin = SIDE * (HALF_BINS + Math.round(dy / binPx)) + HALF_BINS + Math.round(dx / binPx);
        bins[block * SIDE * SIDE + bin]++;
        bins[columns * rows * SIDE * SIDE + bin]++;
      }
    }
  }
  return seen;
}

function frameStarts(frame: Uint32Array, count: number): number[] {
  const starts: number[] = [];
  for (let s = 0; s < count; s++) if (s === 0 || frame[s] !== frame[s - 1]) starts.push(s);
  starts.push(count);
  return starts;
}

/** The three by three bins of a block that hold most pairs, as their mean displacement; null where chance would do. */
function peakOf(
  bins: Int32Array,
  block: number,
  seen: Int32Array,
  binPx: number,
  longestStepPx: number,
): { vx: number; vy: number } | null {
  const at = block * SIDE * SIDE;
  let pairs = 0;
  for (let k = 0; k < SIDE * SIDE; k++) pairs += bins[at + k];
  let most = 0;
  let place = -1;
  for (let row = 1; row < SIDE - 1; row++) {
    for (let column = 1; column < SIDE - 1; column++) {
      const middle = at + row * SIDE + column;
      const sum = sumAround(bins, middle, () => 1);
      if (sum <= most) continue;
      most = sum;
      place = middle;
    }
  }
  if (place < 0) return null;
  const disc = Math.PI * Math.max(1, longestStepPx / binPx) ** 2;
  const chance = (9 * (pairs - most)) / Math.max(9, disc - 9);
  const above = most - chance;
  if (above < PEAK_SIGMAS * Math.sqrt(chance + 1) || above < PEAK_SHARE * seen[block]) return null;
  const row = Math.floor((place - at) / SIDE) - HALF_BINS;
  const column = ((place - at) % SIDE) - HALF_BINS;
  return {
    vx: binPx * (column + sumAround(bins, place, (dx) => dx) / most),
    vy: binPx * (row + sumAround(bins, place, (_, dy) => dy) / most),
  };
}

function sumAround(bins: Int32Array, middle: number, weight: (dx: number, dy: number) => number): number {
  let sum = 0;
  for (let dy = -1; dy <= 1; dy++) {
    for (let dx = -1; dx <= 1; dx++) sum += weight(dx, dy) * bins[middle + SIDE * dy + dx];
  }
  return sum;
}
