import { createRandom, mixSeed } from '../random';
import { ANISOTROPY_ERROR, THICKNESS_ERROR, type EstimateContext } from './context';
import { lnSpread, notUsable, type DensityResult } from './interval';
import { resampleLines } from './resample-lines';
import { decoratedShare } from './sheet-geometry';
import { lineDensityFromCrossings, spacingFromDensity } from './stereology';

/** A sheet thicker than this part of the spacing is no plane that lines cross. */
const THIN_PART = 0.3;

/**
 * L = 2 P_A for isotropic lines (Saltykov 1945): distinct lines that cross the sheet per area, lines
 * without a tracer added by the share that carries one. It needs a sheet thin against the spacing.
 */
export function crossingsEstimate(context: EstimateContext): DensityResult {
  const method = 'crossings';
  const { groups, fellows, nearest, pool, conditions, recipe } = context;
  const h = conditions.sheetThickness_m;
  if (!groups.told) {
    const note = 'The trapped tracks are too short or too still to tell which of them share a line.';
    return notUsable(method, note);
  }
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
  if (!fellows) {
    const note =
      'Hardly any two tracers share a line, so the share of lines without tracers is unknown; low is the lower limit.';
    return notUsable(method, note, inputs, atLeastM2);
  }
  const usedPerLengthM = fellows.tracersPerLengthM * nearest.usedShare;
  const share = decoratedShare(usedPerLengthM * h);
  const valueM2 = atLeastM2 / share;
  const filled = { ...inputs, decoratedShare: { value: share, unit: '' } };
  const part = h / spacingFromDensity(valueM2);
  if (part > THIN_PART) {
    const note = `The light sheet is ${part.toFixed(1)} times as thick as the lines are apart; crossings need less than ${THIN_PART}.`;
    return notUsable(method, note, filled);
  }
  const random = createRandom(mixSeed(recipe.seed, 43));
  const total = (of: Float64Array) => of.reduce((a, b) => a + b, 0);
  const tracersNow = total(context.tracersByLine);
  const pairsNow = total(fellows.pairsByLine);
  const sums = [nearest.present, context.tracersByLine, fellows.pairsByLine];
  const draws = resampleLines(random, groups.lines, sums, recipe.bootstrapDraws, ([lines, n, pairs]) => {
    const factor = pairs / pairsNow / (n / tracersNow);
    return lines / decoratedShare(usedPerLengthM * factor * h);
  });
  const thicker = decoratedShare(usedPerLengthM * h * (1 + THICKNESS_ERROR));
  return {
    method,
    valueM2,
    statistical: lnSpread(draws),
    systematic: Math.hypot(ANISOTROPY_ERROR, Math.log(thicker / share)),
    inputs: filled,
    note: `Lines that cross the sheet per area, twice; lines without tracers added (${Math.round(100 * share)} % carry one).`,
  };
}
