import type { StateChange } from '../populations/changes-of-state';
import { CHANGE_POSITIONS_MIN, PIECE_POSITIONS_MIN } from '../populations/changes-of-state';
import type { Pieces } from '../populations/pieces';
import { FREE } from '../populations/codes';
import type { Conditions } from '../types';
import { BLOCKS, blockOf } from './image-blocks';
import { notUsable, type DensityResult } from './interval';
import { widenForFewLines } from './line-spread';

/** Captures below which a rate is not worth its name. */
const CAPTURES_LEAST = 5;
/** A line catches from within the tracer's own radius or somewhat more: unknown by a factor of 2 to 5. */
const LN_RADIUS_ERROR = 0.8;

/** How far free tracers went, and how many of them were caught. */
export interface FreeFlights {
  captures: number;
  /** Path against the lines on which a capture would have been seen, m. */
  pathM: number;
  /** Relative standard error of captures per path: one line catches several tracers, at about the same place. */
  relativeError: number;
}

/**
 * Adds up the path of free tracers against the drift of the lines. A capture shows only where the track
 * goes on for long enough on both sides, so the first and the last positions of a track count for nothing;
 * tracers that leave the sheet uncaught end their path there (censoring: the rate of captures per path is
 * the maximum-likelihood estimate of an exponential law).
 *
 * @param driftPx common drift of trapped tracers, px per frame.
 * @param image size in px: what happens in one block of it may be the work of one line.
 */
export function freeFlights(
  { tracks, track, population }: Pieces,
  changes: readonly StateChange[],
  conditions: Pick<Conditions, 'pixelSize_m'>,
  driftPx: readonly [number, number],
  image: { width: number; height: number },
): FreeFlights {
  const caught = new Set(
    changes.filter(({ kind }) => kind === 'capture').map((c) => `${c.track} ${c.frame}`),
  );
  const captures = new Float64Array(BLOCKS);
  const pathPx = new Float64Array(BLOCKS);
  for (let k = 0; k < tracks.count; k++) {
    if (population[k] !== FREE) continue;
    const from = tracks.start[k];
    const end = tracks.start[k + 1];
    const ends = caught.has(`${track[k]} ${tracks.frame[end - 1] + 1}`);
    const whole = track[k] !== track[k - 1] && track[k] !== track[k + 1];
    if (whole && end - from < CHANGE_POSITIONS_MIN) continue;
    const frames = end - from - PIECE_POSITIONS_MIN - (ends ? 0 : PIECE_POSITIONS_MIN);
    if (frames <= 0) continue;
    const steps = end - 1 - from;
    const vx = (tracks.xPx[end - 1] - tracks.xPx[from]) / steps - driftPx[0];
    const vy = (tracks.yPx[end - 1] - tracks.yPx[from]) / steps - driftPx[1];
    const stepPx = Math.hypot(vx, vy);
    const begin = from + PIECE_POSITIONS_MIN;
    for (let p = begin; p < begin + frames; p++)
      pathPx[blockOf(tracks.xPx[p], tracks.yPx[p], image)] += stepPx;
    if (ends) captures[blockOf(tracks.xPx[end - 1], tracks.yPx[end - 1], image)]++;
  }
  const total = sumOf(captures);
  const path = sumOf(pathPx);
  return {
    captures: total,
    pathM: path * conditions.pixelSize_m,
    relativeError: relativeErrorOf(captures, pathPx, total / path),
  };
}

/**
 * Of a rate of captures, from its scatter between blocks of the image (delta method for a ratio, Cochran 1977), at
 * least that of a Poisson process, widened as Student's t for as many blocks as paths lead through: blocks without
 * a capture tell as much as others. Path counts in the block where it was flown, not where the track ends: captures
 * less rate times path have mean 0 in every block then (counting processes: Aalen, Ann. Stat. 6, 701 (1978)).
 * Counted where tracks end, the blocks downstream would hold the path of all others, and that would pass for chance.
 */
function relativeErrorOf(captures: Float64Array, path: Float64Array, rate: number): number {
  const count = sumOf(captures);
  if (count === 0) return Number.NaN;
  const scatter = Math.hypot(...captures.map((n, block) => n - rate * path[block])) / count;
  return widenForFewLines(Math.max(scatter, 1 / Math.sqrt(count)), path);
}

const sumOf = (values: Float64Array): number => values.reduce((sum, value) => sum + value, 0);

/**
 * L = 2 / (pi b s) from the mean free path s of tracers that are caught within b of an isotropic line (a
 * cylinder of length s and radius b is hit by pi b s L / 2 lines). The capture radius is taken for that of
 * the tracer.
 */
export function freePathEstimate(
  flights: FreeFlights | null,
  conditions: Pick<Conditions, 'tracer'>,
): DensityResult {
  const method = 'free-path';
  if (!flights) {
    return notUsable(method, 'Free and trapped tracers are not told apart, so no capture is either.');
  }
  const { captures, pathM, relativeError } = flights;
  const diameterM = conditions.tracer?.diameter_m ?? null;
  const freePathM = captures > 0 ? pathM / captures : null;
  const inputs = {
    captures: { value: captures, unit: '' },
    freePath: { value: freePathM, unit: 'm' },
    captureRadius: { value: diameterM === null ? null : diameterM / 2, unit: 'm' },
  };
  if (captures < CAPTURES_LEAST || freePathM === null) {
    const seen =
      captures === 1
        ? '1 capture of a free tracer was seen'
        : `${captures} captures of free tracers were seen`;
    return notUsable(method, `${seen} within its track; ${CAPTURES_LEAST} are needed.`, inputs);
  }
  if (!diameterM) {
    return notUsable(
      method,
      'The diameter of the tracers is not given, and the capture radius follows it.',
      inputs,
    );
  }
  return {
    method,
    valueM2: 2 / (Math.PI * (diameterM / 2) * freePathM),
    statistical: relativeError,
    systematic: LN_RADIUS_ERROR,
    inputs,
    note: 'Mean path of free tracers until a line catches them; the capture radius is taken for the tracer’s own and is unknown by a factor of 2 to 5.',
  };
}
