import { ANISOTROPY_ERROR, THICKNESS_ERROR, type EstimateContext, whyNotTold } from './context';
import { notUsable, type DensityResult } from './interval';
import { errorBetween, type UntoldOn } from './fellows';
import { widenForFewLines } from './line-spread';
import { seenLines } from './seen-lines';
import { productsOf, sumOfSquares } from './shared-motion';
import { lineDensityFromNeighbourDistance, neighbourDistance } from './stereology';

/** Above this part of the spacing the thickness of the sheet matters more than a correction can mend. */
const THIN_PART = 0.3;
/** Added to ln L's error when the sheet is thicker than that. */
const THICK_ERROR = 0.15;

/**
 * L = 1 / (2 <r>^2) from the distance between neighbouring lines, one tracer standing for each,
 * over the share of lines that carry a tracer at all. The distance is that of points of the same
 * number per area; edges are cut off, not corrected.
 */
export function neighbourDistanceEstimate(context: EstimateContext): DensityResult {
  const method = 'neighbour-distance';
  const { fellows, nearest, conditions } = context;
  const h = conditions.sheetThickness_m;
  const untold = whyNotTold(context);
  if (untold) return notUsable(method, untold);
  const total = (of: Float64Array) => of.reduce((a, b) => a + b, 0);
  const perAreaM2 = total(nearest.ended) / total(nearest.areaM2);
  if (!(perAreaM2 > 0))
    return notUsable(method, 'Too few lines are seen at once to measure distances between them.');
  const distanceM = neighbourDistance(perAreaM2);
  const seenM2 = lineDensityFromNeighbourDistance(distanceM);
  const inputs = {
    meanNeighbourDistance: { value: distanceM, unit: 'm' },
    linesPerFrame: { value: nearest.linesPerFrame, unit: '' },
    sheetThickness: { value: h ?? null, unit: 'm' },
  };
  if (!h) {
    const note =
      'The thickness of the light sheet is not given, so lines without tracers can’t be counted; low is the lower limit.';
    return notUsable(method, note, inputs, seenM2);
  }
  const seen = fellows?.byLine && seenLines(fellows.byLine, h);
  if (!fellows?.byLine || !seen) {
    const note =
      'Hardly any two tracers share a line, so the share of lines without tracers is unknown; low is the lower limit.';
    return notUsable(method, note, inputs, seenM2);
  }
  const { share } = seen;
  const valueM2 = seenM2 / share;
  const filled = { ...inputs, decoratedShare: { value: share, unit: '' } };
  const part = h * Math.sqrt(valueM2);
  if (part > 1) {
    const note = `The light sheet is ${part.toFixed(1)} times as thick as the lines are apart: distances in its projection say nothing.`;
    return notUsable(method, note, filled);
  }
  const ended = total(nearest.ended);
  const area = total(nearest.areaM2);
  // What each line adds to ln L beyond its share: ended distances over areas, those of neighbours being related.
  const byDistance = nearest.ended.map((of, l) => of / ended - nearest.areaM2[l] / area);
  const ofNeighbours = productsOf(byDistance, nearest.neighbours);
  const square = (on: UntoldOn) => {
    const bySeen = seen.influence(on);
    return sumOfSquares(byDistance.map((of, l) => of - bySeen[l])) + ofNeighbours;
  };
  const error = Math.hypot(errorBetween(square), seen.untoldError);
  const thicker = seenLines(fellows.byLine, h * (1 + THICKNESS_ERROR))?.share ?? share;
  const thick = part > THIN_PART;
  return {
    method,
    valueM2,
    statistical: widenForFewLines(error, nearest.ended),
    systematic: Math.hypot(ANISOTROPY_ERROR, Math.log(thicker / share), seen.doubt, thick ? THICK_ERROR : 0),
    inputs: filled,
    note: `Distance between neighbouring lines, lines without tracers added (${Math.round(100 * share)} % carry one)${thick ? '; the sheet is not thin against the spacing' : ''}.`,
  };
}
