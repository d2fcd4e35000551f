import { flowAt } from './flow-field';
import {
  B,
  BRIGHTNESS_OUTLIERS,
  BV,
  MISSED_MOST,
  MODE,
  MODES,
  PP,
  PV,
  STILL_THERE,
  STRIDE,
  TracerFilter,
  VV,
  VX,
  VY,
  W,
  X,
  Y,
} from './tracer-filter';

/** Share of pieces of tracks whose mean brightness is wrong beyond its error. */
const JOIN_OUTLIERS = 0.02;
/** Deviation per axis, in spot sizes, of the distance at which two spots are seen as one. */
const UNRESOLVED_SIZES = 1.1;

/** Tracers of which two may share a spot, or one may be two pieces of track. */
export class PairFilter extends TracerFilter {
  private readonly usual = new Float64Array(2);
  /** The tracers at hand with their populations taken together: X, Y, PP of one, then of the other. */
  private readonly first = new Float64Array(MODE);
  private readonly second = new Float64Array(MODE);

  /**
   * Cost of tracer `i`, predicted to the frame of a later track's first spot, being that track, of
   * which `later` read backwards ends in slot `j`; relative to one ending and another starting.
   */
  joinCost(i: number, later: TracerFilter, j: number): number {
    const a = STRIDE * i;
    const b = STRIDE * j;
    let ratio = 0;
    for (let m = 0; m < this.modes; m++) ratio += this.joinRatio(m, a, later.values, b);
    if (this.told) {
      const { values: back } = later;
      ratio *= this.brightnessRatio(this.values[a + B], this.values[a + BV], back[b + B], back[b + BV]);
    }
    return this.base[Math.min(this.missed[i], MISSED_MOST)] - 2 * Math.log(ratio + 1e-300);
  }

  /** Likelihood of both pieces being one tracer of population `m` over that of their being two of any. */
  private joinRatio(m: number, i: number, back: Float64Array, j: number): number {
    const { values } = this;
    const population = this.motion.populations[m];
    const a = i + MODES + MODE * m;
    const b = j + MODES + MODE * m;
    const dx = back[b + X] - values[a + X];
    const dy = back[b + Y] - values[a + Y];
    const dvx = -back[b + VX] - values[a + VX];
    const dvy = -back[b + VY] - values[a + VY];
    const pp = values[a + PP] + back[b + PP];
    const pv = values[a + PV] - back[b + PV];
    const vv = values[a + VV] + back[b + VV];
    const jump = population.jumpVariance;
    const plain = pairDensity(dx, dy, dvx, dvy, pp, pv, vv);
    // It may have jumped on the way to that spot, or at the spot.
    const jumped =
      pairDensity(dx, dy, dvx, dvy, pp + jump, pv + jump, vv + jump) +
      pairDensity(dx, dy, dvx, dvy, pp, pv, vv + jump);
    // What the later track's velocity would be worth if the track was a new one.
    const fresh = population.startVariance + back[b + VV];
    flowAt(population.flow, back[b + X], back[b + Y], this.usual);
    const ox = -back[b + VX] - this.usual[0];
    const oy = -back[b + VY] - this.usual[1];
    const common = Math.exp((-0.5 * (ox * ox + oy * oy)) / fresh) / (2 * Math.PI * fresh);
    const both = (values[a + W] * back[b + W]) / population.share;
    const { jumpShare } = population;
    return (both * ((1 - 2 * jumpShare) * plain + jumpShare * jumped)) / (common + 1e-300);
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
    const { values, table, motion, first, second } = this;
    const a = STRIDE * i;
    const b = STRIDE * j;
    this.together(a, first);
    this.together(b, second);
    const apartX = first[X] - second[X];
    const apartY = first[Y] - second[Y];
    const reach = (UNRESOLVED_SIZES * sizePx) ** 2;
    const spread = reach + first[PP] + second[PP];
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
    const dx = table.xPx[s] - second[X] - share * apartX;
    const dy = table.yPx[s] - second[Y] - share * apartY;
    const squared = dx * dx + dy * dy;
    const narrow = share * share * first[PP] + (1 - share) * (1 - share) * second[PP] + 2 * table.variance[s];
    // Either of them may have jumped.
    let jumpShare = 0;
    let jumpVariance = 0;
    for (let m = 0; m < this.modes; m++) {
      const weight = values[a + MODES + MODE * m + W] + values[b + MODES + MODE * m + W];
      jumpShare += weight * this.jumpShare[m];
      jumpVariance += weight * this.jumpShare[m] * this.jumpVariance[m];
    }
    const wide = narrow + (0.5 * jumpVariance) / jumpShare;
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
    const { table } = this;
    const a = STRIDE * i;
    const b = STRIDE * j;
    const share = this.shareOfLight(a, b);
    const other = 1 - share;
    const { first, second } = this;
    this.together(a, first);
    this.together(b, second);
    const noise = 2 * table.variance[s];
    for (let m = 0, of = MODES; m < this.modes; m++, of += MODE) {
      this.pull(a + of, share, second, other, table.xPx[s], table.yPx[s], noise);
      this.pull(b + of, other, first, share, table.xPx[s], table.yPx[s], noise);
    }
    this.together(a, first);
    this.together(b, second);
    const near = (UNRESOLVED_SIZES * sizePx) ** 2;
    for (let m = 0, of = MODES; m < this.modes; m++, of += MODE) {
      this.pull(a + of, 1, second, -1, 0, 0, near);
      this.pull(b + of, 1, first, -1, 0, 0, near);
    }
    this.missed[i] = 0;
    this.missed[j] = 0;
  }

  /** Part of the light of two tracers that is the first one's. */
  private shareOfLight(a: number, b: number): number {
    return this.told ? 1 / (1 + Math.exp(this.values[b + B] - this.values[a + B])) : 0.5;
  }

  /** Squared distance of spot `s` from where tracer `i` is expected. */
  offSquared(i: number, s: number): number {
    this.together(STRIDE * i, this.first);
    const dx = this.table.xPx[s] - this.first[X];
    const dy = this.table.yPx[s] - this.first[Y];
    return dx * dx + dy * dy;
  }

  /** Corrects the tracer at `of` by the place (x, y) of `weight` times it and `rest` times the other one. */
  private pull(
    of: number,
    weight: number,
    other: Float64Array,
    rest: number,
    x: number,
    y: number,
    noise: number,
  ): void {
    const { values } = this;
    const dx = x - weight * values[of + X] - rest * other[X];
    const dy = y - weight * values[of + Y] - rest * other[Y];
    const total = weight * weight * values[of + PP] + rest * rest * other[PP] + noise;
    correct(values, of, weight, total, dx, dy);
  }

  /** Place and its variance (per axis) of the tracer at `at`, whichever population it is of. */
  private together(at: number, out: Float64Array): void {
    const { values } = this;
    const a = at + MODES;
    out[X] = values[a + X];
    out[Y] = values[a + Y];
    out[PP] = values[a + PP];
    if (this.modes === 1) return;
    const b = a + MODE;
    const share = values[b + W];
    const dx = values[b + X] - values[a + X];
    const dy = values[b + Y] - values[a + Y];
    out[X] += share * dx;
    out[Y] += share * dy;
    const spread = 0.5 * (1 - share) * (dx * dx + dy * dy);
    out[PP] += share * (values[b + PP] - values[a + PP] + spread);
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
