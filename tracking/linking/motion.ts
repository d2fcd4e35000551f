/** How tracers move and appear, measured from a first pass of linking. */
export interface MotionStatistics {
  /** Variance of the change of velocity from frame to frame, px^2, per axis. */
  jitter: number;
  /** Velocity of a tracer before anything is known of it: mean and variance per axis, px and px^2. */
  meanX: number;
  meanY: number;
  startVariance: number;
  /** Share of steps in which a tracer suddenly changes its velocity, and the variance of that change. */
  jumpShare: number;
  jumpVariance: number;
  /** Chance that a tracer in sight is found in a frame. */
  foundShare: number;
  /** New tracers and false spots per frame and px^2. */
  newPerPx2: number;
}

/** After each missed frame a tracer is still there with about this chance: it blinked, or it left. */
const STILL_THERE = 0.4;

/**
 * Tracers in flight: position and velocity of each as a Kalman filter with constant velocity,
 * random changes of it, and now and then a jump. Both axes share one covariance. Slot `i` of every
 * array belongs to one tracer; slots keep the order in which tracers appeared.
 */
export class MovingTracers {
  count = 0;
  x = new Float64Array(1024);
  y = new Float64Array(1024);
  vx = new Float64Array(1024);
  vy = new Float64Array(1024);
  /** Covariance: position, position with velocity, velocity. */
  pp = new Float64Array(1024);
  pv = new Float64Array(1024);
  vv = new Float64Array(1024);
  lastX = new Float64Array(1024);
  lastY = new Float64Array(1024);
  /** Last spot of the tracer, and frames missed since. */
  spot = new Int32Array(1024);
  missed = new Int32Array(1024);

  constructor(private readonly statistics: MotionStatistics) {}

  start(spot: number, x: number, y: number, variance: number): void {
    if (this.count === this.x.length) this.grow();
    const i = this.count++;
    const { meanX, meanY, startVariance } = this.statistics;
    this.x[i] = x;
    this.y[i] = y;
    this.vx[i] = meanX;
    this.vy[i] = meanY;
    this.pp[i] = variance;
    this.pv[i] = 0;
    this.vv[i] = startVariance;
    this.lastX[i] = x;
    this.lastY[i] = y;
    this.spot[i] = spot;
    this.missed[i] = 0;
  }

  /** Moves all on by one frame. */
  predict(): void {
    const { jitter } = this.statistics;
    for (let i = 0; i < this.count; i++) {
      this.x[i] += this.vx[i];
      this.y[i] += this.vy[i];
      this.pp[i] += 2 * this.pv[i] + this.vv[i] + 0.25 * jitter;
      this.pv[i] += this.vv[i] + 0.5 * jitter;
      this.vv[i] += jitter;
    }
  }

  /**
   * Cost of giving a spot to tracer `i`, relative to leaving both alone: -2 ln of the likelihood
   * ratio. Negative where the link is the better explanation.
   */
  cost(i: number, dx: number, dy: number, variance: number): number {
    const { jumpShare, jumpVariance, foundShare, newPerPx2 } = this.statistics;
    const squared = dx * dx + dy * dy;
    const narrow = this.pp[i] + variance;
    const wide = narrow + jumpVariance;
    const density =
      ((1 - jumpShare) * Math.exp((-0.5 * squared) / narrow)) / (2 * Math.PI * narrow) +
      (jumpShare * Math.exp((-0.5 * squared) / wide)) / (2 * Math.PI * wide);
    const found = foundShare * STILL_THERE ** this.missed[i];
    return -2 * Math.log((density * found) / ((1 - found) * newPerPx2) + 1e-300);
  }

  /** Corrects tracer `i` by the spot that it was given. */
  update(i: number, spot: number, x: number, y: number, variance: number): void {
    const dx = x - this.x[i];
    const dy = y - this.y[i];
    const { jumpShare, jumpVariance } = this.statistics;
    const squared = dx * dx + dy * dy;
    const narrow = this.pp[i] + variance;
    const wide = narrow + jumpVariance;
    // Did the velocity jump? Then the past says little of it.
    const usual = ((1 - jumpShare) * Math.exp((-0.5 * squared) / narrow)) / narrow;
    const jumped = (jumpShare * Math.exp((-0.5 * squared) / wide)) / wide;
    const share = jumped / (usual + jumped + 1e-300);
    const extra = (squared > 0 && usual + jumped === 0 ? 1 : share) * jumpVariance;
    const pp = this.pp[i] + extra;
    const pv = this.pv[i] + extra;
    const vv = this.vv[i] + extra;
    const total = pp + variance;
    const gain = pp / total;
    const gainV = pv / total;
    this.x[i] += gain * dx;
    this.y[i] += gain * dy;
    this.vx[i] += gainV * dx;
    this.vy[i] += gainV * dy;
    this.pp[i] = (1 - gain) * pp;
    this.pv[i] = (1 - gain) * pv;
    this.vv[i] = vv - gainV * pv;
    this.lastX[i] = x;
    this.lastY[i] = y;
    this.spot[i] = spot;
    this.missed[i] = 0;
  }

  /** Drops tracers missed for too long; the others keep their order. */
  forget(missedMost: number): void {
    let kept = 0;
    for (let i = 0; i < this.count; i++) {
      if (this.missed[i] > missedMost) continue;
      if (kept !== i) this.copy(i, kept);
      kept++;
    }
    this.count = kept;
  }

  private columns(): Float64Array[] {
    return [this.x, this.y, this.vx, this.vy, this.pp, this.pv, this.vv, this.lastX, this.lastY];
  }

  private copy(from: number, to: number): void {
    this.x[to] = this.x[from];
    this.y[to] = this.y[from];
    this.vx[to] = this.vx[from];
    this.vy[to] = this.vy[from];
    this.pp[to] = this.pp[from];
    this.pv[to] = this.pv[from];
    this.vv[to] = this.vv[from];
    this.lastX[to] = this.lastX[from];
    this.lastY[to] = this.lastY[from];
    this.spot[to] = this.spot[from];
    this.missed[to] = this.missed[from];
  }

  private grow(): void {
    const [x, y, vx, vy, pp, pv, vv, lastX, lastY] = this.columns().map((old) => {
      const wider = new Float64Array(2 * old.length);
      wider.set(old);
      return wider;
    });
    Object.assign(this, { x, y, vx, vy, pp, pv, vv, lastX, lastY });
    const spot = new Int32Array(x.length);
    spot.set(this.spot);
    const missed = new Int32Array(x.length);
    missed.set(this.missed);
    Object.assign(this, { spot, missed });
  }
}
