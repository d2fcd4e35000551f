/** Most spots fitted at once; larger groups are fitted in turns. */
export const JOINT_SPOTS_MOST = 6;

/** Offset of the background, then x, y and brightness of each spot. */
export const PARAMETERS_MOST = 3 * JOINT_SPOTS_MOST + 1;

/** Values and arrays of a joint fit, made once and reused by every fit. */
export class FitWork {
  count = 0;
  readonly x = new Float64Array(JOINT_SPOTS_MOST);
  readonly y = new Float64Array(JOINT_SPOTS_MOST);
  /** Photoelectrons. */
  readonly n = new Float64Array(JOINT_SPOTS_MOST);
  /** Standard deviation of each spot's image, px. */
  readonly sigma = new Float64Array(JOINT_SPOTS_MOST);
  /** Background beyond the window's `fixed`, electrons per pixel. */
  offset = 0;

  /** Each spot has a box of side * side pixels; first column and row in the image. */
  readonly side: number;
  readonly boxX = new Int32Array(JOINT_SPOTS_MOST);
  readonly boxY = new Int32Array(JOINT_SPOTS_MOST);
  /** Shares of light along x and y in the box, and their derivatives; `side` values per spot. */
  readonly share: Float64Array;
  readonly first: Float64Array;
  readonly second: Float64Array;
  readonly shareY: Float64Array;
  readonly firstY: Float64Array;
  readonly secondY: Float64Array;

  /** Per pixel of the window: 1 / expected, and data / expected - 1; 0 where it takes no part. */
  weight = new Float64Array(256);
  score = new Float64Array(256);

  /** Lower triangle of the Fisher information, rows of `PARAMETERS_MOST`, and the gradient. */
  readonly information = new Float64Array(PARAMETERS_MOST * PARAMETERS_MOST);
  readonly gradient = new Float64Array(PARAMETERS_MOST);

  /**
   * @param offsetSpreadE how far the background may be off, electrons r.m.s. per pixel.
   * @param stepDonePx a fit has converged when no spot moves farther than this.
   */
  constructor(
    readonly spotSigmaPx: number,
    readonly reach: number,
    public offsetSpreadE: number,
    readonly stepDonePx: number,
  ) {
    this.side = 2 * reach + 1;
    this.sigma.fill(spotSigmaPx);
    const room = JOINT_SPOTS_MOST * this.side;
    this.share = new Float64Array(room);
    this.first = new Float64Array(room);
    this.second = new Float64Array(room);
    this.shareY = new Float64Array(room);
    this.firstY = new Float64Array(room);
    this.secondY = new Float64Array(room);
  }

  makeRoom(pixels: number): void {
    if (pixels <= this.weight.length) return;
    this.weight = new Float64Array(2 * pixels);
    this.score = new Float64Array(2 * pixels);
  }
}
