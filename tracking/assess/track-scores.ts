import { createAssignmentSolver } from '../assign';
import { overlapTracks, type ComparedTracks } from './track-overlap';

/** Distance at which an estimated position counts for nothing in Chenouard et al. 2014, px. */
export const SCORE_GATE_PX = 5;

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
  gatePx = SCORE_GATE_PX,
): TrackScores {
  const trueTracks = truth.start.length - 1;
  const estimatedTracks = estimated.start.length - 1;
  const overlaps = overlapTracks(truth, estimated, frames, gatePx);
  const length = (j: number) => estimated.start[j + 1] - estimated.start[j];

  // Against staying alone: frames of the estimated track only cost the gate, common ones save it.
  const cost = overlaps.estimated.map(
    (j, e) => gatePx * (length(j) - 2 * overlaps.common[e]) + overlaps.distancePx[e],
  );
  const columnOfRow = new Int32Array(trueTracks);
  createAssignmentSolver().solve(
    { rows: trueTracks, columns: estimatedTracks, start: overlaps.start, column: overlaps.estimated, cost },
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
    const e = overlaps.estimated.indexOf(columnOfRow[i], overlaps.start[i]);
    distance += cost[e];
    spurious -= gatePx * length(columnOfRow[i]);
    matched += overlaps.near[e];
    squared += overlaps.squaresPx2[e];
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
