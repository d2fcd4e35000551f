import { CAMERA_DEFAULTS, SCENE_DEFAULTS } from '@/lib/schemas/rehearsal';
import { PLAN_BOUNDS, type PlanField } from '@/tracking/rehearsal/plan';

/** A number of the scene or the camera as a person types it. */
export interface PlanFieldForm {
  /** Printed in the box; `^` raises. */
  unit?: string;
  /** How many SI units (or plain ones) one typed unit is. */
  perTyped: number;
  /** What stands there at first; empty for what follows from the rest. */
  usual: string;
}

const shown = (value: number, perTyped = 1) => String(Number((value / perTyped).toPrecision(7)));

/** Fields of the form, in their order. Width, height, frames and camera belong to simulated recordings only. */
export const PLAN_FIELDS = {
  'scene.widthPx': { unit: 'px', perTyped: 1, usual: shown(SCENE_DEFAULTS.widthPx) },
  'scene.heightPx': { unit: 'px', perTyped: 1, usual: shown(SCENE_DEFAULTS.heightPx) },
  'scene.frames': { perTyped: 1, usual: shown(SCENE_DEFAULTS.frames) },
  'scene.seeding_m2': { unit: 'mm^-2', perTyped: 1e6, usual: shown(SCENE_DEFAULTS.seeding_m2, 1e6) },
  'scene.trappedShare': { unit: '%', perTyped: 0.01, usual: shown(SCENE_DEFAULTS.trappedShare, 0.01) },
  'scene.lineDensity_m2': { unit: '10^6 m^-2', perTyped: 1e6, usual: '' },
  'scene.brightness_e': { unit: 'electrons', perTyped: 1, usual: shown(SCENE_DEFAULTS.brightness_e) },
  'scene.snr': { perTyped: 1, usual: '5' },
  'scene.brightnessSpread': { perTyped: 1, usual: shown(SCENE_DEFAULTS.brightnessSpread) },
  'scene.meetings': { perTyped: 1, usual: shown(SCENE_DEFAULTS.meetings) },
  'camera.spotSizePx': { unit: 'px', perTyped: 1, usual: shown(CAMERA_DEFAULTS.spotSizePx) },
  'camera.background_e': { unit: 'electrons', perTyped: 1, usual: shown(CAMERA_DEFAULTS.background_e) },
  'camera.readNoise_e': { unit: 'electrons', perTyped: 1, usual: shown(CAMERA_DEFAULTS.readNoise_e) },
  'camera.edgeLight': { unit: '%', perTyped: 0.01, usual: shown(CAMERA_DEFAULTS.edgeLight, 0.01) },
  seed: { perTyped: 1, usual: '1' },
} as const satisfies Record<PlanField, PlanFieldForm>;

export const PLAN_FIELD_NAMES = Object.keys(PLAN_FIELDS) as PlanField[];

/** The typed number of a stored value. */
export const planText = (field: PlanField, value: number | null | undefined): string =>
  value === null || value === undefined ? '' : shown(value, PLAN_FIELDS[field].perTyped);

/** What a field must be, in the units of the form: "a whole number from 8 to 5000". */
export function planRange(field: PlanField): string {
  const { least, most, whole = false } = PLAN_BOUNDS[field] as { least: number; most: number; whole?: boolean }; // prettier-ignore
  const { perTyped, unit = '' } = PLAN_FIELDS[field] as PlanFieldForm;
  const words = unit.replace(/\^/g, '');
  return `${whole ? 'a whole number' : 'a number'} from ${shown(least, perTyped)} to ${shown(most, perTyped)} ${words}`.trimEnd();
}
