import { mkdtemp, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { makeDemoStack, type DemoScene } from '@/jobs/demo/make-demo-stack';
import type { Conditions } from '@/tracking/types';

export const smallConditions: Conditions = {
  pixelSize_m: 8e-6,
  frameInterval_s: 4e-3,
  exposure_s: 5e-4,
  sheetThickness_m: 1e-4,
  temperature_K: 1.85,
  heatFlux_W_m2: 300,
  flowDirection: [1, 0],
  tracer: { species: 'solid deuterium', diameter_m: 4e-6, density_kg_m3: 202 },
};

export const smallScene: DemoScene = {
  widthPx: 160,
  heightPx: 160,
  frames: 48,
  lineDensityM2: 4e7,
  trappedInSight: 40,
  freeInSight: 25,
  vnMPerS: 1.8e-3,
  tangleMPerS: -0.8e-3,
  events: 2,
  brightnessE: 700,
  seed: 11,
};

/** A simulated stack and its conditions file in a folder of their own. @returns their paths */
export async function writeSmallStack(
  scene: Partial<DemoScene> = {},
): Promise<{ folder: string; stack: string; conditionsFile: string }> {
  const folder = await mkdtemp(join(process.env.TEST_FOLDER || tmpdir(), 'stack-'));
  const stack = join(folder, 'small.tif');
  const conditionsFile = join(folder, 'conditions.json');
  await makeDemoStack(stack, { ...smallScene, ...scene }, smallConditions);
  await writeFile(conditionsFile, JSON.stringify(smallConditions));
  return { folder, stack, conditionsFile };
}
