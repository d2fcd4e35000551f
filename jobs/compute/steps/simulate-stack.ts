import { rename, stat, writeFile } from 'node:fs/promises';
import { openStack, type StackReader } from '@/stacks/open-stack';
import { cameraOf, makeTruth } from '@/tracking/rehearsal/make-scene';
import type { RehearsalPlan } from '@/tracking/rehearsal/plan';
import { encodeTruth, type RehearsalTruth } from '@/tracking/rehearsal/truth';
import { plantInFrame } from '@/tracking/simulate/plant-frame';
import { createRenderer } from '@/tracking/simulate/render';
import type { SceneCamera } from '@/tracking/simulate/scene';
import { omeDescription } from '../../ome-description';
import { writeTiff } from '../../write-tiff';
import type { SimulateStackInput, SimulateStackOutput } from '../tasks';
import { modelOf } from './measure-image';
import type { WorkContext } from './work-context';

const SCENE_SHARE = 0.1;

/**
 * Makes the stack of a rehearsal and keeps its truth beside it; both appear under their names only
 * once they are whole. The same plan gives the same bytes.
 */
export async function simulateStack(
  { plan, sourceDir, stackPath, truthPath }: SimulateStackInput,
  context: WorkContext,
): Promise<SimulateStackOutput> {
  const source = sourceDir === null ? null : await openStack(sourceDir);
  try {
    const made = source ? await planted(plan, source, context) : simulated(plan);
    const { scene } = made.truth;
    const { widthPx: width, heightPx: height, frames } = scene;
    context.onProgress(SCENE_SHARE);
    await writeTiff(stackPath, {
      width,
      height,
      frames,
      async frame(index) {
        context.onProgress(SCENE_SHARE + (1 - SCENE_SHARE) * (index / frames));
        return made.frame(index);
      },
      description: omeDescription({ width, height, frames }, plan.conditions),
    });
    const part = `${truthPath}.part`;
    await writeFile(part, encodeTruth(made.truth));
    await rename(part, truthPath);
    return { bytes: (await stat(stackPath)).size };
  } finally {
    await source?.close();
  }
}

interface Made {
  truth: RehearsalTruth;
  frame(index: number): Uint16Array | Promise<Uint16Array>;
}

function simulated(plan: RehearsalPlan): Made {
  const truth = makeTruth(plan, cameraOf(plan));
  const renderer = createRenderer(truth.scene, truth.camera);
  return { truth, frame: (index) => renderer.renderFrame(index) };
}

/** Particles of known truth in the frames of a stack, with the camera that took it as measured. */
async function planted(asked: RehearsalPlan, stack: StackReader, context: WorkContext): Promise<Made> {
  const { width: widthPx, height: heightPx, frames } = stack;
  const plan = { ...asked, scene: { ...asked.scene, widthPx, heightPx, frames } };
  const { conditions, seed } = plan;
  const { model } = await modelOf(stack, {}, conditions.pixelSize_m, {
    onProgress: (share) => context.onProgress(SCENE_SHARE * share),
  });
  const camera: SceneCamera = {
    spotSigmaPx: model.spotSigmaPx,
    backgroundE: Math.max(0, mean(model.backgroundE)),
    sheetEdgeLight: 1,
    ripple: 0,
    readNoiseE: model.readNoiseE,
    gainCountsPerE: model.gainCountsPerE,
    offsetCounts: model.offsetCounts,
    bitDepth: 16,
    seed,
    exposureFrames: Math.min(1, (conditions.exposure_s ?? 0) / conditions.frameInterval_s),
  };
  const truth = makeTruth(plan, camera, 'planted');
  // Only the light of the planted ones: everything else is in the frames already.
  const renderer = createRenderer(truth.scene, { ...camera, backgroundE: 0 });
  const mostCounts = Math.min(stack.maxCount, 65_535);
  const room = await stack.readFrame(0);
  return {
    truth,
    async frame(index) {
      const { counts } = await stack.readFrame(index, room);
      return plantInFrame(counts, renderer.expected(index), index, {
        gainCountsPerE: model.gainCountsPerE,
        mostCounts,
        seed,
      });
    },
  };
}

function mean(values: Float32Array): number {
  let sum = 0;
  for (const value of values) sum += value;
  return values.length > 0 ? sum / values.length : 0;
}
