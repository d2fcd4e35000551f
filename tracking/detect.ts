import { createFrameSearch } from './detection/frame-search';
import { createSpotFlags } from './detection/spot-flags';
import { createSpotOrder } from './detection/spot-order';
import { statedError } from './detection/stated-error';
import { keepCompiled } from './kernels/keep-compiled';
import type { Kernels } from './kernels/kernels';
import { plainKernels } from './kernels/plain-kernels';
import type { SpotSink } from './spots';
import type { Frame, ImageModel, Recipe } from './types';

/** Finds the spots of single frames; what it finds depends on the frame and the model alone. */
export interface Detector {
  /** Appends the spots of a frame to the sink, by y, then x. */
  detect(frame: Frame, frameIndex: number, sink: SpotSink): void;
  /**
   * The spot that a person points to: the nearest one that is found within `reachPx`; else, where the
   * frame holds light that was too faint to be found, the same fit begun at the place, together with
   * its neighbours. Null where no light fits there within `reachPx`.
   */
  placeAt(frame: Frame, frameIndex: number, xPx: number, yPx: number, reachPx: number): PlacedSpot | null;
}

/** A spot at a place that was asked for. */
export interface PlacedSpot {
  xPx: number;
  yPx: number;
  /** Standard errors of the position, px. */
  sxPx: number;
  syPx: number;
  /** Photoelectrons. */
  brightness: number;
  /** Matched-filter response in units of the local noise. */
  snr: number;
  /** Whether the detector finds it by itself. */
  found: boolean;
}

/** After so many frames whatever a detector does often is compiled. */
const FRAMES_TO_COMPILE = 4;
/** Light that a person points to counts from this many of its standard errors on. */
const POINTED_SIGMAS_LEAST = 2;

/**
 * Spots as a test of hypotheses: the frame in units of its own noise is correlated with the spot's
 * shape; maxima above the level that noise alone exceeds `falseSpotsPerFrame` times are fitted by
 * maximum likelihood, neighbours together; in what remains a second look asks whether one more
 * spot gains enough likelihood. Standard errors come from the Fisher information of the joint fit.
 *
 * @param kernels what works on all pixels: plain or compiled
 * @throws RangeError when a frame has another size than the model.
 */
export function createDetector(model: ImageModel, recipe: Recipe, kernels: Kernels = plainKernels): Detector {
  const { width, height } = model;
  const { pictures, table, search, fitAt } = createFrameSearch(model, recipe, kernels);
  const flagsOf = createSpotFlags(model, recipe.spotSizePx, pictures, table);
  const order = createSpotOrder();

  const isSpot = (i: number): boolean => {
    const { x, y, sx, sy, alive } = table;
    const inside = x[i] >= -0.5 && y[i] >= -0.5 && x[i] < width - 0.5 && y[i] < height - 0.5;
    return alive[i] === 1 && inside && sx[i] < Infinity && sy[i] < Infinity;
  };

  let framesSeen = 0;
  const detect: Detector['detect'] = (frame, frameIndex, sink) => {
    search(frame, frameIndex);
    // Only what has run holds on to what was compiled.
    if (++framesSeen === FRAMES_TO_COMPILE) keepCompiled('detector', detector);
    const { x, y, sx, sy, sn, n, response: snr, doubtX, doubtY } = table;
    for (const i of order.byPlace(table)) {
      if (!isSpot(i)) continue;
      const certainty = n[i] / sn[i];
      const errorX = statedError(sx[i], certainty, doubtX[i]);
      const errorY = statedError(sy[i], certainty, doubtY[i]);
      sink.push(frameIndex, x[i], y[i], errorX, errorY, n[i], snr[i], flagsOf(i));
    }
  };

  const placed = (i: number, found: boolean): PlacedSpot => {
    const certainty = table.n[i] / table.sn[i];
    return {
      xPx: table.x[i],
      yPx: table.y[i],
      sxPx: statedError(table.sx[i], certainty, table.doubtX[i]),
      syPx: statedError(table.sy[i], certainty, table.doubtY[i]),
      brightness: table.n[i],
      snr: table.response[i],
      found,
    };
  };

  const placeAt: Detector['placeAt'] = (frame, frameIndex, xPx, yPx, reachPx) => {
    search(frame, frameIndex);
    const away = (i: number) => Math.hypot(table.x[i] - xPx, table.y[i] - yPx);
    let nearest = -1;
    for (let i = 0; i < table.count; i++) {
      if (isSpot(i) && away(i) <= reachPx && (nearest < 0 || away(i) < away(nearest))) nearest = i;
    }
    if (nearest >= 0) return placed(nearest, true);
    // Fitted as asked for, and kept on weaker grounds than one that nobody asked for.
    const i = fitAt(xPx, yPx);
    const certain = table.n[i] > POINTED_SIGMAS_LEAST * table.sn[i];
    return isSpot(i) && certain && away(i) <= reachPx ? placed(i, false) : null;
  };

  const detector: Detector = { detect, placeAt };
  return detector;
}
