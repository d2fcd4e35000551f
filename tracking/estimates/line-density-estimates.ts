import type { StateChange } from '../populations/changes-of-state';
import type { Pieces } from '../populations/pieces';
import type { MarkedFrame } from '../corrections/marked-frames';
import type { Conditions, Recipe, Tracks } from '../types';
import { beadsPerLength } from './beads-per-length';
import { darkLines, lineDirections } from './cautions';
import { combine } from './combine';
import { crossingsEstimate } from './crossings';
import { withoutTracers, type EstimateContext } from './context';
import type { Estimate, EstimateMethod } from './estimate';
import { decayEstimate } from './decay';
import { findFellows } from './find-fellows';
import { freeFlights, freePathEstimate } from './free-path';
import { heatFluxPrior } from './heat-flux-prior';
import { asEstimates, notUsable, type DensityResult } from './interval';
import { lineGroups } from './line-groups';
import { lineVelocityEstimate } from './line-velocity';
import { markedChainsEstimate } from './marked-chains';
import { nearestLines } from './nearest-lines';
import { neighbourDistanceEstimate } from './neighbour-distance';
import { trappedPool } from './trapped-pool';
import { usedTracks } from './used-tracks';
import { visibleLengthEstimate } from './visible-length';

const BY_TRACERS: readonly [EstimateMethod, (context: EstimateContext) => DensityResult][] = [
  ['crossings', crossingsEstimate],
  ['visible-length', visibleLengthEstimate],
  ['neighbour-distance', neighbourDistanceEstimate],
  ['beads-per-length', beadsPerLength],
  ['line-velocity', lineVelocityEstimate],
  ['decay', decayEstimate],
];

/** Methods whose formulas take isotropic lines for granted, and count those that carry a tracer. */
const BY_ISOTROPY: readonly EstimateMethod[] = [
  'crossings',
  'neighbour-distance',
  'beads-per-length',
  'marked-chains',
];

export interface LineDensityEstimates {
  /** Line density and line spacing by every method and combined. */
  estimates: Estimate[];
  /** Number of the line of a trapped track, -1 for others. */
  line: Int32Array;
  /** What the methods share; null where there are too few trapped tracers for any. */
  context: EstimateContext | null;
}

/**
 * Line density and spacing by every method that the recording allows, each with an interval or the
 * reason why it can't be used, and combined.
 *
 * @param populationNote why tracks have the names they have.
 * @param captures pieces of tracks and where they change their state; null where the populations were not told apart.
 * @param marks lines that people marked.
 */
export function lineDensityEstimates(
  tracks: Tracks,
  population: Uint8Array,
  populationNote: string,
  image: { width: number; height: number; frames: number },
  conditions: Conditions,
  recipe: Recipe,
  captures: { pieces: Pieces; changes: readonly StateChange[] } | null = null,
  marks: readonly MarkedFrame[] = [],
): LineDensityEstimates {
  const pool = trappedPool(tracks, population, image, conditions);
  const groups = lineGroups(tracks, pool, image);
  const refusal = withoutTracers(pool, populationNote);
  const context = refusal ? null : shared();
  const cautions = context ? lineDirections(context) + darkLines(context) : '';
  const results: DensityResult[] = BY_TRACERS.map(([method, estimate]) => {
    const result = context ? estimate(context) : notUsable(method, refusal ?? '');
    return BY_ISOTROPY.includes(method) ? withCautions(result) : result;
  });
  const flights = captures && freeFlights(captures.pieces, captures.changes, conditions, pool.driftPx, image);
  results.push(freePathEstimate(flights, conditions));
  const { spotSizePx } = recipe;
  const marked = markedChainsEstimate(marks, { tracks, trapped: pool.chosen, image, conditions, spotSizePx });
  results.push(withCautions(marked));
  results.push(heatFluxPrior(conditions));
  const byIsotropy = results.some((result) => result.valueM2 !== null && BY_ISOTROPY.includes(result.method));
  const combined = combine(results);
  results.push(byIsotropy ? withCautions(combined) : combined);
  return { estimates: results.flatMap(asEstimates), line: groups.line, context };

  function withCautions(result: DensityResult): DensityResult {
    return result.valueM2 === null ? result : { ...result, note: result.note + cautions };
  }

  function shared(): EstimateContext {
    const h = conditions.sheetThickness_m;
    const used = usedTracks(tracks, groups);
    const found = h
      ? findFellows(tracks, pool, groups, used, image, conditions, h, recipe.spotSizePx)
      : { fellows: null, by: 'motion' as const, bends: false };
    const nearest = nearestLines(tracks, used.used, groups, image, conditions.pixelSize_m);
    return { tracks, image, conditions, recipe, pool, groups, used, ...found, nearest };
  }
}
