import type { Caution } from './cautions';

/** The derived quantities of a run, names as published; null where they can't be known. */
export interface DerivedValues {
  rhoSRatio: number | null;
  vn_m_s: number | null;
  vs_m_s: number | null;
  vns_m_s: number | null;
  alpha: number | null;
  expectedSpacing_m: number | null;
  stepPerFrame_px: number | null;
  settling_m_s: number | null;
}

export type DerivedName = keyof DerivedValues;

/** One derived quantity for the screen. */
export interface DerivedEntry {
  value: number | null;
  unit: string;
  /** Relative standard error; null when unknown. */
  relativeError: number | null;
  /** Why there is no value, or what to know about it; null when there is nothing to say. */
  reason: string | null;
  /** True when it rests on a number that nobody has checked against its source. */
  unverified: boolean;
}

export interface PlanWarning {
  code: string;
  /** A plain sentence. */
  detail: string;
  /** The field of the run to look at. */
  field?: string;
}

export interface DerivedRun {
  values: DerivedValues;
  entries: Record<DerivedName, DerivedEntry>;
  warnings: PlanWarning[];
  cautions: Caution[];
}

export function known(
  value: number,
  unit: string,
  relativeError: number | null,
  reason: string | null = null,
) {
  return { value, unit, relativeError, reason, unverified: false } satisfies DerivedEntry;
}

export function unknown(unit: string, reason: string) {
  return { value: null, unit, relativeError: null, reason, unverified: false } satisfies DerivedEntry;
}
