import { ANISOTROPY_ERROR, THICKNESS_ERROR, type EstimateContext, whyNotTold } from './context';
import { notUsable, type DensityResult } from './interval';
import { errorBetween, type UntoldOn } from './fellows';
import { widenForFewLines } from './line-spread';
import { seenLines } from './seen-lines';
import { sumOfSquares } from './shared-motion';
import { lineDensityFromCrossings, spacingFromDensity } from './stereology';

/** A sheet thicker than this part of the spacing is no plane that lines cross. */
const THIN_PART = 0.3;

/**
 * L = 2 P_A for isotropic lines (Saltykov 1945): distinct lines that cross the sheet per area, lines
 * without a tracer added by the share that carries one. It needs a sheet thin against the spacing.
 */
export function crossingsEstimate(context: EstimateContext): DensityResult {
  const method = 'crossings';
  const { fellows, nearest, pool, conditions } = context;
  const h = conditions.sheetThickness_m;
  const untold = whyNotTold(context);
  if (untold) return notUsable(method, untold);
  const seenPerAreaM2 = nearest.linesPerFrame / pool.areaM2;
  const inputs = {
    linesPerFrame: { value: nearest.linesPerFrame, unit: '' },
    linesPerArea: { value: seenPerAreaM2, unit: 'm^-2' },
    sheetThickness: { value: h ?? null, unit: 'm' },
  };
  const atLeastM2 = lineDensityFromCrossings(seenPerAreaM2);
  if (!(seenPerAreaM2 > 0))
    return notUsable(method, 'No line is seen for long enough to be counted.', inputs);
  if (!h) {
    const note =
      'The thickness of the light sheet is not given, so lines without tracers can’t be counted; low is the lower limit.';
    return notUsable(method, note, inputs, atLeastM2);
  }
  const seen = fellows?.byLine && seenLines(fellows.byLine, h);
  if (!fellows?.byLine || !seen) {
    const note =
      'Hardly any two tracers share a line, so the share of lines without tracers is unknown; low is the lower limit.';
    return notUsable(method, note, inputs, atLeastM2);
  }
  const { share } = seen;
  const valueM2 = atLeastM2 / share;
  const filled = { ...inputs, decoratedShare: { value: share, unit: '' } };
  const part = h / spacingFromDensity(valueM2);
  if (part > THIN_PART) {
    const note = `The light sheet is ${part.toFixed(1)} times as thick as the lines are apart; crossings need less than ${THIN_PART}.`;
    return notUsable(method, note, filled);
  }
  // Lines come as a Poisson process, each for the share of the time that it is seen.
  const square = (on: UntoldOn) => {
    const bySeen = seen.influence(on);
    return sumOfSquares(nearest.present.map((of, l) => of / nearest.linesPerFrame - bySeen[l]));
  };
  const error = Math.hypot(errorBetween(square), seen.untoldError);
  const thicker = seenLines(fellows.byLine, h * (1 + THICKNESS_ERROR))?.share ?? share;
  return {
    method,
    valueM2,
    statistical: widenForFewLines(error, fellows.byLine.all.pairs.ownLines),
    systematic: Math.hypot(ANISOTROPY_ERROR, Math.log(thicker / share), seen.doubt),
    inputs: filled,
    note: `Lines that cross the sheet per area, twice; lines without tracers added (${Math.round(100 * share)} % carry one).`,
  };
}
