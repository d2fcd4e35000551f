import type { FeatureTable } from '../populations/feature-table';
import { FEATURES } from '../populations/track-features';
import { createRandom, mixSeed } from '../random';

/** What tracks are told apart by, for a plot: a random part of them. Plain JSON. */
export interface FeaturePoints {
  /** Tracks that have features; the lists hold at most 800 of them. */
  judged: number;
  track: number[];
  /** Codes of `POPULATIONS`. */
  population: number[];
  pTrapped: (number | null)[];
  /** Mean velocity along the flow (along x where none is known), m/s. */
  alongMS: number[];
  /** R.m.s. velocity across it, localization noise taken off, m/s. */
  transverseMS: number[];
  /** R.m.s. acceleration, likewise, m/s^2. */
  accelerationMS2: number[];
  /** Slope of ln mean squared displacement against ln lag. */
  msdSlope: number[];
}

const POINTS_MOST = 800;

/** Draws tracks at random from the table, in their order. */
export function featurePoints(
  table: FeatureTable,
  population: Uint8Array,
  pTrapped: Float32Array,
  seed: number,
): FeaturePoints {
  const random = createRandom(mixSeed(seed, 61));
  const rows: number[] = [];
  // Selection sampling (Knuth, algorithm S): every set of rows is as likely.
  for (let i = 0; i < table.n && rows.length < POINTS_MOST; i++) {
    if (random.uniform() * (table.n - i) < POINTS_MOST - rows.length) rows.push(i);
  }
  const column = (d: number, of: (value: number) => number = (v) => v) =>
    rows.map((i) => Number(of(table.value[i * FEATURES + d]).toPrecision(4)));
  return {
    judged: table.n,
    track: rows.map((i) => table.track[i]),
    population: rows.map((i) => population[table.track[i]]),
    pTrapped: rows.map((i) => {
      const p = pTrapped[table.track[i]];
      return Number.isNaN(p) ? null : Number(p.toFixed(4));
    }),
    alongMS: column(0),
    transverseMS: column(1, Math.exp),
    accelerationMS2: column(2, Math.exp),
    msdSlope: column(3),
  };
}
