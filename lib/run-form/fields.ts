import { CONDITION_BOUNDS, type ConditionName } from '@/lib/schemas/conditions';

/** A unit that a field can be typed in; `toSi` turns the typed number into SI. */
export interface FieldUnit {
  key: string;
  toSi(typed: number): number;
  fromSi(si: number): number;
}

const times = (key: string, factor: number): FieldUnit => ({
  key,
  // Dividing by the inverse keeps 6.5 um at 6.5e-6 where multiplying would leave 6.499999e-6.
  toSi: (typed) => (factor < 1 ? typed / Math.round(1 / factor) : typed * factor),
  fromSi: (si) => (factor < 1 ? si * Math.round(1 / factor) : si / factor),
});

const rate: FieldUnit = { key: 'Hz', toSi: (hz) => 1 / hz, fromSi: (s) => 1 / s };

const micrometres = [times('µm', 1e-6), times('mm', 1e-3)];
const millimetres = [times('mm', 1e-3), times('cm', 1e-2)];

/** Units of each quantity of a run, the usual one first. */
export const FIELD_UNITS = {
  temperature_K: [times('K', 1), times('mK', 1e-3)],
  pressure_Pa: [times('Pa', 1), times('kPa', 1e3)],
  heatFlux_W_m2: [times('mW/cm²', 10), times('W/m²', 1)],
  heatLeak_W: [times('mW', 1e-3)],
  'channel.width_m': millimetres,
  'channel.depth_m': millimetres,
  'channel.length_m': millimetres,
  'tracer.diameter_m': [times('µm', 1e-6)],
  'tracer.density_kg_m3': [times('kg/m³', 1)],
  tracersPerArea_m2: [times('mm⁻²', 1e6)],
  sheetThickness_m: micrometres,
  frameInterval_s: [rate, times('ms', 1e-3), times('µs', 1e-6)],
  exposure_s: [times('ms', 1e-3), times('µs', 1e-6)],
  pixelSize_m: [times('µm', 1e-6)],
  gamma_s_m2: [times('s/cm²', 1e4)],
  v0_m_s: [times('mm/s', 1e-3)],
} as const satisfies Record<ConditionName, readonly FieldUnit[]>;

export const NUMBER_FIELDS = Object.keys(FIELD_UNITS) as ConditionName[];

/** The unit of a field by its key; the usual one for an unknown key. */
export function fieldUnit(field: ConditionName, key: string | undefined): FieldUnit {
  const units: readonly FieldUnit[] = FIELD_UNITS[field];
  return units.find((unit) => unit.key === key) ?? units[0];
}

/** Name of a field in words, as on its label. */
export const fieldName = (field: ConditionName): string => CONDITION_BOUNDS[field].name;
