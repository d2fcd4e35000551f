import { pixelShares } from '../pixel-gaussian';
import { choleskyFactor, choleskyInverseDiagonal, choleskySolve } from './cholesky';
import type { FitWindow } from './fit-window';

/** Most spots fitted at once; larger groups are fitted in turns. */
export const JOINT_SPOTS_MOST = 6;

const PARAMETERS_MOST = 3 * JOINT_SPOTS_MOST + 1;
const ITERATIONS_MOST = 25;
/** A step this small leaves an error far below the standard error of any spot that is found. */
const STEP_DONE_PX = 0.006;
const STEP_DONE_BRIGHTNESS = 0.003;
/** No spot moves farther per step than this many of its own widths, or loses more than this of its light. */
const STEP_MOST_SIGMAS = 0.6;
const BRIGHTNESS_KEPT = 0.25;
const BRIGHTNESS_LEAST = 1;
const EXPECTED_LEAST = 0.05;

/**
 * Maximum-likelihood fit of up to `JOINT_SPOTS_MOST` pixel-integrated Gaussian spots and one common
 * offset of the background. Each pixel counts as Poisson with the read variance added to data and
 * expectation alike. Fisher scoring with damping. Set `count`, `x`, `y`, `n`, then call `run`; the
 * same arrays hold the result. Nothing is allocated per fit.
 */
export class JointFit {
  count = 0;
  readonly x = new Float64Array(JOINT_SPOTS_MOST);
  readonly y = new Float64Array(JOINT_SPOTS_MOST);
  /** Photoelectrons. */
  readonly n = new Float64Array(JOINT_SPOTS_MOST);
  readonly sx = new Float64Array(JOINT_SPOTS_MOST);
  readonly sy = new Float64Array(JOINT_SPOTS_MOST);
  readonly sn = new Float64Array(JOINT_SPOTS_MOST);
  /** Background beyond the window's `fixed`, electrons per pixel. */
  offset = 0;
  converged = false;
  /** Largest squared score of an elongation, and the split (px, along x and y) it suggests. */
  elongation = 0;
  splitX = 0;
  splitY = 0;

  private readonly side: number;
  private readonly share: Float64Array;
  private readonly first: Float64Array;
  private readonly second: Float64Array;
  private readonly boxX = new Int32Array(JOINT_SPOTS_MOST);
  private readonly boxY = new Int32Array(JOINT_SPOTS_MOST);
  private readonly shareY: Float64Array;
  private readonly firstY: Float64Array;
  private readonly secondY: Float64Array;
  private weight = new Float64Array(256);
  private score = new Float64Array(256);
  private readonly information = new Float64Array(PARAMETERS_MOST * PARAMETERS_MOST);
  private readonly damped = new Float64Array(PARAMETERS_MOST * PARAMETERS_MOST);
  private readonly gradient = new Float64Array(PARAMETERS_MOST);
  private readonly step = new Float64Array(PARAMETERS_MOST);
  private readonly variance = new Float64Array(PARAMETERS_MOST);
  private readonly kept = new Float64Array(PARAMETERS_MOST);

  /**
   * @param reach half the side of the box of pixels that belongs to a spot, px.
   * @param offsetSpreadE how far the background may be off, electrons r.m.s. per pixel.
   */
  constructor(
    private readonly spotSigmaPx: number,
    readonly reach: number,
    public offsetSpreadE: number,
  ) {
    this.side = 2 * reach + 1;
    const room = JOINT_SPOTS_MOST * this.side;
    this.share = new Float64Array(room);
    this.first = new Float64Array(room);
    this.second = new Float64Array(room);
    this.shareY = new Float64Array(room);
    this.firstY = new Float64Array(room);
    this.secondY = new Float64Array(room);
  }

  run(window: FitWindow): void {
    const pixels = window.width * window.height;
    if (pixels > this.weight.length) {
      this.weight = new Float64Array(2 * pixels);
      this.score = new Float64Array(2 * pixels);
    }
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
    let objective = this.expect(window, careful);
    this.accumulate(window);
    for (let iteration = 0; iteration < ITERATIONS_MOST; iteration++) {
      if (!this.solve(size, damping)) {
        damping = Math.max(0.01, 10 * damping);
        continue;
      }
      this.keep();
      const done = this.move();
      const next = this.expect(window, careful);
      if (careful && next < objective - 1e-9) {
        this.restore();
        damping = Math.max(0.01, 8 * damping);
        if (damping > 1e6) break;
        continue;
      }
      damping = careful ? damping / 6 : damping;
      objective = next;
      this.accumulate(window);
      if (done) {
        this.converged = true;
        break;
      }
    }
    if (careful) {
      this.expect(window, false);
      this.accumulate(window);
    }
    this.standardErrors(size);
  }

  /** Log-likelihood at the fit's values, up to a constant that depends on the window's data alone. */
  logLikelihood(window: FitWindow): number {
    return this.expect(window, true);
  }

  /** Twice the gain in log-likelihood over a background without any spot. Leaves the fit's values alone. */
  significance(window: FitWindow): number {
    const withSpots = this.expect(window, true);
    const keptCount = this.count;
    const keptOffset = this.offset;
    this.count = 0;
    this.offset = 0;
    for (let i = 0; i < 6; i++) {
      this.expect(window, false);
      const pixels = window.width * window.height;
      let slope = -this.offset / this.offsetSpreadE ** 2;
      let curvature = 1 / this.offsetSpreadE ** 2;
      for (let k = 0; k < pixels; k++) {
        slope += this.score[k];
        curvature += this.weight[k];
      }
      this.offset += slope / curvature;
    }
    const without = this.expect(window, true);
    this.count = keptCount;
    this.offset = keptOffset;
    this.expect(window, false);
    return 2 * (withSpots - without);
  }

  /** Score test of whether spot `s` is wider one way than the other; call right after `run`. */
  measureElongation(window: FitWindow, s: number): void {
    const { side } = this;
    const at = s * side;
    let ssE = 0;
    let ssX = 0;
    let infoE = 0;
    let infoX = 0;
    for (let j = 0; j < side; j++) {
      const row = this.boxY[s] + j - window.y0;
      if (row < 0 || row >= window.height) continue;
      const p = this.shareY[at + j];
      const d = this.firstY[at + j];
      const dd = this.secondY[at + j];
      for (let i = 0; i < side; i++) {
        const column = this.boxX[s] + i - window.x0;
        if (column < 0 || column >= window.width) continue;
        const k = row * window.width + column;
        const shapeE = this.second[at + i] * p - this.share[at + i] * dd;
        const shapeX = this.first[at + i] * d;
        ssE += this.score[k] * shapeE;
        ssX += this.score[k] * shapeX;
        infoE += this.weight[k] * shapeE * shapeE;
        infoX += this.weight[k] * shapeX * shapeX;
      }
    }
    this.elongation = 0;
    if (!(infoE > 0 && infoX > 0)) return;
    this.elongation = (ssE * ssE) / infoE + (ssX * ssX) / infoX;
    // Half the light at +-d adds n/4 d^2 (cos 2a (Pxx - Pyy) + 2 sin 2a Pxy).
    const cosine = (4 * ssE) / infoE;
    const sine = (2 * ssX) / infoX;
    const half = Math.sqrt(Math.sqrt(cosine * cosine + sine * sine) / this.n[s]);
    const angle = 0.5 * Math.atan2(sine, cosine);
    this.splitX = half * Math.cos(angle);
    this.splitY = half * Math.sin(angle);
  }

  /** Shapes, expected light, weights and scores at the present values; the log-likelihood if wanted. */
  private expect(window: FitWindow, wanted: boolean): number {
    const { side, spotSigmaPx, weight, score } = this;
    const { data, fixed, used } = window;
    const pixels = window.width * window.height;
    for (let k = 0; k < pixels; k++) weight[k] = fixed[k] + this.offset;
    for (let s = 0; s < this.count; s++) {
      const at = s * side;
      pixelShares(this.x[s] - this.boxX[s], spotSigmaPx, side, this.share, this.first, this.second, at);
      pixelShares(this.y[s] - this.boxY[s], spotSigmaPx, side, this.shareY, this.firstY, this.secondY, at);
      const left = Math.max(0, window.x0 - this.boxX[s]);
      const right = Math.min(side, window.x0 + window.width - this.boxX[s]);
      for (let j = 0; j < side; j++) {
        const row = this.boxY[s] + j - window.y0;
        if (row < 0 || row >= window.height) continue;
        const light = this.n[s] * this.shareY[at + j];
        const shift = row * window.width + this.boxX[s] - window.x0;
        for (let i = left; i < right; i++) weight[shift + i] += light * this.share[at + i];
      }
    }
    let sum = 0;
    for (let k = 0; k < pixels; k++) {
      if (used[k] === 0) {
        weight[k] = 0;
        score[k] = 0;
        continue;
      }
      const expected = weight[k] > EXPECTED_LEAST ? weight[k] : EXPECTED_LEAST;
      const w = 1 / expected;
      weight[k] = w;
      score[k] = data[k] * w - 1;
      if (wanted) sum += data[k] * Math.log(expected) - expected;
    }
    return sum - 0.5 * (this.offset / this.offsetSpreadE) ** 2;
  }

  /** Gradient and Fisher information of (offset, x, y, n, x, y, n, ...). */
  private accumulate(window: FitWindow): void {
    const { information, gradient, weight, score } = this;
    const pixels = window.width * window.height;
    information.fill(0);
    gradient.fill(0);
    const precision = 1 / this.offsetSpreadE ** 2;
    let w = precision;
    let g = -this.offset * precision;
    for (let k = 0; k < pixels; k++) {
      w += weight[k];
      g += score[k];
    }
    information[0] = w;
    gradient[0] = g;
    for (let s = 0; s < this.count; s++) {
      this.accumulateSpot(window, s);
      for (let t = 0; t < s; t++) this.accumulatePair(window, s, t);
    }
  }

  private accumulateSpot(window: FitWindow, s: number): void {
    const { side, weight, score, share, first, information, gradient } = this;
    const at = s * side;
    const left = Math.max(0, window.x0 - this.boxX[s]);
    const right = Math.min(side, window.x0 + window.width - this.boxX[s]);
    let xx = 0;
    let xy = 0;
    let xn = 0;
    let yy = 0;
    let yn = 0;
    let nn = 0;
    let bx = 0;
    let by = 0;
    let bn = 0;
    let gx = 0;
    let gy = 0;
    let gn = 0;
    for (let j = 0; j < side; j++) {
      const row = this.boxY[s] + j - window.y0;
      if (row < 0 || row >= window.height) continue;
      const shift = row * window.width + this.boxX[s] - window.x0;
      let pp = 0;
      let pd = 0;
      let dd = 0;
      let p1 = 0;
      let d1 = 0;
      let sp = 0;
      let sd = 0;
      for (let i = left; i < right; i++) {
        const w = weight[shift + i];
        const r = score[shift + i];
        const p = share[at + i];
        const d = first[at + i];
        const wp = w * p;
        const wd = w * d;
        pp += wp * p;
        pd += wp * d;
        dd += wd * d;
        p1 += wp;
        d1 += wd;
        sp += r * p;
        sd += r * d;
      }
      const p = this.shareY[at + j];
      const d = this.firstY[at + j];
      xx += dd * p * p;
      xy += pd * p * d;
      xn += pd * p * p;
      yy += pp * d * d;
      yn += pp * p * d;
      nn += pp * p * p;
      bx += d1 * p;
      by += p1 * d;
      bn += p1 * p;
      gx += sd * p;
      gy += sp * d;
      gn += sp * p;
    }
    const n = this.n[s];
    const a = 3 * s + 1;
    const rx = a * PARAMETERS_MOST;
    const ry = rx + PARAMETERS_MOST;
    const rn = ry + PARAMETERS_MOST;
    information[rx] = n * bx;
    information[ry] = n * by;
    information[rn] = bn;
    information[rx + a] = n * n * xx;
    information[ry + a] = n * n * xy;
    information[ry + a + 1] = n * n * yy;
    information[rn + a] = n * xn;
    information[rn + a + 1] = n * yn;
    information[rn + a + 2] = nn;
    gradient[a] = n * gx;
    gradient[a + 1] = n * gy;
    gradient[a + 2] = gn;
  }

  /** Cross terms of spots s > t where their boxes overlap. */
  private accumulatePair(window: FitWindow, s: number, t: number): void {
    const { side, weight, share, first, shareY, firstY, information } = this;
    const x0 = Math.max(this.boxX[s], this.boxX[t], window.x0);
    const x1 = Math.min(this.boxX[s], this.boxX[t]) + side;
    const right = Math.min(x1, window.x0 + window.width);
    const y0 = Math.max(this.boxY[s], this.boxY[t], window.y0);
    const y1 = Math.min(Math.min(this.boxY[s], this.boxY[t]) + side, window.y0 + window.height);
    if (right <= x0 || y1 <= y0) return;
    let xx = 0;
    let xy = 0;
    let xn = 0;
    let yx = 0;
    let yy = 0;
    let yn = 0;
    let nx = 0;
    let ny = 0;
    let nn = 0;
    for (let y = y0; y < y1; y++) {
      const shift = (y - window.y0) * window.width - window.x0;
      const sAt = s * side - this.boxX[s];
      const tAt = t * side - this.boxX[t];
      let pp = 0;
      let pd = 0;
      let dp = 0;
      let dd = 0;
      for (let x = x0; x < right; x++) {
        const w = weight[shift + x];
        const wp = w * share[sAt + x];
        const wd = w * first[sAt + x];
        const p = share[tAt + x];
        const d = first[tAt + x];
        pp += wp * p;
        pd += wp * d;
        dp += wd * p;
        dd += wd * d;
      }
      const ps = shareY[s * side + y - this.boxY[s]];
      const ds = firstY[s * side + y - this.boxY[s]];
      const pt = shareY[t * side + y - this.boxY[t]];
      const dt = firstY[t * side + y - this.boxY[t]];
      xx += dd * ps * pt;
      xy += dp * ps * dt;
      xn += dp * ps * pt;
      yx += pd * ds * pt;
      yy += pp * ds * dt;
      yn += pp * ds * pt;
      nx += pd * ps * pt;
      ny += pp * ps * dt;
      nn += pp * ps * pt;
    }
    const ns = this.n[s];
    const nt = this.n[t];
    const column = 3 * t + 1;
    const rx = (3 * s + 1) * PARAMETERS_MOST + column;
    const ry = rx + PARAMETERS_MOST;
    const rn = ry + PARAMETERS_MOST;
    information[rx] = ns * nt * xx;
    information[rx + 1] = ns * nt * xy;
    information[rx + 2] = ns * xn;
    information[ry] = ns * nt * yx;
    information[ry + 1] = ns * nt * yy;
    information[ry + 2] = ns * yn;
    information[rn] = nt * nx;
    information[rn + 1] = nt * ny;
    information[rn + 2] = nn;
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
    let done = true;
    this.offset += this.step[0];
    for (let s = 0; s < this.count; s++) {
      const dx = Math.max(-most, Math.min(most, this.step[3 * s + 1]));
      const dy = Math.max(-most, Math.min(most, this.step[3 * s + 2]));
      const n = Math.max(BRIGHTNESS_LEAST, BRIGHTNESS_KEPT * this.n[s], this.n[s] + this.step[3 * s + 3]);
      if (Math.abs(dx) > STEP_DONE_PX || Math.abs(dy) > STEP_DONE_PX) done = false;
      if (Math.abs(n - this.n[s]) > STEP_DONE_BRIGHTNESS * n) done = false;
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
