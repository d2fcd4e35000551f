export type EstimateMethod =
  | 'crossings'
  | 'visible-length'
  | 'beads-per-length'
  | 'neighbour-distance'
  | 'line-velocity'
  | 'free-path'
  | 'heat-flux-prior'
  | 'decay'
  | 'marked-chains'
  | 'combined';

export interface EstimateInput {
  value: number | string | null;
  unit: string;
}

/** One number of the published estimates, names as in `estimates.json`. */
export interface Estimate {
  quantity: string;
  unit: string;
  method: EstimateMethod;
  /** Null where the method can't be used; `note` says why. */
  value: number | null;
  low: number | null;
  high: number | null;
  /** Coverage of the interval. */
  level: number;
  inputs: Record<string, EstimateInput>;
  note: string;
}
