import {
  B,
  BRIGHTNESS_OUTLIERS,
  BV,
  MISSED_MOST,
  PP,
  PV,
  STILL_THERE,
  STRIDE,
  TracerFilter,
  VV,
  VX,
  VY,
  X,
  Y,
} from './tracer-filter';

/** Share of pieces of tracks whose mean brightness is wrong beyond its error. */
const JOIN_OUTLIERS = 0.02;
/** Deviation per axis, in spot sizes, of the distance at which two spots are seen as one. */
const UNRESOLVED_SIZES = 1.1;

/** Tracers of which two may share a spot, or one may be two pieces of track. */
export class PairFilter extends TracerFilter {
  /**
   * Cost of tracer `i`, predicted to the frame of a later track's first spot, being that track, of
   * which `later` read backwards ends in slot `j`; relative to one ending and another starting.
   */
  joinCost(i: number, later: TracerFilter, j: number): number {
    const { values, motion } = this;
    const a = STRIDE * i;
    const b = STRIDE * j;
    const back = later.values;
    const dx = back[b + X] - values[a + X];
    const dy = back[b + Y] - values[a + Y];
    const dvx = -back[b + VX] - values[a + VX];
    const dvy = -back[b + VY] - values[a + VY];
    const pp = values[a + PP] + back[b + PP];
    const pv = values[a + PV] - back[b + PV];
    const vv = values[a + VV] + back[b + VV];
    const jump = this.jumpVariance;
    const plain = pairDensity(dx, dy, dvx, dvy, pp, pv, vv);
    // It may have jumped on the way to that spot, or at the spot.
    const jumped =
      pairDensity(dx, dy, dvx, dvy, pp + jump, pv + jump, vv + jump) +
      pairDensity(dx, dy, dvx, dvy, pp, pv, vv + jump);
    // What the later track's velocity would be worth if the track was a new one.
    const fresh = motion.startVariance + back[b + VV];
    const ox = -back[b + VX] - motion.meanX;
    const oy = -back[b + VY] - motion.meanY;
    const common = Math.exp((-0.5 * (ox * ox + oy * oy)) / fresh) / (2 * Math.PI * fresh);
    let ratio = ((1 - 2 * motion.jumpShare) * plain + motion.jumpShare * jumped) / (common + 1e-300);
    if (this.told) ratio *= this.brightnessRatio(values[a + B], values[a + BV], back[b + B], back[b + BV]);
    return this.base[Math.min(this.missed[i], MISSED_MOST)] - 2 * Math.log(ratio + 1e-300);
  }

  private brightnessRatio(mean: number, variance: number, laterMean: number, laterVariance: number): number {
    const all = this.brightness.variance;
    if (laterVariance > 0.98 * all) return 1;
    // What the later spots measured by themselves, without what was assumed before them.
    const own = 1 / (1 / laterVariance - 1 / all);
    const measured = own * (laterMean / laterVariance - this.brightness.mean / all);
    const same = normalDensity(measured - mean, variance + own);
    const any = normalDensity(measured - this.brightness.mean, all + own);
    return (1 - JOIN_OUTLIERS) * (same / (any + 1e-300)) + JOIN_OUTLIERS;
  }

  /**
   * Cost of spot `s` being tracers `i` and `j` in one: its brightness about their sum, its place
   * between them. Relative to leaving all three alone.
   *
   * @param sizePx standard deviation of a tracer's image.
   */
  mergedCost(i: number, j: number, s: number, sizePx: number): number {
    const { values, table, motion } = this;
    const a = STRIDE * i;
    const b = STRIDE * j;
    const apartX = values[a + X] - values[b + X];
    const apartY = values[a + Y] - values[b + Y];
    const reach = (UNRESOLVED_SIZES * sizePx) ** 2;
    const spread = reach + values[a + PP] + values[b + PP];
    const unresolved = (reach / spread) * Math.exp((-0.5 * (apartX * apartX + apartY * apartY)) / spread);
    const share = this.shareOfLight(a, b);
    let bright = 1;
    if (this.told) {
      const sum = values[a + B] - Math.log(share);
      const total =
        share * share * values[a + BV] + (1 - share) * (1 - share) * values[b + BV] + table.lnVariance[s];
      const off = table.ln[s] - sum;
      const ratio = Math.exp(0.5 * (table.lnCommon[s] - (off * off) / total)) / Math.sqrt(total);
      bright = (1 - BRIGHTNESS_OUTLIERS) * ratio + BRIGHTNESS_OUTLIERS;
    }
    const dx = table.xPx[s] - values[b + X] - share * apartX;
    const dy = table.yPx[s] - values[b + Y] - share * apartY;
    const squared = dx * dx + dy * dy;
    const narrow =
      share * share * values[a + PP] + (1 - share) * (1 - share) * values[b + PP] + 2 * table.variance[s];
    const wide = narrow + 0.5 * this.jumpVariance;
    const jumpShare = 2 * motion.jumpShare;
    const density =
      ((1 - jumpShare) * Math.exp((-0.5 * squared) / narrow)) / (2 * Math.PI * narrow) +
      (jumpShare * Math.exp((-0.5 * squared) / wide)) / (2 * Math.PI * wide);
    const missedByOther = 1 - motion.foundShare * STILL_THERE ** Math.min(this.missed[j], MISSED_MOST);
    return (
      this.base[Math.min(this.missed[i], MISSED_MOST)] -
      2 * Math.log((unresolved * density * bright) / missedByOther + 1e-300)
    );
  }

  /** Corrects tracers `i` and `j` by a spot that is both in one: their middle is there, and they are near each other. */
  updateMerged(i: number, j: number, s: number, sizePx: number): void {
    const { values, table } = this;
    const a = STRIDE * i;
    const b = STRIDE * j;
    const share = this.shareOfLight(a, b);
    const other = 1 - share;
    const dx = table.xPx[s] - share * values[a + X] - other * values[b + X];
    const dy = table.yPx[s] - share * values[a + Y] - other * values[b + Y];
    const middle = share * share * values[a + PP] + other * other * values[b + PP] + 2 * table.variance[s];
    correct(values, a, share, middle, dx, dy);
    correct(values, b, other, middle, dx, dy);
    const apartX = values[a + X] - values[b + X];
    const apartY = values[a + Y] - values[b + Y];
    const spread = values[a + PP] + values[b + PP] + (UNRESOLVED_SIZES * sizePx) ** 2;
    correct(values, a, 1, spread, -apartX, -apartY);
    correct(values, b, 1, spread, apartX, apartY);
    this.missed[i] = 0;
    this.missed[j] = 0;
  }

  /** Part of the light of two tracers that is the first one's. */
  private shareOfLight(a: number, b: number): number {
    return this.told ? 1 / (1 + Math.exp(this.values[b + B] - this.values[a + B])) : 0.5;
  }

  /** Squared distance of spot `s` from where tracer `i` is expected. */
  offSquared(i: number, s: number): number {
    const dx = this.table.xPx[s] - this.values[STRIDE * i + X];
    const dy = this.table.yPx[s] - this.values[STRIDE * i + Y];
    return dx * dx + dy * dy;
  }
}

/** Kalman step for a measurement of `weight` times a position, off by (dx, dy), of variance `total` in all. */
function correct(
  values: Float64Array,
  at: number,
  weight: number,
  total: number,
  dx: number,
  dy: number,
): void {
  const gain = (weight * values[at + PP]) / total;
  const gainV = (weight * values[at + PV]) / total;
  values[at + X] += gain * dx;
  values[at + Y] += gain * dy;
  values[at + VX] += gainV * dx;
  values[at + VY] += gainV * dy;
  values[at + VV] -= gainV * weight * values[at + PV];
  values[at + PV] *= 1 - gain * weight;
  values[at + PP] *= 1 - gain * weight;
}

function pairDensity(
  dx: number,
  dy: number,
  dvx: number,
  dvy: number,
  pp: number,
  pv: number,
  vv: number,
): number {
  const det = pp * vv - pv * pv;
  const squares = vv * (dx * dx + dy * dy) - 2 * pv * (dx * dvx + dy * dvy) + pp * (dvx * dvx + dvy * dvy);
  return Math.exp((-0.5 * squares) / det) / (4 * Math.PI * Math.PI * det);
}

function normalDensity(off: number, variance: number): number {
  return Math.exp((-0.5 * off * off) / variance) / Math.sqrt(2 * Math.PI * variance);
}
