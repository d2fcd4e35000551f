import { deriveRun } from '../flow/derive-run';
import type { Scene, SceneCamera } from '../simulate/scene';
import { brightnessOfSnr } from '../simulate/standard-scene';
import { sceneLoad } from '../simulate/tangle-boxes';
import { fillTangleOptions, type TangleOptions } from '../simulate/tangle-options';
import { tangleScene } from '../simulate/tangle-scene';
import { checkPlan, PlanRangeError, tracersInSight, type RehearsalPlan } from './plan';
import type { RehearsalTruth } from './truth';

/** Tracers followed times frames: about half a minute of work. */
const STEPS_MOST = 200_000_000;
const LINES_MOST = 3_000_000;
/** Sudden jumps of a line, per line and second, as in the studies of the line density. */
const BURSTS_PER_LINE_S = 0.5;
/** A camera whose counts use a good part of its range. */
const GAIN_COUNTS_PER_E = 2;
const OFFSET_COUNTS = 100;
const RIPPLE = 0.06;

/** What is needed of the camera to know how bright a tracer of a given SNR is. */
type LightFacts = Pick<SceneCamera, 'backgroundE' | 'readNoiseE' | 'spotSigmaPx'>;

/** The camera of a simulated recording. */
export function cameraOf({ camera, conditions, seed }: RehearsalPlan): SceneCamera {
  if (!camera) throw new PlanRangeError('camera', 'A simulated recording needs a camera.');
  return {
    spotSigmaPx: camera.spotSizePx,
    backgroundE: camera.background_e,
    sheetEdgeLight: camera.edgeLight,
    ripple: RIPPLE,
    readNoiseE: camera.readNoise_e,
    gainCountsPerE: GAIN_COUNTS_PER_E,
    offsetCounts: OFFSET_COUNTS,
    bitDepth: 16,
    seed,
    exposureFrames: Math.min(1, (conditions.exposure_s ?? 0) / conditions.frameInterval_s),
  };
}

/** Line density of a plan, m^-2: the one given, else what its conditions lead to expect; 0 where no tracer is trapped. */
export function lineDensityOf({ conditions, scene }: RehearsalPlan): number {
  if (scene.lineDensity_m2 !== null) return scene.lineDensity_m2;
  const spacing = deriveRun(conditions).values.expectedSpacing_m;
  if (spacing !== null) return 1 / spacing ** 2;
  if (scene.trappedShare === 0) return 0;
  throw new PlanRangeError(
    'scene.lineDensity_m2',
    'Enter the line density: none follows from these conditions.',
  );
}

/**
 * The scene that a plan asks for, in the simulator's own terms. Free tracers go with the mean normal
 * fluid and trapped ones with the superfluid, as the conditions give them; without a heat flux the
 * helium stands still. Gravity is left out.
 * @throws PlanRangeError for what would take too long to make, or makes no sense.
 */
export function tangleOf(plan: RehearsalPlan, light: LightFacts): TangleOptions {
  checkPlan(plan);
  const { conditions, scene, seed } = plan;
  const { pixelSize_m: pixelSizeM, frameInterval_s: frameIntervalS, flowDirection } = conditions;
  const sheetThicknessM = conditions.sheetThickness_m!;
  const { vn_m_s, vs_m_s } = deriveRun(conditions).values;
  const inSight = tracersInSight(pixelSizeM, scene);
  const lineDensityM2 = lineDensityOf(plan);
  const lineLengthM = lineDensityM2 * scene.widthPx * scene.heightPx * pixelSizeM ** 2 * sheetThicknessM;
  const across = acrossFlowM(plan);
  const channelM = conditions.channel?.width_m ?? 0;
  const options: TangleOptions = {
    widthPx: scene.widthPx,
    heightPx: scene.heightPx,
    frames: scene.frames,
    pixelSizeM,
    frameIntervalS,
    sheetThicknessM,
    lineDensityM2,
    beadsPerMetre: lineLengthM > 0 ? (scene.trappedShare * inSight) / lineLengthM : 0,
    freeTracersPerFrame: (1 - scene.trappedShare) * inSight,
    vnMPerS: vn_m_s ?? 0,
    tangleVelocityMPerS: vs_m_s ?? 0,
    flowDirection: flowDirection ?? [1, 0],
    ...(channelM >= across ? { channelWidthM: channelM } : {}),
    burstsPerLineS: BURSTS_PER_LINE_S,
    brightnessE: brightnessOf(plan, light),
    brightnessSpread: scene.brightnessSpread,
    events: scene.meetings,
    seed,
  };
  const load = sceneLoad(fillTangleOptions(options));
  if (load.lines > LINES_MOST) {
    throw new PlanRangeError('scene.lineDensity_m2', `Too many lines pass by to be simulated (${(load.lines / 1e6).toFixed(1)} million, at most ${LINES_MOST / 1e6}): take fewer frames, a smaller image or a lower line density.`); // prettier-ignore
  }
  if (load.tracers * scene.frames > STEPS_MOST) {
    throw new PlanRangeError('scene.frames', `Too many tracers pass by to be simulated (${Math.round(load.tracers)} in ${scene.frames} frames): take fewer frames, a higher frame rate or thinner seeding.`); // prettier-ignore
  }
  return options;
}

function acrossFlowM({ conditions, scene }: RehearsalPlan): number {
  const [fx, fy] = conditions.flowDirection ?? [1, 0];
  return (Math.abs(fy) * scene.widthPx + Math.abs(fx) * scene.heightPx) * conditions.pixelSize_m;
}

function brightnessOf({ scene }: RehearsalPlan, light: LightFacts): number {
  if (scene.brightness_e !== null) return scene.brightness_e;
  return brightnessOfSnr(scene.snr ?? 0, light.backgroundE, light.readNoiseE, light.spotSigmaPx);
}

/**
 * What a simulated rehearsal is made of: the scene, its camera, and what the page needs to know of them.
 * @throws PlanRangeError
 */
export function makeTruth(
  plan: RehearsalPlan,
  camera = cameraOf(plan),
  kind: RehearsalTruth['kind'] = 'simulated',
): RehearsalTruth {
  // prettier-ignore
  const options = tangleOf(plan, camera);
  const scene: Scene = tangleScene(options);
  const { conditions } = plan;
  const { lineDensityM2, beadsPerMetre } = options;
  return {
    kind,
    scene,
    camera,
    made: {
      pixelSizeM: options.pixelSizeM,
      frameIntervalS: options.frameIntervalS,
      exposureS: conditions.exposure_s ?? null,
      sheetThicknessM: options.sheetThicknessM,
      spacingM: lineDensityM2 > 0 ? 1 / Math.sqrt(lineDensityM2) : null,
      beadsPerMetre: beadsPerMetre > 0 ? beadsPerMetre : null,
    },
  };
}
