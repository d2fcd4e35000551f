import { z } from 'zod';
import { quantity, type QuantityBounds } from './quantity';
import { nameSchema } from './text';

/** Bounds of every condition, SI; the unit is the one that laboratories write. */
export const CONDITION_BOUNDS = {
  pixelSize_m: { name: 'Pixel size', above: 0, max: 1e-3, unit: 'um', siPerUnit: 1e-6 },
  frameInterval_s: { name: 'Frame interval', above: 0, max: 3600, unit: 'ms', siPerUnit: 1e-3 },
  exposure_s: { name: 'Exposure', above: 0, max: 3600, unit: 'ms', siPerUnit: 1e-3 },
  sheetThickness_m: { name: 'Sheet thickness', above: 0, max: 0.1, unit: 'um', siPerUnit: 1e-6 },
  temperature_K: { name: 'Temperature', above: 0, max: 300, unit: 'K', siPerUnit: 1 },
  pressure_Pa: { name: 'Pressure', min: 0, max: 1e7, unit: 'Pa', siPerUnit: 1 },
  heatFlux_W_m2: { name: 'Heat flux', min: 0, max: 1e6, unit: 'mW/cm2', siPerUnit: 10 },
  heatLeak_W: { name: 'Heat leak', min: 0, max: 100, unit: 'mW', siPerUnit: 1e-3 },
  'tracer.diameter_m': { name: 'Tracer diameter', above: 0, max: 1e-3, unit: 'um', siPerUnit: 1e-6 },
  'tracer.density_kg_m3': { name: 'Tracer density', above: 0, max: 25_000, unit: 'kg/m3', siPerUnit: 1 },
  'channel.width_m': { name: 'Channel width', above: 0, max: 10, unit: 'mm', siPerUnit: 1e-3 },
  'channel.depth_m': { name: 'Channel depth', above: 0, max: 10, unit: 'mm', siPerUnit: 1e-3 },
  tracersPerArea_m2: { name: 'Tracers per area', above: 0, max: 1e10, unit: 'mm^-2', siPerUnit: 1e6 },
  gamma_s_m2: { name: 'Gamma', above: 0, max: 1e8, unit: 's/cm2', siPerUnit: 1e4 },
  v0_m_s: { name: 'Critical velocity', min: 0, max: 1, unit: 'mm/s', siPerUnit: 1e-3 },
  'channel.length_m': { name: 'Channel length', above: 0, max: 100, unit: 'mm', siPerUnit: 1e-3 },
} as const satisfies Record<string, QuantityBounds>;

export type ConditionName = keyof typeof CONDITION_BOUNDS;

const optional = (name: ConditionName) => quantity(CONDITION_BOUNDS[name]).nullish();

/** Unit vectors may be off by rounding as people type them. */
const UNIT_LENGTH_TOLERANCE = 0.01;

const direction = (name: string) =>
  z
    .tuple([z.number(), z.number()], `${name} must be two numbers, x and y.`)
    .refine(
      ([x, y]) => Math.abs(Math.hypot(x, y) - 1) <= UNIT_LENGTH_TOLERANCE,
      `${name} must be a vector of length 1 in image axes, such as [1, 0].`,
    );

export const tracerSchema = z.strictObject({
  species: nameSchema.nullish(),
  diameter_m: optional('tracer.diameter_m'),
  density_kg_m3: optional('tracer.density_kg_m3'),
});

const wallSchema = z.tuple([z.number(), z.number(), z.number(), z.number()]);

export const channelSchema = z.strictObject({
  shape: z.enum(['rectangular', 'circular'], 'Channel shape must be rectangular or circular.'),
  width_m: optional('channel.width_m'),
  depth_m: optional('channel.depth_m'),
  length_m: optional('channel.length_m'),
  wallsPx: z.array(wallSchema).max(16, 'At most 16 walls.').nullish(),
});

const imagingFields = {
  exposure_s: optional('exposure_s'),
  sheetThickness_m: optional('sheetThickness_m'),
  temperature_K: optional('temperature_K'),
  heatFlux_W_m2: optional('heatFlux_W_m2'),
  flowDirection: direction('Flow direction').nullish(),
  tracer: tracerSchema.nullish(),
};

/** `conditions.json` of the command line: the first two are needed, unknown keys are an error. */
export const conditionsFileSchema = z.strictObject({
  pixelSize_m: quantity(CONDITION_BOUNDS.pixelSize_m),
  frameInterval_s: quantity(CONDITION_BOUNDS.frameInterval_s),
  ...imagingFields,
});

/** Conditions as they stand in a run, where anything may still be open. */
export const runConditionsSchema = z.strictObject({
  pixelSize_m: optional('pixelSize_m'),
  frameInterval_s: optional('frameInterval_s'),
  ...imagingFields,
  drive: z.enum(['counterflow', 'coflow', 'towed-grid', 'oscillating-grid', 'none']).nullish(),
  pressure_Pa: optional('pressure_Pa'),
  heatLeak_W: optional('heatLeak_W'),
  gravityDirection: direction('Gravity direction').nullish(),
  channel: channelSchema.nullish(),
  /** Tracers seen per area of the sheet, when known or planned. */
  tracersPerArea_m2: optional('tracersPerArea_m2'),
  /** gamma and v_0 of L^1/2 = gamma (v_ns - v_0), where the laboratory knows its own. */
  gamma_s_m2: optional('gamma_s_m2'),
  v0_m_s: optional('v0_m_s'),
});

export type RunConditionsInput = z.infer<typeof runConditionsSchema>;
