import type { TrackSlice } from '../track-slice';
import { POINT_BRIDGED, type Conditions } from '../types';
import { alongAcross } from '../velocities';
import {
  FEATURE_POSITIONS_MIN,
  FIRST_DIFFERENCE_OVERLAP,
  lnRms,
  SECOND_DIFFERENCE_OVERLAP,
  TRANSVERSE_LAG,
} from './track-features';

/** Features of a piece: along velocity, ln transverse r.m.s., ln acceleration r.m.s. */
export const PIECE_FEATURES = 3;

/**
 * The first three features of any piece of a track in a few steps, from running sums over the track: the
 * same numbers as `trackFeatures` gives of the piece. (The slope of the mean squared displacement needs all
 * pairs of a piece, and says little of a short one.)
 */
export class PieceFeatures {
  private readonly positions: Uint32Array;
  private readonly sigma2: Float64Array;
  private readonly across: Float64Array;
  private readonly turn: Float64Array;
  private readonly turns: Uint32Array;
  private readonly bend: Float64Array;
  private readonly bends: Uint32Array;
  /** Nearest measured place at or after, and at or before, a place. */
  private readonly next: Int32Array;
  private readonly last: Int32Array;
  readonly value = new Float64Array(PIECE_FEATURES);
  readonly variance = new Float64Array(PIECE_FEATURES);
  /** Mean place across the flow, px. */
  acrossPx = Number.NaN;

  constructor(
    private readonly slice: TrackSlice,
    private readonly scale: Pick<Conditions, 'pixelSize_m' | 'frameInterval_s'>,
    private readonly flow: readonly [number, number],
  ) {
    const n = slice.frame.length;
    this.positions = new Uint32Array(n + 1);
    this.sigma2 = new Float64Array(n + 1);
    this.across = new Float64Array(n + 1);
    this.turn = new Float64Array(n + 1);
    this.turns = new Uint32Array(n + 1);
    this.bend = new Float64Array(n + 1);
    this.bends = new Uint32Array(n + 1);
    this.next = new Int32Array(n + 1).fill(n);
    this.last = new Int32Array(n + 1).fill(-1);
    const measured = (i: number) => i < n && (slice.flags[i] & POINT_BRIDGED) === 0;
    for (let i = 0; i < n; i++) {
      const is = measured(i);
      this.last[i] = is ? i : i > 0 ? this.last[i - 1] : -1;
      this.positions[i + 1] = this.positions[i] + (is ? 1 : 0);
      this.sigma2[i + 1] = this.sigma2[i] + (is ? (slice.sxPx[i] ** 2 + slice.syPx[i] ** 2) / 2 : 0);
      this.across[i + 1] = this.across[i] + (is ? alongAcross(slice.xPx[i], slice.yPx[i], flow)[1] : 0);
      const j = i + TRANSVERSE_LAG;
      const pair = is && measured(j);
      const step = pair ? alongAcross(slice.xPx[j] - slice.xPx[i], slice.yPx[j] - slice.yPx[i], flow)[1] : 0;
      this.turn[i + 1] = this.turn[i] + step * step;
      this.turns[i + 1] = this.turns[i] + (pair ? 1 : 0);
      const three = is && measured(i + 1) && measured(i + 2);
      const ax = three ? slice.xPx[i] - 2 * slice.xPx[i + 1] + slice.xPx[i + 2] : 0;
      const ay = three ? slice.yPx[i] - 2 * slice.yPx[i + 1] + slice.yPx[i + 2] : 0;
      this.bend[i + 1] = this.bend[i] + (ax * ax + ay * ay) / 2;
      this.bends[i + 1] = this.bends[i] + (three ? 1 : 0);
    }
    for (let i = n - 1; i >= 0; i--) this.next[i] = measured(i) ? i : this.next[i + 1];
  }

  /** Reads the piece from one place to before another; false where it has too few positions. */
  read(from: number, to: number): boolean {
    const { slice, scale, flow } = this;
    const n = this.positions[to] - this.positions[from];
    if (n < FEATURE_POSITIONS_MIN) return false;
    const { pixelSize_m: px, frameInterval_s: dt } = scale;
    const sigma2Px = (this.sigma2[to] - this.sigma2[from]) / n;
    const sigma2 = Number.isFinite(sigma2Px) ? sigma2Px * px * px : 0;
    const first = this.next[from];
    const last = this.last[to - 1];
    const durationS = (last - first) * dt;
    const [along] = alongAcross(slice.xPx[last] - slice.xPx[first], slice.yPx[last] - slice.yPx[first], flow);
    // Differences reach forward: those that begin in the last places of a piece leave it.
    const end = Math.max(from, to - TRANSVERSE_LAG);
    const lagS = TRANSVERSE_LAG * dt;
    const turns = this.turns[end] - this.turns[from];
    const bends = this.bends[end] - this.bends[from];
    const transverse = {
      mean: ((this.turn[end] - this.turn[from]) / turns) * (px / lagS) ** 2,
      samples: turns,
    };
    const bend = {
      mean: ((this.bend[end] - this.bend[from]) / bends) * (px / dt ** 2) ** 2,
      samples: 2 * bends,
    };
    if (turns === 0 || bends === 0) return false;
    const u2 = lnRms(transverse, (2 * sigma2) / lagS ** 2, FIRST_DIFFERENCE_OVERLAP);
    const u3 = lnRms(bend, (6 * sigma2) / dt ** 4, SECOND_DIFFERENCE_OVERLAP);
    this.value[0] = (along * px) / durationS;
    this.value[1] = u2.value;
    this.value[2] = u3.value;
    this.variance[0] = (2 * sigma2) / durationS ** 2;
    this.variance[1] = u2.variance;
    this.variance[2] = u3.variance;
    this.acrossPx = (this.across[to] - this.across[from]) / n;
    return true;
  }
}
