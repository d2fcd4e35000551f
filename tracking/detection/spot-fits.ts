/** Where, in what is left after the fitted spots are taken away, another spot stands out the most. */
export interface ResidualPeak {
  /** Matched-filter response in units of the residual's noise; -Infinity where nothing can be looked at. */
  response: number;
  xPx: number;
  yPx: number;
  /** Photoelectrons. */
  brightness: number;
}

/**
 * Joint fits in the frame at hand, in plain TypeScript or compiled. Arrays have an entry for each of the
 * `JOINT_SPOTS_MOST` spots that can be fitted together; their values are set before a call or read after it,
 * and nothing is allocated per fit.
 */
export interface SpotFits {
  /** Positions, px, and photoelectrons: where `run` starts from, and what it finds. */
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly n: Float64Array;
  /** Standard errors, Infinity where the fit doesn't know the spot. */
  readonly sx: Float64Array;
  readonly sy: Float64Array;
  readonly sn: Float64Array;
  /** Scores of being longer one way than the other, and half the way between the two spots it could be, px. */
  readonly elongation: Float64Array;
  readonly splitX: Float64Array;
  readonly splitY: Float64Array;
  /** Centres of the boxes of pixels that `load` takes. */
  readonly centreX: Float64Array;
  readonly centreY: Float64Array;

  /** Standard deviations of the images that `run` assumes, px; those of typical spots to begin with. */
  readonly sigma: Float64Array;

  /** Begins with a frame: its expected light is that of a frame without spots. */
  clear(): void;
  /** Adds the light of a spot to what is expected, or takes it away again (negative brightness). */
  paint(xPx: number, yPx: number, brightness: number, sigmaPx: number): void;
  /** Takes the boxes around the first `count` centres. The spots to be fitted must not be painted. */
  load(count: number): void;
  /**
   * Fits `count` spots and an offset of the background that is 0 +- `offsetSpreadE` electrons per pixel.
   *
   * @returns false when it gave up before it converged.
   */
  run(count: number, offsetSpreadE: number): boolean;
  /** Fills `elongation`, `splitX` and `splitY` from the fit made last. */
  elongate(): void;
  /** Log-likelihood of the fit made last, up to a constant that depends on the loaded pixels alone. */
  logLikelihood(): number;
  /** Twice the gain in log-likelihood of the fit made last over a background without any spot. */
  significance(): number;
  /**
   * The strongest peak in the loaded pixels of what the fit made last leaves, whether its spots are painted
   * again or not. The same object is reused.
   */
  look(): ResidualPeak;
}
