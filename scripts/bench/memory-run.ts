import { mkdir, rm, stat } from 'node:fs/promises';
import { join } from 'node:path';
import { ComputePool } from '@/jobs/compute/pool';
import { writeTiff } from '@/jobs/write-tiff';
import { analyseStack, type LocalStage } from '@/jobs/local/analyse-stack';
import { localStack } from '@/jobs/local/local-stack';
import { LOCAL_STAGES } from '@/jobs/local/stage-clock';
import { mixedCamera, mixedScene } from '@/tracking/simulate/mixed-scene';
import { createRenderer } from '@/tracking/simulate/render';
import { lookAtChild } from './child-memory';
import { figure, textTable } from './text-table';

/** Frames that are rendered; a longer stack repeats them. */
const RENDERED = 60;
const SEED = 1;
const LOOK_MS = 20;
const CONDITIONS = { pixelSize_m: 1e-5, frameInterval_s: 5e-3, sheetThickness_m: 1e-4 };

/** How far a computing process's resident memory went above what it had after its start, MB. */
export interface MemoryRun {
  frames: number;
  stackMB: number;
  startMB: number;
  /** Peak of each stage less the start. */
  growthMB: Record<LocalStage, number>;
}

/** Frames of the sparse set, to be repeated to any length. */
export function renderFrames(): { width: number; height: number; frames: Uint16Array[] } {
  const scene = mixedScene({ set: 'sparse', seed: SEED, frames: RENDERED });
  const renderer = createRenderer(scene, mixedCamera(SEED));
  const frames = Array.from({ length: RENDERED }, (_, index) => renderer.renderFrame(index));
  return { width: scene.widthPx, height: scene.heightPx, frames };
}

/**
 * Analyses a stack of that many frames in one fresh computing process.
 * @returns null where the system doesn't tell how much memory a process has.
 */
export async function runMemory(
  rendered: ReturnType<typeof renderFrames>,
  frames: number,
  folder: string,
  childPath: string,
): Promise<MemoryRun | null> {
  const { width, height } = rendered;
  const workDir = join(folder, `memory-${frames}`);
  const path = join(folder, `memory-${frames}.tif`);
  await mkdir(workDir);
  const frame = (index: number) => rendered.frames[index % RENDERED];
  await writeTiff(path, { width, height, frames, frame });
  const pool = new ComputePool(1, { childPath });
  try {
    const startMB = await startedMB(pool, rendered, folder);
    if (startMB === null) return null;
    const growthMB = Object.fromEntries(LOCAL_STAGES.map((stage) => [stage, 0])) as Record<
      LocalStage,
      number
    >;
    let now: LocalStage = LOCAL_STAGES[0];
    // A process that keeps too much ends with its task, so it is looked at while it lives.
    const look = () => {
      const peakMB = lookAtChild()?.peakMB ?? Number.NaN;
      if (peakMB - startMB > growthMB[now]) growthMB[now] = peakMB - startMB;
    };
    const timer = setInterval(look, LOOK_MS);
    const onProgress = (stage: LocalStage) => {
      look();
      now = stage;
    };
    const source = await localStack(path);
    try {
      await analyseStack({ source, workDir, conditions: CONDITIONS, recipe: {}, onProgress }, pool);
    } finally {
      clearInterval(timer);
    }
    return { frames, stackMB: (await stat(path)).size / 2 ** 20, startMB, growthMB };
  } finally {
    await pool.close();
    await rm(path, { force: true });
    await rm(workDir, { recursive: true, force: true });
  }
}

/** A computing process starts with its first task; this one is as small as can be. */
async function startedMB(
  pool: ComputePool,
  { width, height, frames }: ReturnType<typeof renderFrames>,
  folder: string,
): Promise<number | null> {
  const path = join(folder, 'memory-start.tif');
  const outDir = join(folder, 'memory-start');
  await mkdir(outDir);
  await writeTiff(path, { width, height, frames: 1, frame: () => frames[0] });
  const source = await localStack(path);
  await pool.run('inspectStack', { source, outDir, expectedSha256: [], previews: false });
  await rm(outDir, { recursive: true });
  return lookAtChild()?.nowMB ?? null;
}

/** Growth by stage for each length. */
export function memoryTable(runs: readonly MemoryRun[]): string {
  return textTable([
    ['memory of one process, MB', ...runs.map(({ frames }) => `${figure(frames)} frames`)],
    ['stack', ...runs.map(({ stackMB }) => figure(stackMB))],
    ['after its start', ...runs.map(({ startMB }) => figure(startMB))],
    ...LOCAL_STAGES.map((stage) => [
      `growth, ${stage}`,
      ...runs.map(({ growthMB }) => figure(growthMB[stage])),
    ]),
    ['growth, most', ...runs.map((run) => figure(mostGrowth(run)))],
  ]);
}

export const mostGrowth = ({ growthMB }: MemoryRun): number => Math.max(...Object.values(growthMB));
