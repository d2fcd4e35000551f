import type { BrightnessStatistics } from './brightness-statistics';
import type { MotionStatistics } from './motion-statistics';
import type { SpotTable } from './spot-table';

/** After each missed frame a tracer is still there with about this chance: it blinked, or it left. */
export const STILL_THERE = 0.4;
/** Share of spots whose brightness is wrong beyond their stated error: merged with another one. */
export const BRIGHTNESS_OUTLIERS = 0.05;
export const MISSED_MOST = 16;

/** Values of one tracer, one behind the other: `values[STRIDE * i + X]` and so on. */
export const STRIDE = 9;
export const X = 0;
export const Y = 1;
export const VX = 2;
export const VY = 3;
/** Covariance, the same on both axes: position, position with velocity, velocity. */
export const PP = 4;
export const PV = 5;
export const VV = 6;
/** Ln brightness and its variance. */
export const B = 7;
export const BV = 8;

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
  protected readonly base = new Float64Array(MISSED_MOST + 1);
  private readonly farthest: number;
  protected readonly jumpVariance: number;
  private readonly plainWeight: number;
  private readonly jumpWeight: number;
  protected readonly told: boolean;

  /** @param direction -1 where the film is read backwards. */
  constructor(
    protected readonly motion: MotionStatistics,
    protected readonly brightness: BrightnessStatistics,
    protected readonly table: SpotTable,
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
    const { values } = this;
    for (let k = 0; k < STRIDE; k++) values[STRIDE * to + k] = values[STRIDE * from + k];
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
    const variance = table.variance[s] + table.merged[s];
    const dx = table.xPx[s] - values[at + X];
    const dy = table.yPx[s] - values[at + Y];
    const squared = dx * dx + dy * dy;
    const narrow = values[at + PP] + variance;
    const wide = narrow + this.jumpVariance;
    // Did the velocity jump? Then the past says little of it. Within one deviation it surely didn't.
    let extra = 0;
    if (squared > narrow) {
      const plain = ((1 - motion.jumpShare) * Math.exp((-0.5 * squared) / narrow)) / narrow;
      const jumped = (motion.jumpShare * Math.exp((-0.5 * squared) / wide)) / wide;
      extra = (plain + jumped > 0 ? jumped / (plain + jumped) : 1) * this.jumpVariance;
    }
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
    if (this.told && table.merged[s] === 0) this.updateBrightness(at, s);
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
}
