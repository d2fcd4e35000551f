import { choleskyFactor, choleskySolve } from '../detection/cholesky';
import type { BackgroundDrift } from '../types';
import { fillGaps } from './block-grid';
import type { BlockStatistics } from './block-statistics';
import type { CameraNoise } from './photon-transfer';
import { smoothTable } from './smooth-table';

/** Background of a recording on blocks. */
export interface BlockBackground {
  /** Mean over the recording by block, electrons. */
  meanE: Float64Array;
  /** Null where it doesn't change but in brightness as a whole. */
  drift: BackgroundDrift | null;
}

/** Numbers of nodes that are tried: each halves the distances of the one before. */
const NODES_TRIED = [1, 2, 3, 5, 9];
/** Below this mean background frames can't be told to be brighter, only to be offset. */
const SCALED_FROM_E = 0.5;
const SCALE_LEAST = 0.01;
/** A node without pixels of its own is held to the block's mean by this share of an average node's weight. */
const HELD_SHARE = 1e-3;

/**
 * Background on blocks, at as many times as the data ask for. Frames are first brought to the same
 * brightness as a whole, which detection measures frame by frame. Then block means are fitted by
 * weighted least squares with straight lines between nodes spread evenly over the recording. The
 * number of nodes is the one with the least expected error of prediction, chi^2 / phi + 2
 * parameters (Mallows, Technometrics 15, 661 (1973)); phi is what the finest nodes leave.
 *
 * @param frameNumbers of both frames of every pair, mean; null when unknown: then one node.
 */
export function fitBackground(
  statistics: BlockStatistics,
  { gainCountsPerE, offsetCounts, readNoiseE }: CameraNoise,
  frameNumbers: Float64Array | null,
): BlockBackground {
  const { grid, pairs, pixels, level } = statistics;
  const blocks = grid.columns * grid.rows;
  const levelE = level.map((counts) => (Number.isNaN(counts) ? 0 : (counts - offsetCounts) / gainCountsPerE));
  const meanE = meanOverTime(levelE, pixels, blocks);
  equaliseFrames(levelE, pixels, meanE);
  meanE.set(meanOverTime(levelE, pixels, blocks));
  const noise = meanE.map((e) => Math.max(0, e || 0) + readNoiseE ** 2 + 1e-6);
  let best: Float64Array | null = null;
  if (frameNumbers !== null && pairs > 1) {
    const weight = pixels.map((n, i) => (2 * n) / noise[i % blocks]);
    best = bestNodes(levelE, weight, meanE, frameNumbers);
  }
  const seen = new Float64Array(blocks);
  for (let i = 0; i < pixels.length; i++) seen[i % blocks] += 2 * pixels[i];
  const variance = noise.map((value, b) => value / Math.max(1, seen[b]));
  const finish = (table: Float64Array, share: number) => {
    fillGaps(table, grid);
    const smooth = smoothTable(
      table,
      variance.map((value) => value / share),
      grid,
    );
    return smooth.map((e) => Math.max(0, e));
  };
  const background: BlockBackground = { meanE: finish(meanE, 1), drift: null };
  if (best === null || frameNumbers === null) return background;
  const nodes = best.length / blocks;
  const blocksE = new Float32Array(best.length);
  for (let k = 0; k < nodes; k++) {
    // Each node rests on its share of the frames.
    blocksE.set(finish(best.slice(k * blocks, (k + 1) * blocks), 1 / nodes), k * blocks);
  }
  const { columns, rows } = grid;
  background.drift = { columns, rows, nodeFrames: nodeFrames(frameNumbers, nodes), blocksE };
  return background;
}

function meanOverTime(levelE: Float64Array, pixels: Float64Array, blocks: number): Float64Array {
  const sum = new Float64Array(blocks);
  const weight = new Float64Array(blocks);
  for (let i = 0; i < levelE.length; i++) {
    sum[i % blocks] += pixels[i] * levelE[i];
    weight[i % blocks] += pixels[i];
  }
  // NaN where no frame shows the block.
  for (let b = 0; b < blocks; b++) sum[b] /= weight[b];
  return sum;
}

/** Divides every pair's levels by its brightness relative to the mean; subtracts it in the dark. */
function equaliseFrames(levelE: Float64Array, pixels: Float64Array, meanE: Float64Array): void {
  const blocks = meanE.length;
  for (let from = 0; from < levelE.length; from += blocks) {
    let seen = 0;
    let sum = 0;
    let expected = 0;
    for (let b = 0; b < blocks; b++) {
      const n = pixels[from + b];
      if (n === 0) continue;
      seen += n;
      sum += n * levelE[from + b];
      expected += n * meanE[b];
    }
    if (seen === 0) continue;
    const scaled = expected / seen > SCALED_FROM_E;
    const scale = scaled ? Math.max(SCALE_LEAST, sum / expected) : 1;
    const shift = scaled ? 0 : (sum - expected) / seen;
    for (let b = 0; b < blocks; b++) levelE[from + b] = (levelE[from + b] - shift) / scale;
  }
}

/** Tables of the best number of nodes, after one another; null for one node. */
function bestNodes(
  levelE: Float64Array,
  weight: Float64Array,
  meanE: Float64Array,
  frameNumbers: Float64Array,
): Float64Array | null {
  const pairs = frameNumbers.length;
  const tried = NODES_TRIED.filter((nodes) => nodes <= pairs / 2 + 1).map((nodes) =>
    fitNodes(levelE, weight, meanE, frameNumbers, nodes),
  );
  const finest = tried[tried.length - 1];
  const phi = Math.max(1, finest.chi2 / Math.max(1, finest.values - finest.parameters));
  const risk = tried.map(({ chi2, parameters }) => chi2 / phi + 2 * parameters);
  const best = tried[risk.indexOf(Math.min(...risk))];
  return best.nodes === 1 ? null : best.tables;
}

function fitNodes(
  levelE: Float64Array,
  weight: Float64Array,
  meanE: Float64Array,
  frameNumbers: Float64Array,
  nodes: number,
) {
  const blocks = meanE.length;
  const pairs = frameNumbers.length;
  const tables = new Float64Array(nodes * blocks).fill(Number.NaN);
  const place = nodePlaces(frameNumbers, nodes);
  const matrix = new Float64Array(nodes * nodes);
  const right = new Float64Array(nodes);
  let chi2 = 0;
  let values = 0;
  let seenBlocks = 0;
  for (let b = 0; b < blocks; b++) {
    if (Number.isNaN(meanE[b])) continue;
    matrix.fill(0);
    right.fill(0);
    let total = 0;
    for (let p = 0; p < pairs; p++) {
      const w = weight[p * blocks + b];
      if (w === 0) continue;
      const off = levelE[p * blocks + b] - meanE[b];
      const k = Math.floor(place[p]);
      const share = place[p] - k;
      matrix[k * nodes + k] += w * (1 - share) ** 2;
      right[k] += w * (1 - share) * off;
      if (share > 0) {
        matrix[(k + 1) * nodes + k] += w * share * (1 - share);
        matrix[(k + 1) * nodes + k + 1] += w * share ** 2;
        right[k + 1] += w * share * off;
      }
      total += w;
    }
    for (let k = 0; k < nodes; k++) matrix[k * nodes + k] += (HELD_SHARE * total) / nodes;
    if (!choleskyFactor(matrix, nodes, nodes)) continue;
    choleskySolve(matrix, nodes, nodes, right);
    for (let k = 0; k < nodes; k++) tables[k * blocks + b] = meanE[b] + right[k];
    seenBlocks++;
    for (let p = 0; p < pairs; p++) {
      const w = weight[p * blocks + b];
      if (w === 0) continue;
      const k = Math.floor(place[p]);
      const share = place[p] - k;
      const fitted = right[k] + (share > 0 ? share * (right[k + 1] - right[k]) : 0);
      chi2 += w * (levelE[p * blocks + b] - meanE[b] - fitted) ** 2;
      values++;
    }
  }
  return { nodes, tables, chi2, values, parameters: nodes * seenBlocks };
}

/** Where pairs lie among the nodes: 0 at the first, nodes - 1 at the last. */
function nodePlaces(frameNumbers: Float64Array, nodes: number): Float64Array {
  const first = frameNumbers[0];
  const span = frameNumbers[frameNumbers.length - 1] - first;
  return frameNumbers.map((frame) => (nodes > 1 ? ((frame - first) / span) * (nodes - 1) : 0));
}

function nodeFrames(frameNumbers: Float64Array, nodes: number): Float64Array {
  const first = frameNumbers[0];
  const span = frameNumbers[frameNumbers.length - 1] - first;
  return Float64Array.from({ length: nodes }, (_, k) => first + (span * k) / (nodes - 1));
}
