import { chainLengths } from './chain-lengths';
import { whyNotTold, type EstimateContext } from './context';
import { notUsable, type DensityResult } from './interval';

/** Fewer lines with two tracers or more than this give no length. */
const CHAINS_LEAST = 8;

/**
 * Lower limit of L from the projected length of line between the tracers of each line: 4 / pi times that
 * length per volume of the sheet, for isotropic lines. What lies beyond the outermost tracers stays dark,
 * and on simulated tangles that is a fifth to a half of the line, too much to be added by a model.
 */
export function visibleLengthEstimate(context: EstimateContext): DensityResult {
  const method = 'visible-length';
  const { tracks, groups, used, pool, image, conditions } = context;
  const h = conditions.sheetThickness_m;
  const untold = whyNotTold(context);
  if (untold) return notUsable(method, untold);
  const chains = chainLengths(tracks, groups, used.used, image.frames);
  const lengthPx = chains.lengthPx.reduce((a, b) => a + b, 0);
  const perAreaPerM = (lengthPx * conditions.pixelSize_m) / pool.areaM2;
  const inputs = {
    chains: { value: chains.chains, unit: '' },
    visibleLengthPerArea: { value: perAreaPerM, unit: 'm^-1' },
    sheetThickness: { value: h ?? null, unit: 'm' },
  };
  if (chains.chains < CHAINS_LEAST) {
    return notUsable(method, `Only ${chains.chains} lines carry two tracers or more.`, inputs);
  }
  if (!h) return notUsable(method, 'The thickness of the light sheet is not given.', inputs);
  const note =
    'Lines are seen between their tracers only; their length per volume is a lower limit, given as low.';
  return notUsable(method, note, inputs, ((4 / Math.PI) * perAreaPerM) / h);
}
