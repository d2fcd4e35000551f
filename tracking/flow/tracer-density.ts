import type { Tracer } from '../types';

/**
 * Solid densities, kg/m^3, from the molar volumes of Woolley, Scott & Brickwedde, J. Res. NBS 41,
 * 379 (1948), +-3 %.
 */
const SOLIDS = [
  { name: 'solid hydrogen', pattern: /^(solid )?(h2|h₂|hydrogen)$/i, densityKgM3: 88 },
  { name: 'solid deuterium', pattern: /^(solid )?(d2|d₂|deuterium)$/i, densityKgM3: 200 },
] as const;

/** Density of a tracer: as entered, else of its pure solid; null for mixtures and unknown species. */
export function tracerDensity(
  tracer: Tracer | null | undefined,
): { densityKgM3: number; from: string } | null {
  if (!tracer) return null;
  if (tracer.density_kg_m3) return { densityKgM3: tracer.density_kg_m3, from: 'as entered' };
  const species = tracer.species?.trim() ?? '';
  const solid = SOLIDS.find((known) => known.pattern.test(species));
  return solid ? { densityKgM3: solid.densityKgM3, from: `density of ${solid.name}, within 3 %` } : null;
}

/** True for tracers made of hydrogen or deuterium gas, mixtures included. */
export function isFlammableTracer(tracer: Tracer | null | undefined): boolean {
  return /hydrogen|deuterium|\b(h2|d2|hd)\b|h₂|d₂/i.test(tracer?.species ?? '');
}
