import { ANISOTROPY_ERROR, THICKNESS_ERROR, type EstimateContext } from './context';
import { notUsable, type DensityResult } from './interval';
import { fellowLength } from './sheet-geometry';

const HOW = {
  motion:
    'pairs that move as one line, near ones counting more, for isotropic lines straight over the spacing',
  place:
    'how many more tracers stand near one than around it, for isotropic lines straight over half the spacing',
};

/**
 * L = N / (lambda A h): trapped tracers per volume over tracers per length of line, the latter
 * from tracers that move as one line or stand near each other. Tracers that were not found lower both
 * alike, so they don't matter: L = N^2 G / (2 P A h) with P pairs on one line and G the geometry of
 * the sheet.
 */
export function beadsPerLength(context: EstimateContext): DensityResult {
  const { conditions, pool, fellows, by, bends } = context;
  const h = conditions.sheetThickness_m;
  const inputs = {
    trappedPerFrame: { value: pool.perFrame, unit: '' },
    trappedPerArea: { value: pool.perAreaM2, unit: 'm^-2' },
    sheetThickness: { value: h ?? null, unit: 'm' },
  };
  if (!h) return notUsable('beads-per-length', 'The thickness of the light sheet is not given.', inputs);
  if (!fellows) {
    const note =
      'Hardly any two tracers are seen to share a line, so tracers per length of line are unknown; only their product with the line density is.';
    const product = { tracersPerVolume: { value: pool.perAreaM2 / h, unit: 'm^-3' } };
    return notUsable('beads-per-length', note, { ...inputs, ...product });
  }
  // Of L ~ G(h) / h: thickness enters G as well and cancels in part.
  const { lowM, highM, fadeM } = fellows;
  const more = fellowLength(lowM, highM, h * (1 + THICKNESS_ERROR), fadeM) / (1 + THICKNESS_ERROR);
  const byThickness = Math.log(more / fellows.fellowLengthM);
  return {
    method: 'beads-per-length',
    valueM2: fellows.lineDensityM2,
    statistical: fellows.densityError,
    systematic: Math.hypot(ANISOTROPY_ERROR, byThickness),
    inputs: {
      ...inputs,
      tracersPerLength: { value: fellows.tracersPerLengthM, unit: 'm^-1' },
      pairsOnOneLinePerFrame: { value: fellows.pairs, unit: '' },
      pairDistanceFrom: { value: lowM, unit: 'm' },
      pairDistanceTo: { value: highM, unit: 'm' },
      pairsFadeOver: { value: Number.isFinite(fadeM) ? fadeM : null, unit: 'm' },
    },
    note: `Trapped tracers per volume over tracers per length of line; the length comes from ${HOW[by]}.${
      bends ? ' The lines bend: near tracers of one line don’t move as one.' : ''
    }`,
  };
}
