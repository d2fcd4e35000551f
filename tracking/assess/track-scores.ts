import { createAssignmentSolver } from '../assign';
import { pointsByFrame, type TimedPoints } from './point-match';

/** Tracks for comparison: points of track i are `start[i] .. start[i + 1] - 1`, at most one per frame. */
export interface ComparedTracks extends TimedPoints {
  /** Length: tracks + 1. */
  start: ArrayLike<number>;
}

/** Scores of Chenouard et al., Nat. Methods 11, 281 (2014); all but `rmsePx` are 1 at best. */
export interface TrackScores {
  alpha: number;
  beta: number;
  /** Jaccard similarity of positions, and of tracks. */
  jaccard: number;
  jaccardTracks: number;
  rmsePx: number;
}

/**
 * Compares estimated tracks with the true ones. Tracks are paired so that their total distance is
 * least; distance is summed over frames, at most `gatePx` in each and exactly that where only one
 * of the two exists.
 */
export function scoreTracks(
  truth: ComparedTracks,
  estimated: ComparedTracks,
  frames: number,
  gatePx = 5,
): TrackScores {
  const trueTracks = truth.start.length - 1;
  const estimatedTracks = estimated.start.length - 1;
  const { gain, near, squares } = overlaps(truth, estimated, frames, gatePx);
  const length = (tracks: ComparedTracks, i: number) => tracks.start[i + 1] - tracks.start[i];

  const start = [0];
  const column: number[] = [];
  const cost: number[] = [];
  const shared: { near: number; squares: number }[] = [];
  for (let i = 0; i < trueTracks; i++) {
    for (const [j, saved] of gain[i]) {
      column.push(j);
      cost.push(gatePx * length(estimated, j) - saved);
      shared.push({ near: near[i].get(j) ?? 0, squares: squares[i].get(j) ?? 0 });
    }
    start.push(column.length);
  }
  const columnOfRow = new Int32Array(trueTracks);
  createAssignmentSolver().solve(
    { rows: trueTracks, columns: estimatedTracks, start, column, cost },
    columnOfRow,
  );

  const truePoints = truth.frame.length;
  const estimatedPoints = estimated.frame.length;
  let distance = gatePx * truePoints;
  let spurious = gatePx * estimatedPoints;
  let pairs = 0;
  let matched = 0;
  let squared = 0;
  for (let i = 0; i < trueTracks; i++) {
    if (columnOfRow[i] < 0) continue;
    for (let e = start[i]; e < start[i + 1]; e++) {
      if (column[e] !== columnOfRow[i]) continue;
      distance += cost[e];
      spurious -= gatePx * length(estimated, column[e]);
      matched += shared[e].near;
      squared += shared[e].squares;
    }
    pairs++;
  }
  const nothing = gatePx * truePoints;
  return {
    alpha: 1 - distance / nothing,
    beta: (nothing - distance) / (nothing + spurious),
    jaccard: matched / (truePoints + estimatedPoints - matched),
    jaccardTracks: pairs / (trueTracks + estimatedTracks - pairs),
    rmsePx: Math.sqrt(squared / matched),
  };
}

/**
 * For each true track the estimated ones that come near it: what pairing them would save (a frame
 * in which both exist would cost the gate twice if they stayed apart), frames within the gate, and
 * the squared distances of those.
 */
function overlaps(truth: ComparedTracks, estimated: ComparedTracks, frames: number, gatePx: number) {
  const rows = truth.start.length - 1;
  const gain = Array.from({ length: rows }, () => new Map<number, number>());
  const near = Array.from({ length: rows }, () => new Map<number, number>());
  const squares = Array.from({ length: rows }, () => new Map<number, number>());
  const trackOf = owners(estimated);
  const estimatedByFrame = pointsByFrame(estimated, frames);
  for (let i = 0; i < rows; i++) {
    const touched = new Set<number>();
    for (let p = truth.start[i]; p < truth.start[i + 1]; p++) {
      for (const q of estimatedByFrame[truth.frame[p]] ?? []) {
        const distance = Math.hypot(truth.xPx[p] - estimated.xPx[q], truth.yPx[p] - estimated.yPx[q]);
        if (distance >= gatePx) continue;
        const j = trackOf[q];
        touched.add(j);
        near[i].set(j, (near[i].get(j) ?? 0) + 1);
        squares[i].set(j, (squares[i].get(j) ?? 0) + distance * distance);
        gain[i].set(j, (gain[i].get(j) ?? 0) + gatePx - distance);
      }
    }
    // Frames that both have count once, near or not.
    for (const j of touched)
      gain[i].set(j, (gain[i].get(j) ?? 0) + gatePx * commonFrames(truth, i, estimated, j));
  }
  return { gain, near, squares };
}

function owners(tracks: ComparedTracks): Int32Array {
  const owner = new Int32Array(tracks.frame.length);
  for (let i = 0; i + 1 < tracks.start.length; i++) owner.fill(i, tracks.start[i], tracks.start[i + 1]);
  return owner;
}

function commonFrames(a: ComparedTracks, i: number, b: ComparedTracks, j: number): number {
  let p = a.start[i];
  let q = b.start[j];
  let common = 0;
  while (p < a.start[i + 1] && q < b.start[j + 1]) {
    if (a.frame[p] === b.frame[q]) {
      common++;
      p++;
      q++;
    } else if (a.frame[p] < b.frame[q]) p++;
    else q++;
  }
  return common;
}
