import type { RunConditions } from '../flow/run-conditions';

/** What a rehearsal is of: a whole recording simulated, or particles planted in the frames of a real one. */
export type RehearsalKind = 'simulated' | 'planted';

/** Tracers and lines of a rehearsal. */
export interface RehearsalScene {
  widthPx: number;
  heightPx: number;
  frames: number;
  /** Tracers in sight per area of the sheet, m^-2. */
  seeding_m2: number;
  /** Share of them that sit on lines, 0 to 1. */
  trappedShare: number;
  /** Vortex line length per volume, m^-2; null: what the heat flux leads to expect. */
  lineDensity_m2: number | null;
  /** Mean photoelectrons of a tracer in a frame; null where the SNR says it. */
  brightness_e: number | null;
  /** Peak over the noise at the peak, of the mean tracer; null where the brightness says it. */
  snr: number | null;
  /** Standard deviation of the logarithm of the brightness between tracers. */
  brightnessSpread: number;
  /** Pairs of lines that meet and part while they are looked at. */
  meetings: number;
}

/** Camera and light of a simulated recording. */
export interface RehearsalCamera {
  /** Standard deviation of a tracer's image, px. */
  spotSizePx: number;
  /** Background in the brightest part of the sheet, electrons per pixel. */
  background_e: number;
  readNoise_e: number;
  /** Light at the upper and lower edge of the image over that of the brightest row, 0 to 1. */
  edgeLight: number;
}

/** A rehearsal as it was asked for, SI. The same plan always gives the same frames. */
export interface RehearsalPlan {
  conditions: RunConditions & { pixelSize_m: number; frameInterval_s: number };
  scene: RehearsalScene;
  /** Null for planted particles: the camera is that of the recording. */
  camera: RehearsalCamera | null;
  seed: number;
}

interface Bound {
  name: string;
  least: number;
  most: number;
  whole?: boolean;
  unit?: string;
}

/** What the values of a plan may be at all; `checkPlan` adds what they may be together. */
export const PLAN_BOUNDS = {
  'scene.widthPx': { name: 'Width', least: 64, most: 2048, whole: true, unit: 'px' },
  'scene.heightPx': { name: 'Height', least: 64, most: 2048, whole: true, unit: 'px' },
  'scene.frames': { name: 'Frames', least: 8, most: 5000, whole: true },
  'scene.seeding_m2': { name: 'Seeding density', least: 1e4, most: 1e10, unit: 'm^-2' },
  'scene.trappedShare': { name: 'Trapped share', least: 0, most: 1 },
  'scene.lineDensity_m2': { name: 'Line density', least: 1e4, most: 1e12, unit: 'm^-2' },
  'scene.brightness_e': { name: 'Brightness', least: 1, most: 1e6, unit: 'electrons' },
  'scene.snr': { name: 'SNR', least: 0.5, most: 200 },
  'scene.brightnessSpread': { name: 'Spread of brightness', least: 0, most: 1.5 },
  'scene.meetings': { name: 'Meetings', least: 0, most: 500, whole: true },
  'camera.spotSizePx': { name: 'Spot size', least: 0.5, most: 6, unit: 'px' },
  'camera.background_e': { name: 'Background', least: 0.1, most: 1e4, unit: 'electrons' },
  'camera.readNoise_e': { name: 'Read noise', least: 0, most: 100, unit: 'electrons' },
  'camera.edgeLight': { name: 'Light at the edges', least: 0.02, most: 1 },
  seed: { name: 'Seed', least: 0, most: 4_294_967_295, whole: true },
} as const satisfies Record<string, Bound>;

export type PlanField = keyof typeof PLAN_BOUNDS;

/** Names the field of a plan that can't be, with one sentence. */
export class PlanRangeError extends RangeError {
  constructor(
    readonly field: string,
    message: string,
  ) {
    super(message);
    this.name = 'PlanRangeError';
  }
}

/** What is wrong with one value; null where nothing is. */
export function planFieldError(field: PlanField, value: unknown): string | null {
  const { name, least, most, whole = false, unit = '' }: Bound = PLAN_BOUNDS[field];
  const good = typeof value === 'number' && value >= least && value <= most && (!whole || Number.isInteger(value)); // prettier-ignore
  if (good) return null;
  const range = `${whole ? 'a whole number' : 'a number'} from ${least} to ${most} ${unit}`.trimEnd();
  return `${name} must be ${range} (you typed '${String(value ?? '').slice(0, 40)}').`;
}

/** Pixels of all frames together: a file of 1 GB. */
const PIXELS_MOST = 500_000_000;
/** Points of all tracers in sight. */
const POINTS_MOST = 4_000_000;

/**
 * Checks what the values of a plan are together, beyond their own bounds.
 * @throws PlanRangeError
 */
export function checkPlan({ conditions, scene }: RehearsalPlan): void {
  const { widthPx, heightPx, frames, brightness_e, snr } = scene;
  const pixels = widthPx * heightPx * frames;
  if (pixels > PIXELS_MOST) {
    throw new PlanRangeError(
      'scene.frames',
      `At most ${PIXELS_MOST / 1e6} million pixels in all frames together (this is ${Math.ceil(pixels / 1e6)} million): take fewer frames or a smaller image.`,
    );
  }
  const inSight = tracersInSight(conditions.pixelSize_m, scene);
  if (inSight * frames > POINTS_MOST) {
    throw new PlanRangeError(
      'scene.seeding_m2',
      `At most ${POINTS_MOST / 1e6} million tracer images in all (${Math.round(inSight)} tracers in ${frames} frames are more): seed more thinly or take fewer frames.`,
    );
  }
  if (inSight > CROWDED_PX2 * widthPx * heightPx) {
    const most = CROWDED_PX2 / conditions.pixelSize_m ** 2;
    throw new PlanRangeError('scene.seeding_m2', `Seeding this dense puts a tracer on every ${Math.round((widthPx * heightPx) / inSight)} px²: with these pixels at most ${(most / 1e6).toPrecision(2)} per mm².`); // prettier-ignore
  }
  if (inSight < 1) {
    throw new PlanRangeError('scene.seeding_m2', `With seeding this thin no tracer is in sight (${inSight.toPrecision(2)} on average): seed more densely.`); // prettier-ignore
  }
  if ((brightness_e === null) === (snr === null)) {
    throw new PlanRangeError('scene.brightness_e', 'Give either the brightness or the SNR of a tracer.');
  }
  const { exposure_s, frameInterval_s } = conditions;
  if (exposure_s && exposure_s > frameInterval_s) {
    throw new PlanRangeError('exposure_s', 'The exposure must not be longer than the frame interval.');
  }
  if (!conditions.sheetThickness_m) {
    throw new PlanRangeError('sheetThickness_m', 'Enter the sheet thickness: how many lines are seen follows from it.'); // prettier-ignore
  }
}

/** Denser than this, images cover each other wherever one looks: a tracer per 20 px^2. */
const CROWDED_PX2 = 0.05;

/** Tracers in sight at once, on average. */
export function tracersInSight(
  pixelSizeM: number,
  { widthPx, heightPx, seeding_m2 }: Pick<RehearsalScene, 'widthPx' | 'heightPx' | 'seeding_m2'>,
): number {
  return seeding_m2 * widthPx * heightPx * pixelSizeM ** 2;
}
