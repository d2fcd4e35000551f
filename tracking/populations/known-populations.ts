import type { KnownPopulations, PopulationSummary } from '../flow-measures';
import { POPULATIONS } from '../types';
import type { TrackPopulations } from './populations';
import { wilsonInterval } from './wilson';

/**
 * Puts what is known in place of what was found, and counts anew. The groups of the mixture and the
 * note stay those that were found: they describe all tracks together.
 */
export function applyKnown(found: TrackPopulations, known: KnownPopulations): TrackPopulations {
  const population = found.population.map((code, i) => (known.known[i] > 0 ? known.population[i] : code));
  const pTrapped = found.pTrapped.map((p, i) => (known.known[i] > 0 ? known.pTrapped[i] : p));
  const counts = { trapped: 0, free: 0, undecided: 0 };
  for (const code of population) counts[POPULATIONS[code]]++;
  return {
    ...found,
    population,
    pTrapped,
    summary: { ...found.summary, counts, trappedFraction: fraction(found.summary, counts) },
    // A person's word holds for the whole of what it was said of.
    changes: found.changes.filter(({ track }) => known.known[track] !== 2),
  };
}

function fraction(
  { trappedFraction }: PopulationSummary,
  { trapped, free }: PopulationSummary['counts'],
): PopulationSummary['trappedFraction'] {
  const named = trapped + free;
  if (!trappedFraction || named === 0) return null;
  return { ...trappedFraction, value: trapped / named, ...wilsonInterval(trapped, named) };
}
