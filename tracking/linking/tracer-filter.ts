import type { BrightnessStatistics } from './brightness-statistics';
import type { MotionStatistics } from './motion-statistics';
import type { SpotTable } from './spot-table';

/** After each missed frame a tracer is still there with about this chance: it blinked, or it left. */
const STILL_THERE = 0.4;
/** Share of spots whose brightness is wrong beyond their stated error: merged with another one. */
const BRIGHTNESS_OUTLIERS = 0.05;
/** The same for the mean brightness of whole pieces of tracks. */
const JOIN_OUTLIERS = 0.02;
/** Two spots nearer than about this many spot sizes are seen as one. */
const MERGED_SIZES = 2.2;
const MISSED_MOST = 16;

/** Values of one tracer, one behind the other: `values[STRIDE * i + X]` and so on. */
export const STRIDE = 9;
const X = 0;
const Y = 1;
const VX = 2;
const VY = 3;
/** Covariance, the same on both axes: position, position with velocity, velocity. */
const PP = 4;
const PV = 5;
const VV = 6;
/** Ln brightness and its variance. */
const B = 7;
const BV = 8;

/**
 * Tracers in flight. Of each: position and velocity as a Kalman filter of constant velocity,
 * random changes of it and now and then a jump (two-component mixture); ln brightness as one of an
 * autoregressive process. A slot holds one tracer.
 */
export class TracerFilter {
  values: Float64Array;
  /** Last spot of the tracer, and frames missed since. */
  spot: Int32Array;
  missed: Int32Array;
  /** -2 ln of the odds of being found over those of being missed and another one coming up. */
  private readonly base = new Float64Array(MISSED_MOST + 1);
  private readonly farthest: number;
  private readonly jumpVariance: number;
  private readonly plainWeight: number;
  private readonly jumpWeight: number;
  private readonly told: boolean;

  /** @param direction -1 where the film is read backwards. */
  constructor(
    private readonly motion: MotionStatistics,
    private readonly brightness: BrightnessStatistics,
    private readonly table: SpotTable,
    private readonly direction: 1 | -1,
    room: number,
  ) {
    this.values = new Float64Array(STRIDE * room);
    this.spot = new Int32Array(room);
    this.missed = new Int32Array(room);
    for (let k = 0; k <= MISSED_MOST; k++) {
      const found = motion.foundShare * STILL_THERE ** k;
      this.base[k] = -2 * Math.log(found / ((1 - found) * motion.newPerPx2));
    }
    this.jumpVariance = motion.jumpVariance;
    this.plainWeight = (1 - motion.jumpShare) / (2 * Math.PI);
    this.jumpWeight = motion.jumpShare / (2 * Math.PI);
    this.told = brightness.variance > 0;
    // Brightness favours a link by at most the density of the sharpest spot over that of all.
    const bonus = this.told ? Math.log((brightness.variance + 4e-4) / 4e-4) + 12 : 0;
    this.farthest = Math.max(20, bonus - this.base[0] - 2 * Math.log(2 * Math.PI * motion.jumpVariance));
  }

  get room(): number {
    return this.spot.length;
  }

  grow(): void {
    const values = new Float64Array(2 * this.values.length);
    values.set(this.values);
    this.values = values;
    const spot = new Int32Array(2 * this.spot.length);
    spot.set(this.spot);
    this.spot = spot;
    const missed = new Int32Array(2 * this.missed.length);
    missed.set(this.missed);
    this.missed = missed;
  }

  copy(from: number, to: number): void {
    this.values.copyWithin(STRIDE * to, STRIDE * from, STRIDE * (from + 1));
    this.spot[to] = this.spot[from];
    this.missed[to] = this.missed[from];
  }

  start(i: number, s: number): void {
    const { motion, brightness, table, values } = this;
    const at = STRIDE * i;
    values[at + X] = table.xPx[s];
    values[at + Y] = table.yPx[s];
    values[at + VX] = this.direction * motion.meanX;
    values[at + VY] = this.direction * motion.meanY;
    values[at + PP] = table.variance[s];
    values[at + PV] = 0;
    values[at + VV] = motion.startVariance;
    if (this.told) {
      const gain = brightness.variance / (brightness.variance + table.lnVariance[s]);
      values[at + B] = brightness.mean + gain * (table.ln[s] - brightness.mean);
      values[at + BV] = (1 - gain) * brightness.variance;
    }
    this.spot[i] = s;
    this.missed[i] = 0;
  }

  /** Moves tracer `i` on by one frame. */
  predict(i: number): void {
    const { values } = this;
    const { jitter } = this.motion;
    const at = STRIDE * i;
    values[at + X] += values[at + VX];
    values[at + Y] += values[at + VY];
    values[at + PP] += 2 * values[at + PV] + values[at + VV] + 0.25 * jitter;
    values[at + PV] += values[at + VV] + 0.5 * jitter;
    values[at + VV] += jitter;
    if (this.told) {
      const { mean, variance, persistence } = this.brightness;
      values[at + B] = mean + persistence * (values[at + B] - mean);
      values[at + BV] = variance + persistence * persistence * (values[at + BV] - variance);
    }
  }

  /**
   * Cost of giving spot `s` to tracer `i`, relative to leaving both alone: -2 ln of the likelihood
   * ratio. Negative where the link is the better explanation; 0 where it is surely not.
   */
  cost(i: number, s: number): number {
    const { values, table } = this;
    const at = STRIDE * i;
    const dx = table.xPx[s] - values[at + X];
    const dy = table.yPx[s] - values[at + Y];
    const squared = dx * dx + dy * dy;
    const narrow = values[at + PP] + table.variance[s];
    const wide = narrow + this.jumpVariance;
    if (squared > this.farthest * wide) return 0;
    let density =
      (this.plainWeight / narrow) * Math.exp((-0.5 * squared) / narrow) +
      (this.jumpWeight / wide) * Math.exp((-0.5 * squared) / wide);
    if (this.told) {
      const off = table.ln[s] - values[at + B];
      const total = values[at + BV] + table.lnVariance[s];
      const ratio = Math.exp(0.5 * (table.lnCommon[s] - (off * off) / total)) / Math.sqrt(total);
      density *= (1 - BRIGHTNESS_OUTLIERS) * ratio + BRIGHTNESS_OUTLIERS;
    }
    return this.base[Math.min(this.missed[i], MISSED_MOST)] - 2 * Math.log(density + 1e-300);
  }

  /** Corrects tracer `i` by the spot that it was given. */
  update(i: number, s: number): void {
    const { values, table, motion } = this;
    const at = STRIDE * i;
    const variance = table.variance[s];
    const dx = table.xPx[s] - values[at + X];
    const dy = table.yPx[s] - values[at + Y];
    const squared = dx * dx + dy * dy;
    const narrow = values[at + PP] + variance;
    const wide = narrow + this.jumpVariance;
    // Did the velocity jump? Then the past says little of it.
    const plain = ((1 - motion.jumpShare) * Math.exp((-0.5 * squared) / narrow)) / narrow;
    const jumped = (motion.jumpShare * Math.exp((-0.5 * squared) / wide)) / wide;
    const extra = (plain + jumped > 0 ? jumped / (plain + jumped) : 1) * this.jumpVariance;
    const pp = values[at + PP] + extra;
    const pv = values[at + PV] + extra;
    const gain = pp / (pp + variance);
    const gainV = pv / (pp + variance);
    values[at + X] += gain * dx;
    values[at + Y] += gain * dy;
    values[at + VX] += gainV * dx;
    values[at + VY] += gainV * dy;
    values[at + PP] = (1 - gain) * pp;
    values[at + PV] = (1 - gain) * pv;
    values[at + VV] += extra - gainV * pv;
    if (this.told) this.updateBrightness(at, s);
    this.spot[i] = s;
    this.missed[i] = 0;
  }

  private updateBrightness(at: number, s: number): void {
    const { values, table } = this;
    const off = table.ln[s] - values[at + B];
    const total = values[at + BV] + table.lnVariance[s];
    const ratio = Math.exp(0.5 * (table.lnCommon[s] - (off * off) / total)) / Math.sqrt(total);
    const trust =
      ((1 - BRIGHTNESS_OUTLIERS) * ratio) / ((1 - BRIGHTNESS_OUTLIERS) * ratio + BRIGHTNESS_OUTLIERS);
    const gain = (trust * values[at + BV]) / total;
    values[at + B] += gain * off;
    values[at + BV] *= 1 - gain;
  }

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
    const apart2 = (apartX * apartX + apartY * apartY) / (MERGED_SIZES * MERGED_SIZES * sizePx * sizePx);
    const unresolved = Math.exp(-apart2 * apart2);
    let share = 0.5;
    let bright = 1;
    if (this.told) {
      share = 1 / (1 + Math.exp(values[b + B] - values[a + B]));
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
    const alone = 1 - motion.foundShare * STILL_THERE ** this.missed[j];
    return (
      this.base[Math.min(this.missed[i], MISSED_MOST)] -
      2 * Math.log((unresolved * density * bright) / alone + 1e-300)
    );
  }

  /** Squared distance of spot `s` from where tracer `i` is expected. */
  offSquared(i: number, s: number): number {
    const dx = this.table.xPx[s] - this.values[STRIDE * i + X];
    const dy = this.table.yPx[s] - this.values[STRIDE * i + Y];
    return dx * dx + dy * dy;
  }
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
