import { LINE_VELOCITY_FACTOR, lineVelocity } from '../estimates/line-velocity-law';
import type { WavyLineOptions } from './local-induction/wavy-line';

/** Wobble of reconnecting pairs in a scene without a tangle, m/s: that of lines 0.3 mm apart. */
const VELOCITY_WITHOUT_LINES_M_S = 0.5e-3;

/** A recording to simulate. Image axes; the sheet is centred on z = 0 with a sharp edge. */
export interface TangleOptions {
  widthPx: number;
  heightPx: number;
  frames: number;
  pixelSizeM: number;
  frameIntervalS: number;
  sheetThicknessM: number;
  /** Vortex line length per volume, m^-2; 0 for no lines. */
  lineDensityM2: number;
  /** Trapped tracers per line length, m^-1. */
  beadsPerMetre: number;
  /** Free tracers that the sheet holds in a frame, on average. */
  freeTracersPerFrame: number;
  /** Mean of the normal-fluid velocity over the channel, m/s, along `flowDirection`. */
  vnMPerS: number;
  /** Drift of the whole tangle along `flowDirection`, m/s; negative is towards the heater. */
  tangleVelocityMPerS: number;
  seed: number;
  /** Unit vector in image axes, default x. */
  flowDirection?: [number, number];
  /** Width of the channel across the flow, m; default 1.2 times the image. */
  channelWidthM?: number;
  /**
   * R.m.s. velocity of a line per component, m/s (default: what its own curvature gives at this
   * line density), and its correlation time, s.
   */
  wobbleMPerS?: number;
  wobbleTimeS?: number;
  /** The same for free tracers. */
  freeWobbleMPerS?: number;
  freeWobbleTimeS?: number;
  /** Sudden jumps of a line as after a reconnection, per line and second. */
  burstsPerLineS?: number;
  /** True for lines that all lie in planes across the flow. */
  acrossFlow?: boolean;
  /** Slope of the gentle bends of a line (0 is straight) and their length, m. */
  bendSlope?: number;
  bendLengthM?: number;
  /**
   * Waves of lines that bend strongly and move by their own curvature, by local induction, instead of
   * wobbling as a whole; null (the default) for lines that keep their shape. Such lines catch no tracers.
   */
  curved?: WavyLineOptions | null;
  /** Mean photoelectrons of a tracer in a frame, and the spread of its logarithm between tracers. */
  brightnessE?: number;
  brightnessSpread?: number;
  /** Chance per frame that a tracer goes dark for a frame or two. */
  blinkPerFrame?: number;
  /** Free tracers that come this near to a line are caught by it, m; 0 for none. */
  captureRadiusM?: number;
  /**
   * Free decay: straight lines end one by one with all their tracers, so that L(t) = `lineDensityM2` / (1 +
   * rate t) with this rate, 1/s (Vinen 1957); 0 for a steady tangle.
   */
  decayPerS?: number;
  /** Pairs of trapped tracers that meet and part; extra to the line process. */
  events?: number;
  /** Pairs that come near each other without reconnecting. */
  decoys?: number;
  /** Frames that both kinds of pairs are followed for on either side, at least and at most. */
  eventSideFrames?: [low: number, high: number];
}

export type FilledTangleOptions = Required<TangleOptions>;

/** Fills in what a scene leaves open; checks what would make no sense. */
export function fillTangleOptions(options: TangleOptions): FilledTangleOptions {
  const { widthPx, heightPx, frames, pixelSizeM, frameIntervalS, sheetThicknessM } = options;
  for (const [name, value] of Object.entries({
    widthPx,
    heightPx,
    frames,
    pixelSizeM,
    frameIntervalS,
    sheetThicknessM,
  })) {
    if (!(value > 0)) throw new RangeError(`${name} must be > 0. Received ${value}.`);
  }
  if (options.curved && options.captureRadiusM)
    throw new RangeError('Lines that move by local induction catch no tracers: leave out captureRadiusM.');
  if (options.curved && options.decayPerS)
    throw new RangeError('Lines that move by local induction don’t end: leave out decayPerS.');
  const [fx, fy] = options.flowDirection ?? [1, 0];
  const across = Math.abs(fy) * widthPx + Math.abs(fx) * heightPx;
  return {
    flowDirection: [fx, fy],
    channelWidthM: 1.2 * across * pixelSizeM,
    wobbleMPerS: ownVelocity(options.lineDensityM2),
    wobbleTimeS: 0.1,
    freeWobbleMPerS: 0.2e-3,
    freeWobbleTimeS: 0.3,
    burstsPerLineS: 0,
    acrossFlow: false,
    bendSlope: 0.1,
    bendLengthM: 1e-3,
    curved: null,
    brightnessE: 400,
    brightnessSpread: 0.2,
    blinkPerFrame: 0.01,
    captureRadiusM: 0,
    decayPerS: 0,
    events: 0,
    decoys: 0,
    eventSideFrames: [12, 40],
    ...options,
  };
}

/** R.m.s. velocity of one component of lines that move by their own curvature, m/s. */
function ownVelocity(lineDensityM2: number): number {
  if (!(lineDensityM2 > 0)) return VELOCITY_WITHOUT_LINES_M_S;
  return lineVelocity(1 / Math.sqrt(lineDensityM2), LINE_VELOCITY_FACTOR) / Math.sqrt(3);
}
