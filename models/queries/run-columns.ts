import type { RunConditionsInput } from '@/lib/schemas/conditions';
import type { Run } from '../run';

/** Column of each condition of a run. */
export const CONDITION_COLUMNS = {
  pixelSize_m: 'pixel_size_m',
  frameInterval_s: 'frame_interval_s',
  exposure_s: 'exposure_s',
  sheetThickness_m: 'sheet_thickness_m',
  temperature_K: 'temperature_k',
  pressure_Pa: 'pressure_pa',
  drive: 'drive',
  heatFlux_W_m2: 'heat_flux_w_m2',
  heatLeak_W: 'heat_leak_w',
  flowDirection: 'flow_direction',
  gravityDirection: 'gravity_direction',
  tracer: 'tracer',
  channel: 'channel',
  tracersPerArea_m2: 'tracers_per_area_m2',
  gamma_s_m2: 'gamma_s_m2',
  v0_m_s: 'v0_m_s',
} as const satisfies Record<keyof RunConditionsInput, string>;

type ConditionField = keyof typeof CONDITION_COLUMNS;
export type ConditionRow = Record<(typeof CONDITION_COLUMNS)[ConditionField], unknown>;

const FIELDS = Object.entries(CONDITION_COLUMNS) as [ConditionField, keyof ConditionRow][];

/** The conditions of a stored run, null where nothing is known. */
export function conditionsOf(row: ConditionRow): RunConditionsInput {
  return Object.fromEntries(FIELDS.map(([field, column]) => [field, row[column]])) as RunConditionsInput;
}

/** Values by column for what is sent; fields that are left out are left alone. */
export function conditionColumns(input: Partial<RunConditionsInput>): Record<string, unknown> {
  return Object.fromEntries(FIELDS.map(([field, column]) => [column, input[field]]));
}

/** The same values by field of the model, null where nothing is sent: for a new run. */
export function runFields(input: Partial<RunConditionsInput>): Partial<Run> {
  const columns = Object.entries(conditionColumns(input));
  return Object.fromEntries(columns.map(([column, value]) => [camel(column), value ?? null]));
}

/** Name of the model's field for a column. */
const camel = (column: string): string =>
  column.replace(/_([a-z0-9])/g, (_, letter: string) => letter.toUpperCase());
