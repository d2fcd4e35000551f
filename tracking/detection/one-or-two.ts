import { SHAPE_ERROR } from './second-look';

/**
 * How much more likely another spot is right beside one than anywhere else, as twice the logarithm of the
 * odds: tracers come in pairs, meet and pass each other.
 */
const NEIGHBOUR_ODDS = 4;
/** Noise lets a second spot gain so much in the light of one about 3 times in 1,000 (simulated). */
const BESIDE_GAIN_LEAST = 14;
/** And elsewhere in the box around a spot once in 700, by Adler's formula for its 81 px at spots of 1.2 px. */
const GAIN_LEAST = 17;

/**
 * Of spots with this score of elongation that stay one, half are two (recordings of mixed brightness with as
 * many meetings as counterflow has), and the odds change by e per so much.
 */
const EVEN_ELONGATION = 15.5;
const ELONGATION_PER_E = 1.5;

/** A neighbour within so many spot sizes shares its light with a spot. */
export const BESIDE_SIGMAS = 4;
/** Within so many, only likelihood can tell two from one. */
export const MERGED_SIGMAS = 2.5;

/**
 * Twice the log-likelihood that one more spot must gain. A spot whose shape is a little other than assumed
 * gains by a second one too, in proportion to its light.
 *
 * @param gainLeast what it must gain in the middle of nowhere
 * @param lightBesideE photoelectrons of the spots beside it, 0 where there is none
 */
export function gainWanted(gainLeast: number, lightBesideE: number): number {
  if (!(lightBesideE > 0)) return Math.max(GAIN_LEAST, gainLeast);
  return Math.max(BESIDE_GAIN_LEAST, gainLeast - NEIGHBOUR_ODDS) + SHAPE_ERROR * SHAPE_ERROR * lightBesideE;
}

/** Chance that what was fitted as one spot is two, by its score of elongation. */
export function chanceOfTwo(elongation: number): number {
  return 1 / (1 + Math.exp((EVEN_ELONGATION - elongation) / ELONGATION_PER_E));
}
