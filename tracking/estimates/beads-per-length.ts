import { createRandom, mixSeed } from '../random';
import { ANISOTROPY_ERROR, THICKNESS_ERROR, type EstimateContext } from './context';
import { lnSpread, notUsable, type DensityResult } from './interval';
import { resampleLines } from './resample-lines';
import { fellowLength } from './sheet-geometry';

/**
 * L = N / (lambda A h): trapped tracers per volume over tracers per length of line, the latter
 * from tracers that move as one line. Tracers that were not found lower both alike, so they don't
 * matter: L = N^2 G / (2 P A h) with P pairs of fellows and G the geometry of the sheet.
 */
export function beadsPerLength(context: EstimateContext): DensityResult {
  const { conditions, pool, groups, fellows, recipe } = context;
  const h = conditions.sheetThickness_m;
  const inputs = {
    trappedPerFrame: { value: pool.perFrame, unit: '' },
    trappedPerArea: { value: pool.perAreaM2, unit: 'm^-2' },
    sheetThickness: { value: h ?? null, unit: 'm' },
  };
  if (!h) return notUsable('beads-per-length', 'The thickness of the light sheet is not given.', inputs);
  if (!groups.told) {
    const note = 'The trapped tracks are too short or too still to tell which of them share a line.';
    return notUsable('beads-per-length', note, inputs);
  }
  if (!fellows) {
    const note =
      'Hardly any two tracers share a line, so tracers per length of line are unknown; only their product with the line density is.';
    const product = { tracersPerVolume: { value: pool.perAreaM2 / h, unit: 'm^-3' } };
    return notUsable('beads-per-length', note, { ...inputs, ...product });
  }
  const random = createRandom(mixSeed(recipe.seed, 41));
  const draws = resampleLines(
    random,
    groups.lines,
    [context.tracersByLine, fellows.pairsByLine],
    recipe.bootstrapDraws,
    ([n, pairs]) => (n * n) / pairs,
  );
  // Of L ~ G(h) / h: thickness enters G as well and cancels in part.
  const more = fellowLength(fellows.lowM, fellows.highM, h * (1 + THICKNESS_ERROR)) / (1 + THICKNESS_ERROR);
  const byThickness = Math.log(more / fellows.fellowLengthM);
  return {
    method: 'beads-per-length',
    valueM2: fellows.lineDensityM2,
    statistical: lnSpread(draws),
    systematic: Math.hypot(ANISOTROPY_ERROR, byThickness),
    inputs: {
      ...inputs,
      tracersPerLength: { value: fellows.tracersPerLengthM, unit: 'm^-1' },
      pairsOnOneLine: { value: fellows.pairs, unit: '' },
      pairDistanceFrom: { value: fellows.lowM, unit: 'm' },
      pairDistanceTo: { value: fellows.highM, unit: 'm' },
    },
    note: 'Trapped tracers per volume over tracers per length of line; the length comes from pairs that move as one line, for isotropic lines straight over the spacing.',
  };
}
