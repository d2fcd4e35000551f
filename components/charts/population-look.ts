import type { PlottedPopulation } from '@/lib/charts/curve';

/** The strokes of the populations, as everywhere: beaded, plain, dashed. */
export const POPULATION_LOOK: Record<
  PlottedPopulation,
  { stroke: string; widthPx: number; dash?: string; beads: boolean }
> = {
  trapped: { stroke: 'var(--trapped)', widthPx: 1, beads: true },
  free: { stroke: 'var(--free)', widthPx: 2.4, beads: false },
  undecided: { stroke: 'var(--undecided)', widthPx: 1.4, dash: '5 4', beads: false },
  all: { stroke: 'var(--ink)', widthPx: 1.2, beads: false },
};
