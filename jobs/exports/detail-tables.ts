import type { TableDefinition } from '@/lib/exports/column';
import type { Series } from '@/tracking/details/series';
import type { FlowDetails, MotionMeasures } from '@/tracking/flow-measures';
import { piece, type Value } from './small-tables';
import type { TablePiece } from './table-pieces';

/** Rows of one quantity: what names it, then place, value, low, high. */
const seriesRows = (
  names: readonly Value[],
  places: readonly number[],
  { value, low, high }: Series,
): Value[][] =>
  // prettier-ignore
  places.map((place, i) => [...names, place, value[i], low[i], high[i]]);

export function overTimePiece(table: TableDefinition, details: FlowDetails | null): TablePiece {
  if (!details) return piece(table, []);
  const { timeS, densities, trappedPerAreaM2, freePerAreaM2 } = details.overTime;
  return piece(table, [
    ...densities.flatMap((one) => seriesRows(['line_density', one.method, 'm^-2'], timeS, one)),
    ...seriesRows(['trapped_tracers', 'count', 'm^-2'], timeS, trappedPerAreaM2),
    ...seriesRows(['free_tracers', 'count', 'm^-2'], timeS, freePerAreaM2),
  ]);
}

export function profilesPiece(table: TableDefinition, details: FlowDetails | null): TablePiece {
  const profiles = details?.profiles;
  if (!profiles) return piece(table, []);
  const { placeM, freeAlongMS, trappedAlongMS, spotsPerAreaM2, densityM2 } = profiles;
  return piece(table, [
    ...seriesRows(['free_along', 'm/s'], placeM, freeAlongMS),
    ...seriesRows(['trapped_along', 'm/s'], placeM, trappedAlongMS),
    ...seriesRows(['spots', 'm^-2'], placeM, spotsPerAreaM2),
    ...(densityM2 ? seriesRows(['line_density', 'm^-2'], placeM, densityM2) : []),
  ]);
}

export const accelerationsPiece = (table: TableDefinition, details: FlowDetails | null): TablePiece =>
  piece(
    table,
    (details?.accelerations ?? []).map(
      (a) =>
      [a.population, a.component, a.lagS, a.rmsMS2, a.lowMS2, a.highMS2, a.noiseMS2, a.excessKurtosis, a.samples, a.tracks], // prettier-ignore
    ),
  );

export const tailsPiece = (table: TableDefinition, motion: MotionMeasures | null): TablePiece =>
  piece(
    table,
    (motion?.tails ?? []).map(
      (t) =>
      [t.population, t.component, t.lagS, t.exponent, t.exponentLow, t.exponentHigh, t.fromMS, t.tailSamples, t.tailTracks, t.verdict], // prettier-ignore
    ),
  );

export const changesPiece = (table: TableDefinition, details: FlowDetails | null): TablePiece =>
  piece(
    table,
    (details?.changes ?? []).map(({ track, kind, frame, lnOdds }) => [track, kind, frame, lnOdds]),
  );
