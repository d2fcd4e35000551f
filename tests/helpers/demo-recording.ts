import { mkdir, stat } from 'node:fs/promises';
import { enqueueIngest } from '@/jobs/ingest-recording';
import { makeDemoStack, type DemoScene } from '@/jobs/demo/make-demo-stack';
import { stackFile, stackFolder } from '@/jobs/stack-folder';
import { newId } from '@/lib/ids';
import { getSequelize } from '@/models/database';
import { models } from '@/models';
import type { Recording } from '@/models/recording';
import type { Conditions } from '@/tracking/types';
import { makeRun, type LabRows } from './lab-rows';
import { until } from './until';

/** Conditions of the stacks that tests of the whole road make. */
export const CONDITIONS: Conditions = {
  pixelSize_m: 8e-6,
  frameInterval_s: 4e-3,
  exposure_s: 5e-4,
  sheetThickness_m: 1e-4,
  temperature_K: 1.65,
  heatFlux_W_m2: 200,
  flowDirection: [1, 0],
  tracer: { species: 'solid deuterium', diameter_m: 4e-6, density_kg_m3: 202 },
};

/** A small recording that still has both populations. */
export const SCENE: DemoScene = {
  widthPx: 160,
  heightPx: 128,
  frames: 48,
  lineDensityM2: 2e7,
  trappedInSight: 25,
  freeInSight: 15,
  vnMPerS: 2.5e-3,
  tangleMPerS: -6e-4,
  events: 1,
  brightnessE: 500,
  seed: 7,
};

/** A run with `CONDITIONS`. */
export const makeSceneRun = (lab: LabRows) =>
  makeRun(lab, {
    pixelSizeM: CONDITIONS.pixelSize_m,
    frameIntervalS: CONDITIONS.frameInterval_s,
    exposureS: CONDITIONS.exposure_s,
    sheetThicknessM: CONDITIONS.sheetThickness_m,
    temperatureK: CONDITIONS.temperature_K,
    heatFluxWM2: CONDITIONS.heatFlux_W_m2,
    flowDirection: CONDITIONS.flowDirection,
    tracer: CONDITIONS.tracer,
  });

/**
 * A recording whose bytes have arrived and whose check was asked for.
 * @param put writes the file at the path given; a simulated stack when left out
 */
export async function arriveRecording(
  lab: LabRows,
  put: (path: string) => Promise<unknown> = (path) => makeDemoStack(path, SCENE, CONDITIONS),
  fields: Partial<Recording> = {},
): Promise<Recording> {
  const id = newId();
  const run = await makeSceneRun(lab);
  await mkdir(stackFolder(id), { recursive: true });
  await put(stackFile(id));
  const { size } = await stat(stackFile(id));
  return getSequelize().transaction(async (transaction) => {
    const recording = await models().Recording.create(
      {
        id,
        labId: lab.labId,
        runId: run.id,
        name: 'scene.tif',
        kind: 'file',
        bytes: String(size),
        state: 'checking',
        createdBy: lab.userId,
        ...fields,
      },
      { transaction },
    );
    await enqueueIngest({ recordingId: id, labId: lab.labId }, transaction);
    return recording;
  });
}

/** Waits until the check of a recording is over. */
export async function checked(recording: Recording): Promise<Recording> {
  return until(
    () => recording.reload(),
    ({ state }) => state !== 'checking',
    { withinMs: 60_000, everyMs: 100 },
  );
}
