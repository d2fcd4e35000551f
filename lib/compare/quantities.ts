import type { ComparedRun } from '../views/compare-view';
import { DISPLAY_UNITS } from '../format/unit';
import { rootDensity } from './fit-campaigns';

/** A value with the ends of its interval; ends are those of the value where none is known. */
export interface ComparedValue {
  value: number;
  low: number | null;
  high: number | null;
}

/** Something of a run that can stand on an axis or in a column, in SI inside. */
export interface ComparedQuantity {
  label: string;
  /** As an axis is titled; `unit` is the printed one. */
  title: { symbol?: string; sub?: string; power?: string; words?: string; unit: string };
  siPerUnit: number;
  /** Whether an axis of it begins at zero. */
  fromZero: boolean;
  of(run: ComparedRun): ComparedValue | null;
}

const { velocity, heatFlux, lineDensity, smallLength, pressure } = DISPLAY_UNITS;
const exact = (value: number | null): ComparedValue | null => value === null ? null : { value, low: value, high: value }; // prettier-ignore
/** Magnitude with one standard error either way. */
const speed = (of: { value: number; error: number | null } | null): ComparedValue | null => {
  if (!of) return null;
  const size = Math.abs(of.value);
  return { value: size, low: size - (of.error ?? 0), high: size + (of.error ?? 0) };
};

/** What was set, and what follows from it. */
export const CONDITIONS = {
  vns: { label: 'counterflow velocity', title: { symbol: 'v', sub: 'ns', unit: velocity.unit }, siPerUnit: velocity.siPerUnit, fromZero: true, of: ({ vns_m_s }) => speed(vns_m_s) }, // prettier-ignore
  vn: { label: 'normal velocity', title: { symbol: 'v', sub: 'n', unit: velocity.unit }, siPerUnit: velocity.siPerUnit, fromZero: true, of: ({ vn_m_s }) => speed(vn_m_s) }, // prettier-ignore
  temperature: { label: 'temperature', title: { symbol: 'T', unit: 'K' }, siPerUnit: 1, fromZero: false, of: ({ temperature_K }) => exact(temperature_K) }, // prettier-ignore
  'heat-flux': { label: 'heat flux', title: { symbol: 'q', unit: heatFlux.unit }, siPerUnit: heatFlux.siPerUnit, fromZero: true, of: ({ heatFlux_W_m2 }) => exact(heatFlux_W_m2) }, // prettier-ignore
  pressure: { label: 'pressure', title: { symbol: 'p', unit: pressure.unit }, siPerUnit: pressure.siPerUnit, fromZero: false, of: ({ pressure_Pa }) => exact(pressure_Pa) }, // prettier-ignore
} as const satisfies Record<string, ComparedQuantity>;
export type ConditionName = keyof typeof CONDITIONS;

const inverseRoot = (value: number | null) => (value === null ? null : value ** -0.5);

/** What was found. */
export const QUANTITIES = {
  'root-density': {
    label: 'root of the line density',
    title: { symbol: 'L', power: '1/2', unit: 'mm^-1' },
    siPerUnit: 1e3,
    fromZero: true,
    of({ lineDensity_m2 }) {
      if (!lineDensity_m2) return null;
      const end = (value: number | null) => (value === null ? null : Math.sqrt(value));
      return { value: rootDensity(lineDensity_m2).root, low: end(lineDensity_m2.low), high: end(lineDensity_m2.high) }; // prettier-ignore
    },
  },
  density: { label: 'line density', title: { symbol: 'L', unit: lineDensity.unit }, siPerUnit: lineDensity.siPerUnit, fromZero: true, of: ({ lineDensity_m2 }) => lineDensity_m2 }, // prettier-ignore
  spacing: {
    label: 'line spacing',
    title: { symbol: 'l', unit: smallLength.unit },
    siPerUnit: smallLength.siPerUnit,
    fromZero: true,
    of: ({ lineDensity_m2: of }) => of && { value: of.value ** -0.5, low: inverseRoot(of.high), high: inverseRoot(of.low) }, // prettier-ignore
  },
  trapped: { label: 'trapped share', title: { words: 'trapped share', unit: '' }, siPerUnit: 1, fromZero: true, of: ({ trappedShare }) => trappedShare }, // prettier-ignore
  events: { label: 'events per volume and time', title: { words: 'events', unit: 'mm^-3 s^-1' }, siPerUnit: 1e9, fromZero: true, of: ({ events }) => events?.perVolumeTime_m3_s ?? null }, // prettier-ignore
  tail: { label: 'tail exponent', title: { words: 'tail exponent', unit: '' }, siPerUnit: 1, fromZero: false, of: ({ tailExponent }) => tailExponent }, // prettier-ignore
  agreement: { label: 'readers’ agreement', title: { words: 'agreement', symbol: 'κ', unit: '' }, siPerUnit: 1, fromZero: true, of: ({ agreement }) => agreement }, // prettier-ignore
} as const satisfies Record<string, ComparedQuantity>;
export type QuantityName = keyof typeof QUANTITIES;

export const isCondition = (name: string | undefined): name is ConditionName => !!name && name in CONDITIONS;
export const isQuantity = (name: string | undefined): name is QuantityName => !!name && name in QUANTITIES;
