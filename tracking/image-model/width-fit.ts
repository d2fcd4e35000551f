import { choleskyFactor, choleskySolve } from '../detection/cholesky';
import { pixelShares } from '../pixel-gaussian';
import type { SpotWindow } from './spot-frames';

/** x, y, brightness, offset of the background; then the width. */
const NUISANCES = 4;
const PARAMETERS = 5;
const ITERATIONS_MOST = 12;
const STEP_DONE_PX = 0.01;
const STEP_MOST_PX = 1;
/** How far the background near a spot may differ from the model: a share of it and a floor, electrons. */
const OFFSET_SHARE = 0.1;
const OFFSET_LEAST_E = 0.5;
const EXPECTED_LEAST = 1e-3;

/**
 * Width of one lone spot: place, brightness and offset are fitted by maximum likelihood at an
 * assumed width (Fisher scoring, pixel-integrated Gaussian, read variance added to data and
 * expectation); the score and the information that are left for the width then say by how much
 * the assumed width is off (Rao's efficient score). Keeps its arrays.
 */
export class WidthFit {
  /** The spot's own width, px, and its standard error. */
  widthPx = Number.NaN;
  errorPx = Number.NaN;

  private readonly reach: number;
  private readonly side: number;
  private readonly rows: Float64Array[];
  private readonly derivatives = new Float64Array(PARAMETERS);
  private readonly gradient = new Float64Array(PARAMETERS);
  private readonly information = new Float64Array(PARAMETERS * PARAMETERS);
  private readonly step = new Float64Array(PARAMETERS);

  constructor(
    private readonly sigmaPx: number,
    private readonly readVariance: number,
  ) {
    this.reach = Math.max(2, Math.ceil(3 * sigmaPx));
    this.side = 2 * this.reach + 1;
    this.rows = Array.from({ length: 6 }, () => new Float64Array(this.side));
  }

  /** Pixels that the window must hold on every side of the spot's pixel. */
  get marginPx(): number {
    return this.reach;
  }

  /**
   * @param window with the spot's pixel in its middle
   * @returns false when the fit finds no spot there, or the window is too small for it.
   */
  run(window: SpotWindow, brightnessE: number): boolean {
    const middle = (window.side - 1) / 2;
    const corner = (middle - this.reach) * (window.side + 1);
    const spread = OFFSET_LEAST_E + OFFSET_SHARE * window.background[middle * (window.side + 1)];
    let x = this.reach;
    let y = this.reach;
    let n = brightnessE;
    let offset = 0;
    if (middle < this.reach) return false;
    for (let iteration = 0; iteration < ITERATIONS_MOST; iteration++) {
      this.accumulate(window, corner, x, y, n, offset, 1 / (spread * spread));
      this.step.set(this.gradient);
      if (!choleskyFactor(this.information, NUISANCES, PARAMETERS)) return false;
      choleskySolve(this.information, NUISANCES, PARAMETERS, this.step);
      const dx = this.step[0];
      const dy = this.step[1];
      if (Math.abs(dx) < STEP_DONE_PX && Math.abs(dy) < STEP_DONE_PX && iteration > 1) return this.finish();
      x += Math.max(-STEP_MOST_PX, Math.min(STEP_MOST_PX, dx));
      y += Math.max(-STEP_MOST_PX, Math.min(STEP_MOST_PX, dy));
      n += this.step[2];
      offset += this.step[3];
      const gone = Math.abs(x - this.reach) > this.reach - 1 || Math.abs(y - this.reach) > this.reach - 1;
      if (gone || !(n > 0)) return false;
    }
    return false;
  }

  /** Score and information of the width, less what the other parameters take of them. */
  private finish(): boolean {
    const { information, gradient, step } = this;
    const cross = this.derivatives;
    for (let i = 0; i < NUISANCES; i++) cross[i] = information[NUISANCES * PARAMETERS + i];
    let score = gradient[NUISANCES];
    for (let i = 0; i < NUISANCES; i++) score -= cross[i] * step[i];
    let left = information[NUISANCES * PARAMETERS + NUISANCES];
    step.set(cross);
    choleskySolve(information, NUISANCES, PARAMETERS, step);
    for (let i = 0; i < NUISANCES; i++) left -= cross[i] * step[i];
    if (!(left > 0)) return false;
    this.widthPx = this.sigmaPx + score / left;
    this.errorPx = 1 / Math.sqrt(left);
    return true;
  }

  /** Gradient of the log-likelihood and lower triangle of the information, for all five parameters. */
  private accumulate(
    { side: windowSide, electrons, background, usable }: SpotWindow,
    corner: number,
    x: number,
    y: number,
    n: number,
    offset: number,
    offsetWeight: number,
  ): void {
    const { side, sigmaPx, readVariance, derivatives: d, gradient, information } = this;
    const [px, dx, ddx, py, dy, ddy] = this.rows;
    pixelShares(x, sigmaPx, side, px, dx, ddx, 0);
    pixelShares(y, sigmaPx, side, py, dy, ddy, 0);
    gradient.fill(0);
    information.fill(0);
    for (let j = 0; j < side; j++) {
      for (let i = 0, at = corner + j * windowSide; i < side; i++, at++) {
        if (usable[at] === 0) continue;
        const shape = px[i] * py[j];
        const expected = Math.max(EXPECTED_LEAST, background[at] + readVariance + offset + n * shape);
        const perExpected = 1 / expected;
        const excess = (electrons[at] + readVariance) * perExpected - 1;
        d[0] = n * dx[i] * py[j];
        d[1] = n * px[i] * dy[j];
        d[2] = shape;
        d[3] = 1;
        // A Gaussian widens as by diffusion: its derivative with s is s times the second with x.
        d[4] = n * sigmaPx * (ddx[i] * py[j] + px[i] * ddy[j]);
        for (let a = 0; a < PARAMETERS; a++) {
          gradient[a] += excess * d[a];
          const weighted = perExpected * d[a];
          for (let b = 0; b <= a; b++) information[a * PARAMETERS + b] += weighted * d[b];
        }
      }
    }
    gradient[3] -= offset * offsetWeight;
    information[3 * PARAMETERS + 3] += offsetWeight;
  }
}
