import type { Conditions } from '@/tracking/types';
import { createRenderer } from '@/tracking/simulate/render';
import type { Scene, SceneCamera } from '@/tracking/simulate/scene';
import { tangleScene } from '@/tracking/simulate/tangle-scene';
import type { TangleOptions } from '@/tracking/simulate/tangle-options';
import { omeDescription } from '../ome-description';
import { writeTiff } from '../write-tiff';

/** What a simulated recording shows; sizes and times come from the conditions. */
export interface DemoScene {
  widthPx: number;
  heightPx: number;
  frames: number;
  /** Vortex line length per volume, m^-2: the truth that an analysis should find. */
  lineDensityM2: number;
  /** Trapped tracers in sight, on average. */
  trappedInSight: number;
  freeInSight: number;
  /** Velocity of the normal fluid, and of the tangle as a whole, along the flow, m/s. */
  vnMPerS: number;
  tangleMPerS: number;
  /** Pairs of lines that meet and part. */
  events: number;
  brightnessE: number;
  seed: number;
}

const SHEET_THICKNESS_M = 1e-4;

/** A 16-bit camera at a gain that uses a good part of its range. */
export function demoCamera(seed: number): SceneCamera {
  return {
    spotSigmaPx: 1.2,
    backgroundE: 12,
    sheetEdgeLight: 0.5,
    ripple: 0.06,
    readNoiseE: 1.5,
    gainCountsPerE: 2,
    offsetCounts: 100,
    bitDepth: 16,
    seed,
  };
}

export function demoScene(scene: DemoScene, conditions: Conditions): Scene {
  const sheetThicknessM = conditions.sheetThickness_m ?? SHEET_THICKNESS_M;
  const { pixelSize_m: pixelSizeM } = conditions;
  const volume = scene.widthPx * scene.heightPx * pixelSizeM ** 2 * sheetThicknessM;
  const lineLengthM = scene.lineDensityM2 * volume;
  const options: TangleOptions = {
    widthPx: scene.widthPx,
    heightPx: scene.heightPx,
    frames: scene.frames,
    pixelSizeM,
    frameIntervalS: conditions.frameInterval_s,
    sheetThicknessM,
    lineDensityM2: scene.lineDensityM2,
    beadsPerMetre: lineLengthM > 0 ? scene.trappedInSight / lineLengthM : 0,
    freeTracersPerFrame: scene.freeInSight,
    vnMPerS: scene.vnMPerS,
    tangleVelocityMPerS: scene.tangleMPerS,
    flowDirection: conditions.flowDirection ?? [1, 0],
    brightnessE: scene.brightnessE,
    events: scene.events,
    seed: scene.seed,
  };
  return tangleScene(options);
}

/**
 * Simulates a recording and writes it as a TIFF stack with its scale in OME metadata.
 * @returns the scene, whose truth can be compared with what an analysis finds.
 */
export async function makeDemoStack(path: string, scene: DemoScene, conditions: Conditions): Promise<Scene> {
  const truth = demoScene(scene, conditions);
  const renderer = createRenderer(truth, demoCamera(scene.seed));
  await writeTiff(path, {
    width: scene.widthPx,
    height: scene.heightPx,
    frames: scene.frames,
    frame: (index) => renderer.renderFrame(index),
    description: omeDescription(
      { width: scene.widthPx, height: scene.heightPx, frames: scene.frames },
      conditions,
    ),
  });
  return truth;
}
