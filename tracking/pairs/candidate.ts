/** The square-root law on one side of the meeting: delta^2 = offset^2 + A^2 kappa |t - t0|. */
export interface SideFit {
  /** Measured frames used. */
  points: number;
  amplitude: number;
  amplitudeError: number;
  /** Exponent of delta ~ |t - t0|^exponent, and its standard error; null where the points carry none. */
  exponent: number | null;
  exponentError: number | null;
}

/** Two tracers that met and parted. Plain numbers, so that it survives JSON; null stands for unknown. */
export interface ReconnectionCandidate {
  trackA: number;
  trackB: number;
  t0S: number;
  t0ErrorS: number | null;
  /** Middle between the two at t0, px. */
  xPx: number;
  yPx: number;
  /** Least measured separation, m. */
  minSeparationM: number;
  /** Rest of the separation at t0 in the fit, m. */
  offsetM: number;
  before: SideFit | null;
  after: SideFit | null;
  /** Chi-square per degree of freedom of the square-root law. */
  reducedChi2: number;
  /** BIC of a straight fly-by less BIC of the square-root law: above 10 speaks for the law. */
  bicGain: number;
  /** Chance that two independent tracks that come as near give an event this good or better. */
  pChance: number;
  /** Least false discovery rate at which the event is among the discoveries (Benjamini & Hochberg 1995). */
  qValue: number;
  /** True when it passes every criterion and its q value is within the recipe's rate. */
  accepted: boolean;
  /** What it fails, in plain sentences; empty when it passes. */
  failed: string[];
  /** Separation over the fitted window, for plotting; entry i of each belongs to the same frame. */
  series: {
    frame: number[];
    tS: number[];
    separationM: number[];
    /** Standard errors of the separation. */
    errorM: number[];
    /** The fitted square-root law and the fitted fly-by at the same times, m. */
    lawM: number[];
    flyByM: number[];
  };
}
