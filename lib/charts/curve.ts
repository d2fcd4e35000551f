export type PlottedPopulation = 'trapped' | 'free' | 'undecided' | 'all';

/** Populations are drawn in this order: what matters most lies on top. */
export const DRAWING_ORDER: readonly PlottedPopulation[] = ['undecided', 'all', 'free', 'trapped'];

/** A point in the printed units; `y` null breaks the line there. */
export interface PlotPoint {
  x: number;
  y: number | null;
}

/** One curve in printed units with its 95 % band. */
export interface Curve {
  population: PlottedPopulation;
  points: readonly (PlotPoint & { low: number | null; high: number | null })[];
  /** What a fit of it found, told in the plot's sentence and in the line under it. */
  finding?: string;
}
