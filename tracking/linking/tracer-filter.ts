import type { BrightnessStatistics } from './brightness-statistics';
import { flowAt } from './flow-field';
import type { MotionStatistics } from './motion-statistics';
import type { SpotTable } from './spot-table';

/** After each missed frame a tracer is still there with about this chance: it blinked, or it left. */
export const STILL_THERE = 0.6;
/** Share of spots whose brightness is wrong beyond their stated error: merged with another one. */
export const BRIGHTNESS_OUTLIERS = 0.05;
export const MISSED_MOST = 16;
/** Chance per frame that a tracer changes its population: it is caught by a line, or freed. */
const SWITCHED = 0.01;

/** Squared deviations within which a spot that only one tracer may own is its own without further questions. */
const SURELY_NEAR = 6;

/** Values of one tracer, one behind the other: `values[STRIDE * i + B]` and so on. */
export const STRIDE = 18;
/** Ln brightness and its variance. */
export const B = 0;
export const BV = 1;
/** Then for each population, from `MODES + MODE * m` on: what it would be if the tracer was one of it. */
export const MODES = 2;
export const MODE = 8;
export const X = 0;
export const Y = 1;
export const VX = 2;
export const VY = 3;
/** Covariance, the same on both axes: position, position with velocity, velocity. */
export const PP = 4;
export const PV = 5;
export const VV = 6;
/** Probability of being one of it. */
export const W = 7;

/**
 * Tracers in flight. A tracer is of one of at most two populations, those of `MotionStatistics`,
 * which are filtered side by side as interacting multiple models (Blom & Bar-Shalom, IEEE Trans.
 * Autom. Control 33, 780 (1988)): in each, position and velocity as a Kalman filter of constant
 * velocity, random changes of it and now and then a jump (two-component mixture); the spots say
 * which of the two it is. Ln brightness is that of an autoregressive process. A slot holds one tracer.
 */
export class TracerFilter {
  values: Float64Array;
  /** Last spot of the tracer, and frames missed since. */
  spot: Int32Array;
  missed: Int32Array;
  /** -2 ln of the odds of being found over those of being missed and another one coming up. */
  protected readonly base = new Float64Array(MISSED_MOST + 1);
  readonly modes: number;
  /** A spot beyond so many variances (jump included) is surely none of the tracer's. */
  readonly farthest: number;
  /** Chance per frame of going over to the first and to the second population. */
  private readonly switchToA: number;
  private readonly switchToB: number;
  private readonly jitter: Float64Array;
  protected readonly jumpShare: Float64Array;
  readonly jumpVariance: Float64Array;
  private readonly plainWeight: Float64Array;
  private readonly jumpWeight: Float64Array;
  /** Largest variance of prediction and spot at which a spot near by surely costs less than nothing, by frames missed. */
  private readonly sureBelow = new Float64Array(MISSED_MOST + 1);
  protected readonly told: boolean;
  private readonly flow = new Float64Array(2);

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
    const { populations } = motion;
    this.modes = populations.length;
    this.switchToA = SWITCHED * populations[0].share;
    this.switchToB = SWITCHED * (1 - populations[0].share);
    this.jitter = Float64Array.from(populations, ({ jitter }) => jitter);
    this.jumpShare = Float64Array.from(populations, ({ jumpShare }) => jumpShare);
    this.jumpVariance = Float64Array.from(populations, ({ jumpVariance }) => jumpVariance);
    this.plainWeight = Float64Array.from(populations, ({ jumpShare }) => (1 - jumpShare) / (2 * Math.PI));
    this.jumpWeight = Float64Array.from(populations, ({ jumpShare }) => jumpShare / (2 * Math.PI));
    this.told = brightness.variance > 0;
    const sure = (this.told ? BRIGHTNESS_OUTLIERS : 1) * Math.exp(-0.5 * SURELY_NEAR);
    const plain = Math.min(...this.plainWeight);
    for (let k = 0; k <= MISSED_MOST; k++) this.sureBelow[k] = plain * sure * Math.exp(-0.5 * this.base[k]);
    // Brightness favours a link by at most the density of the sharpest spot over that of all.
    const bonus = this.told ? Math.log((brightness.variance + 4e-4) / 4e-4) + 12 : 0;
    const narrowest = Math.min(...this.jumpVariance);
    this.farthest = Math.max(20, bonus - this.base[0] - 2 * Math.log(2 * Math.PI * narrowest));
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
    const end = MODES + MODE * this.modes;
    for (let k = 0; k < end; k++) values[STRIDE * to + k] = values[STRIDE * from + k];
    this.spot[to] = this.spot[from];
    this.missed[to] = this.missed[from];
  }

  /** Gives up tracers that were missed for longer than that; the others move up. Returns how many are left. */
  forget(count: number, mayVanishFrames: number): number {
    let kept = 0;
    for (let i = 0; i < count; i++) {
      if (this.missed[i] > mayVanishFrames) continue;
      if (kept !== i) this.copy(i, kept);
      kept++;
    }
    return kept;
  }

  start(i: number, s: number): void {
    const { brightness, table, values, flow } = this;
    const at = STRIDE * i;
    const { populations } = this.motion;
    for (let m = 0; m < this.modes; m++) {
      const of = at + MODES + MODE * m;
      const { flow: field, startVariance, share } = populations[m];
      flowAt(field, table.xPx[s], table.yPx[s], flow);
      values[of + X] = table.xPx[s];
      values[of + Y] = table.yPx[s];
      values[of + VX] = this.direction * flow[0];
      values[of + VY] = this.direction * flow[1];
      values[of + PP] = table.variance[s];
      values[of + PV] = 0;
      values[of + VV] = startVariance;
      values[of + W] = share;
    }
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
    const at = STRIDE * i;
    if (this.modes === 2) {
      this.exchange(at + MODES, at + MODES + MODE);
      this.glide(at + MODES + MODE, this.jitter[1]);
    }
    this.glide(at + MODES, this.jitter[0]);
    if (this.told) {
      const { mean, variance, persistence } = this.brightness;
      values[at + B] = mean + persistence * (values[at + B] - mean);
      values[at + BV] = variance + persistence * persistence * (values[at + BV] - variance);
    }
  }

  private glide(of: number, jitter: number): void {
    const { values } = this;
    values[of + X] += values[of + VX];
    values[of + Y] += values[of + VY];
    values[of + PP] += 2 * values[of + PV] + values[of + VV] + 0.25 * jitter;
    values[of + PV] += values[of + VV] + 0.5 * jitter;
    values[of + VV] += jitter;
  }

  /** A tracer may have changed its population since the frame before: each takes its part of the other. */
  private exchange(a: number, b: number): void {
    const { values } = this;
    const toB = this.switchToB * values[a + W];
    const toA = this.switchToA * values[b + W];
    const weightA = values[a + W] - toB + toA;
    const weightB = values[b + W] - toA + toB;
    const p = toA / weightA;
    const q = toB / weightB;
    const dx = values[b + X] - values[a + X];
    const dy = values[b + Y] - values[a + Y];
    const dvx = values[b + VX] - values[a + VX];
    const dvy = values[b + VY] - values[a + VY];
    const pp = values[b + PP] - values[a + PP];
    const pv = values[b + PV] - values[a + PV];
    const vv = values[b + VV] - values[a + VV];
    // What the means of the two differ by widens the mixture, the same on both axes.
    const spreadPP = 0.5 * (dx * dx + dy * dy);
    const spreadPV = 0.5 * (dx * dvx + dy * dvy);
    const spreadVV = 0.5 * (dvx * dvx + dvy * dvy);
    values[a + X] += p * dx;
    values[a + Y] += p * dy;
    values[a + VX] += p * dvx;
    values[a + VY] += p * dvy;
    values[a + PP] += p * (pp + (1 - p) * spreadPP);
    values[a + PV] += p * (pv + (1 - p) * spreadPV);
    values[a + VV] += p * (vv + (1 - p) * spreadVV);
    values[a + W] = weightA;
    values[b + X] -= q * dx;
    values[b + Y] -= q * dy;
    values[b + VX] -= q * dvx;
    values[b + VY] -= q * dvy;
    values[b + PP] += q * ((1 - q) * spreadPP - pp);
    values[b + PV] += q * ((1 - q) * spreadPV - pv);
    values[b + VV] += q * ((1 - q) * spreadVV - vv);
    values[b + W] = weightB;
  }

  /**
   * Cost of giving spot `s` to tracer `i`, relative to leaving both alone: -2 ln of the likelihood
   * ratio. Negative where the link is the better explanation; 0 where it is surely not.
   */
  cost(i: number, s: number): number {
    const at = STRIDE * i;
    let density = this.density(0, at + MODES, s);
    if (this.modes === 2) density += this.density(1, at + MODES + MODE, s);
    if (density === 0) return 0;
    if (this.told) density *= this.brightnessFactor(at, s);
    return this.base[Math.min(this.missed[i], MISSED_MOST)] - 2 * Math.log(density + 1e-300);
  }

  /** True where the cost of spot `s` is negative in each population, whatever its brightness. */
  surelyOwns(i: number, s: number): boolean {
    const most = this.sureBelow[Math.min(this.missed[i], MISSED_MOST)];
    const at = STRIDE * i + MODES;
    return this.isSure(at, s, most) && (this.modes === 1 || this.isSure(at + MODE, s, most));
  }

  private isSure(of: number, s: number, most: number): boolean {
    const { values, table } = this;
    const dx = table.xPx[s] - values[of + X];
    const dy = table.yPx[s] - values[of + Y];
    const narrow = values[of + PP] + table.variance[s];
    return narrow < most && dx * dx + dy * dy < SURELY_NEAR * narrow;
  }

  /** Density of spot `s` for a tracer of population `m`, times the probability of that. */
  private density(m: number, of: number, s: number): number {
    const { values, table } = this;
    const dx = table.xPx[s] - values[of + X];
    const dy = table.yPx[s] - values[of + Y];
    const squared = dx * dx + dy * dy;
    const narrow = values[of + PP] + table.variance[s];
    const wide = narrow + this.jumpVariance[m];
    if (squared > this.farthest * wide) return 0;
    let density = (this.jumpWeight[m] / wide) * Math.exp((-0.5 * squared) / wide);
    // Beyond 8 deviations the jump alone counts.
    if (squared < 64 * narrow)
      density += (this.plainWeight[m] / narrow) * Math.exp((-0.5 * squared) / narrow);
    return values[of + W] * density;
  }

  private brightnessFactor(at: number, s: number): number {
    const { values, table } = this;
    const off = table.ln[s] - values[at + B];
    const total = values[at + BV] + table.lnVariance[s];
    const ratio = Math.exp(0.5 * (table.lnCommon[s] - (off * off) / total)) / Math.sqrt(total);
    return (1 - BRIGHTNESS_OUTLIERS) * ratio + BRIGHTNESS_OUTLIERS;
  }

  /** Corrects tracer `i` by the spot that it was given. */
  update(i: number, s: number): void {
    const { values, table } = this;
    const at = STRIDE * i;
    this.correct(0, at + MODES, s);
    if (this.modes === 2) {
      this.correct(1, at + MODES + MODE, s);
      this.share(at + MODES, at + MODES + MODE);
    } else {
      values[at + MODES + W] = 1;
    }
    if (this.told && table.merged[s] === 0) this.updateBrightness(at, s);
    this.spot[i] = s;
    this.missed[i] = 0;
  }

  /** Kalman's correction in population `m`; its probability becomes that times the spot's density. */
  private correct(m: number, of: number, s: number): void {
    const { values, table } = this;
    const variance = table.variance[s] + table.merged[s];
    const dx = table.xPx[s] - values[of + X];
    const dy = table.yPx[s] - values[of + Y];
    const squared = dx * dx + dy * dy;
    const narrow = values[of + PP] + variance;
    let extra = 0;
    // Did the velocity jump? Then the past says little of it. Within one deviation it surely didn't.
    if (squared > narrow) {
      const jump = this.jumpVariance[m];
      const wide = narrow + jump;
      const plain =
        squared < 64 * narrow ? (this.plainWeight[m] / narrow) * Math.exp((-0.5 * squared) / narrow) : 0;
      const jumped = (this.jumpWeight[m] / wide) * Math.exp((-0.5 * squared) / wide);
      const density = plain + jumped;
      extra = (density > 0 ? jumped / density : 1) * jump;
      values[of + W] *= density + 1e-300;
    } else if (this.modes === 2) {
      values[of + W] *= (this.plainWeight[m] / narrow) * Math.exp((-0.5 * squared) / narrow);
    }
    const pp = values[of + PP] + extra;
    const pv = values[of + PV] + extra;
    const gain = pp / (pp + variance);
    const gainV = pv / (pp + variance);
    values[of + X] += gain * dx;
    values[of + Y] += gain * dy;
    values[of + VX] += gainV * dx;
    values[of + VY] += gainV * dy;
    values[of + PP] = (1 - gain) * pp;
    values[of + PV] = (1 - gain) * pv;
    values[of + VV] += extra - gainV * pv;
  }

  /** Makes the probabilities of both populations add up to one; where neither explains the spot, they start anew. */
  private share(a: number, b: number): void {
    const { values } = this;
    const sum = values[a + W] + values[b + W];
    if (sum > 1e-290) {
      values[a + W] /= sum;
      values[b + W] /= sum;
    } else {
      values[a + W] = this.motion.populations[0].share;
      values[b + W] = this.motion.populations[1].share;
    }
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
