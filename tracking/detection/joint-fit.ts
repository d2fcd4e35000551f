import { choleskyFactor, choleskyInverseDiagonal, choleskySolve } from './cholesky';
import { expectLight } from './fit-expectation';
import { accumulateInformation } from './fit-information';
import type { FitWindow } from './fit-window';
import { FitWork, JOINT_SPOTS_MOST, PARAMETERS_MOST } from './fit-work';

const ITERATIONS_MOST = 25;
/** Relative change of brightness that counts as little as a step of one pixel. */
const STEP_DONE_BRIGHTNESS_PER_PX = 0.5;
/** Neighbours creep towards their places in small steps: theirs must be smaller by this. */
const STEP_DONE_TOGETHER = 0.25;
/** Likelihoods that differ by less are equal: that of compiled fits is known to about this. */
const LIKELIHOOD_NOISE = 1e-3;
/** No spot moves farther per step than this many of its own widths, or loses more than this of its light. */
const STEP_MOST_SIGMAS = 0.6;
const BRIGHTNESS_KEPT = 0.25;
const BRIGHTNESS_LEAST = 1;

/**
 * Maximum-likelihood fit of up to `JOINT_SPOTS_MOST` pixel-integrated Gaussian spots and one common
 * offset of the background. Each pixel counts as Poisson with the read variance added to data and
 * expectation alike. Fisher scoring with damping. Set `count`, `x`, `y`, `n`, then call `run`; the
 * same arrays hold the result. Nothing is allocated per fit.
 */
export class JointFit extends FitWork {
  readonly sx = new Float64Array(JOINT_SPOTS_MOST);
  readonly sy = new Float64Array(JOINT_SPOTS_MOST);
  readonly sn = new Float64Array(JOINT_SPOTS_MOST);
  converged = false;

  private readonly damped = new Float64Array(PARAMETERS_MOST * PARAMETERS_MOST);
  private readonly step = new Float64Array(PARAMETERS_MOST);
  private readonly variance = new Float64Array(PARAMETERS_MOST);
  private readonly kept = new Float64Array(PARAMETERS_MOST);

  run(window: FitWindow): void {
    this.makeRoom(window.width * window.height);
    for (let s = 0; s < this.count; s++) {
      this.boxX[s] = Math.round(this.x[s]) - this.reach;
      this.boxY[s] = Math.round(this.y[s]) - this.reach;
      this.n[s] = Math.max(BRIGHTNESS_LEAST, this.n[s]);
    }
    const size = 3 * this.count + 1;
    this.offset = 0;
    this.converged = false;
    // One spot alone converges from where the filter found it; neighbours can overshoot.
    const careful = this.count > 1;
    let damping = careful ? 0.01 : 0;
    let objective = expectLight(this, window, careful);
    accumulateInformation(this, window);
    for (let iteration = 0; iteration < ITERATIONS_MOST; iteration++) {
      if (!this.solve(size, damping)) {
        damping = Math.max(0.01, 10 * damping);
        continue;
      }
      this.keep();
      const done = this.move();
      const next = expectLight(this, window, careful);
      if (careful && next < objective - LIKELIHOOD_NOISE) {
        this.restore();
        damping = Math.max(0.01, 8 * damping);
        if (damping > 1e6) break;
        continue;
      }
      damping = careful ? damping / 6 : damping;
      objective = next;
      accumulateInformation(this, window);
      if (done) {
        this.converged = true;
        break;
      }
    }
    if (careful) {
      expectLight(this, window, false);
      accumulateInformation(this, window);
    }
    this.standardErrors(size);
  }

  /** Log-likelihood at the fit's values, up to a constant that depends on the window's data alone. */
  logLikelihood(window: FitWindow): number {
    return expectLight(this, window, true);
  }

  /** Twice the gain in log-likelihood over a background without any spot. Leaves the fit's values alone. */
  significance(window: FitWindow): number {
    const withSpots = expectLight(this, window, true);
    const keptCount = this.count;
    const keptOffset = this.offset;
    this.count = 0;
    this.offset = 0;
    for (let i = 0; i < 6; i++) {
      expectLight(this, window, false);
      const pixels = window.width * window.height;
      let slope = -this.offset / this.offsetSpreadE ** 2;
      let curvature = 1 / this.offsetSpreadE ** 2;
      for (let k = 0; k < pixels; k++) {
        slope += this.score[k];
        curvature += this.weight[k];
      }
      this.offset += slope / curvature;
    }
    const without = expectLight(this, window, true);
    this.count = keptCount;
    this.offset = keptOffset;
    expectLight(this, window, false);
    return 2 * (withSpots - without);
  }

  private solve(size: number, damping: number): boolean {
    const { damped, information, step, gradient } = this;
    damped.set(information);
    for (let i = 0; i < size; i++) damped[i * PARAMETERS_MOST + i] *= 1 + damping;
    if (!choleskyFactor(damped, size, PARAMETERS_MOST)) return false;
    for (let i = 0; i < size; i++) step[i] = gradient[i];
    choleskySolve(damped, size, PARAMETERS_MOST, step);
    return true;
  }

  private keep(): void {
    this.kept[0] = this.offset;
    for (let s = 0; s < this.count; s++) {
      this.kept[3 * s + 1] = this.x[s];
      this.kept[3 * s + 2] = this.y[s];
      this.kept[3 * s + 3] = this.n[s];
    }
  }

  private restore(): void {
    this.offset = this.kept[0];
    for (let s = 0; s < this.count; s++) {
      this.x[s] = this.kept[3 * s + 1];
      this.y[s] = this.kept[3 * s + 2];
      this.n[s] = this.kept[3 * s + 3];
    }
  }

  /** Applies the step, shortened where it would leap; true when nothing moved to speak of. */
  private move(): boolean {
    const most = STEP_MOST_SIGMAS * this.spotSigmaPx;
    const small = this.count > 1 ? STEP_DONE_TOGETHER * this.stepDonePx : this.stepDonePx;
    let done = true;
    this.offset += this.step[0];
    for (let s = 0; s < this.count; s++) {
      const dx = Math.max(-most, Math.min(most, this.step[3 * s + 1]));
      const dy = Math.max(-most, Math.min(most, this.step[3 * s + 2]));
      const n = Math.max(BRIGHTNESS_LEAST, BRIGHTNESS_KEPT * this.n[s], this.n[s] + this.step[3 * s + 3]);
      if (Math.abs(dx) > small || Math.abs(dy) > small) done = false;
      if (Math.abs(n - this.n[s]) > STEP_DONE_BRIGHTNESS_PER_PX * small * n) done = false;
      this.x[s] = Math.max(this.boxX[s], Math.min(this.boxX[s] + this.side - 1, this.x[s] + dx));
      this.y[s] = Math.max(this.boxY[s], Math.min(this.boxY[s] + this.side - 1, this.y[s] + dy));
      this.n[s] = n;
    }
    return done;
  }

  private standardErrors(size: number): void {
    this.damped.set(this.information);
    const good = choleskyFactor(this.damped, size, PARAMETERS_MOST);
    if (good) choleskyInverseDiagonal(this.damped, size, PARAMETERS_MOST, this.step, this.variance);
    for (let s = 0; s < this.count; s++) {
      this.sx[s] = good ? Math.sqrt(this.variance[3 * s + 1]) : Infinity;
      this.sy[s] = good ? Math.sqrt(this.variance[3 * s + 2]) : Infinity;
      this.sn[s] = good ? Math.sqrt(this.variance[3 * s + 3]) : Infinity;
    }
  }
}
