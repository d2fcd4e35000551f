import { firstFrom, orderByFrame, type TimedPoints } from './frame-order';

/** Tracks for comparison: points of track i are `start[i] .. start[i + 1] - 1`, by frame, at most one in each. */
export interface ComparedTracks extends TimedPoints {
  /** Length: tracks + 1. */
  start: ArrayLike<number>;
}

/**
 * Which estimated tracks come near a true one: those of true track i are entries
 * `start[i] .. start[i + 1] - 1`. Pairs that never come within the gate are left out.
 */
export interface TrackOverlaps {
  start: number[];
  /** Number of the estimated track. */
  estimated: number[];
  /** Sum over the frames that both have of min(distance, gate), px. */
  distancePx: number[];
  /** Frames that both have, and those of them in which they are within the gate. */
  common: number[];
  near: number[];
  /** Squared distances of the latter, px^2. */
  squaresPx2: number[];
}

/** Compares every true track with the estimated ones near it, frame by frame. */
export function overlapTracks(
  truth: ComparedTracks,
  estimated: ComparedTracks,
  frames: number,
  gatePx: number,
): TrackOverlaps {
  const order = orderByFrame(estimated, frames);
  const trackOf = owners(estimated);
  const tracks = estimated.start.length - 1;
  // Sums with the true track at hand, by estimated track; only those touched are set back.
  const near = new Uint32Array(tracks);
  const saved = new Float64Array(tracks);
  const squares = new Float64Array(tracks);
  const touched: number[] = [];
  const out: TrackOverlaps = {
    start: [0],
    estimated: [],
    distancePx: [],
    common: [],
    near: [],
    squaresPx2: [],
  };
  for (let i = 0; i + 1 < truth.start.length; i++) {
    for (let p = truth.start[i]; p < truth.start[i + 1]; p++) {
      const frame = truth.frame[p];
      if (frame >= frames) continue;
      for (let k = firstFrom(order, frame, truth.xPx[p] - gatePx); k < order.start[frame + 1]; k++) {
        const dx = order.xPx[k] - truth.xPx[p];
        if (dx >= gatePx) break;
        const dy = order.yPx[k] - truth.yPx[p];
        const square = dx * dx + dy * dy;
        if (square >= gatePx * gatePx) continue;
        const j = trackOf[order.point[k]];
        if (near[j]++ === 0) touched.push(j);
        saved[j] += gatePx - Math.sqrt(square);
        squares[j] += square;
      }
    }
    for (const j of touched) {
      const common = commonFrames(truth, i, estimated, j);
      out.estimated.push(j);
      out.distancePx.push(gatePx * common - saved[j]);
      out.common.push(common);
      out.near.push(near[j]);
      out.squaresPx2.push(squares[j]);
      near[j] = 0;
      saved[j] = 0;
      squares[j] = 0;
    }
    touched.length = 0;
    out.start.push(out.estimated.length);
  }
  return out;
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
