import { writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import type { ImageFacts } from '@/lib/analysis-facts';
import type { ReadyStack, StackSource } from '@/stacks/stack-report';
import type { FlowMeasures } from '@/tracking/flow-measures';
import type { Conditions, Recipe, RecipeRequest, Tracks } from '@/tracking/types';
import { chunkFramesFor, chunksOf } from '../chunk-plan';
import type { ComputePool } from '../compute/pool';
import type { DetectChunkOutput } from '../compute/tasks';
import { readTrackFile } from '../compute/track-file';
import { LONG_TIMEOUT_MS } from '../job-timeouts';
import { InputError } from './local-stack';
import { measureFlowIn } from './measure-flow-in';
import { StageClock, type LocalStage } from './stage-clock';

export type { LocalStage } from './stage-clock';

export interface LocalRequest {
  source: StackSource;
  /** Empty folder for the frame index, and for spots and tracks between stages. */
  workDir: string;
  conditions: Conditions;
  recipe: RecipeRequest;
  /** Frames per chunk; results don't depend on it. */
  chunkFrames?: number;
  onProgress?: (stage: LocalStage, share: number) => void;
}

export interface LocalAnalysis {
  stack: ReadyStack;
  recipe: Recipe;
  facts: ImageFacts;
  spots: number;
  spotsPerFrame: number[];
  tracks: Tracks;
  measures: FlowMeasures;
  /** Wall-clock time of each stage, s; with several children the check runs beside the stages that follow. */
  timingsS: Record<LocalStage, number>;
  /** Wall-clock time of the whole, s. */
  wholeS: number;
  /** Processor time of each piece of work of a stage in the children, s, in the order in which they were asked for. */
  cpuS: Record<LocalStage, number[]>;
  /** Share of the time of detection that went into reading frames. */
  readingShare: number;
}

/**
 * A stack from bytes to numbers without server or database, through the same computations as the
 * jobs, spread over the children of the pool. The check of all frames is asked for behind the last piece of
 * detection, so that a child that has no part in linking has it to do; nothing is given out before it has ended well.
 * @throws InputError for a stack that can't be used, ComputeError for a recipe that can't be run.
 */
export async function analyseStack(request: LocalRequest, pool: ComputePool): Promise<LocalAnalysis> {
  const clock = new StageClock(request.onProgress);
  const { source, workDir } = request;
  const began = performance.now();
  clock.begin('check');
  const indexed = await pool.run(
    'indexStack',
    { source, outDir: workDir },
    { timeoutMs: LONG_TIMEOUT_MS, onCpu: clock.cpuOf('check') },
  );
  if (indexed.state === 'refused') throw new InputError(indexed.refusal.detail);
  let checking: Promise<ReadyStack> | null = null;
  const check = () => {
    if (!checking) {
      checking = checkStack(request, pool, clock);
      // What is wrong is heard below, once the frames are through; until then nobody listens.
      checking.catch(() => undefined);
    }
    return checking;
  };
  try {
    const analysed = await analyseFrames(request, indexed, pool, clock, check);
    const stack = await check();
    const wholeS = (performance.now() - began) / 1000;
    return { stack, ...analysed, timingsS: clock.timingsS, cpuS: clock.cpuS, wholeS };
  } catch (cause) {
    // What is wrong with the stack says more than what went wrong on its frames.
    await check();
    throw cause;
  }
}

async function checkStack(
  { source, workDir }: LocalRequest,
  pool: ComputePool,
  clock: StageClock,
): Promise<ReadyStack> {
  const report = await pool.run(
    'inspectStack',
    { source, outDir: workDir, expectedSha256: [], previews: false },
    { onProgress: clock.progressOf('check'), timeoutMs: LONG_TIMEOUT_MS, onCpu: clock.cpuOf('check') },
  );
  if (report.state === 'refused') throw new InputError(report.refusal.detail);
  clock.end('check');
  return report;
}

const NONE = new Uint8Array(0);
const spotsPath = (workDir: string, chunk: number) => join(workDir, `spots-${chunk}.bin`);

async function analyseFrames(
  { workDir, conditions, recipe: asked, chunkFrames }: LocalRequest,
  { frames, width, height }: { frames: number; width: number; height: number },
  pool: ComputePool,
  clock: StageClock,
  detectionAsked: () => void,
) {
  const image = { frames, width, height };
  const { model, recipe, facts } = await clock.time('measure-image', (options) =>
    pool.run(
      'measureImage',
      { stackDir: workDir, request: asked, pixelSizeM: conditions.pixelSize_m },
      options,
    ),
  );
  const found = await clock.time('detect-spots', ({ onProgress, onCpu }) => {
    const chunks = chunksOf(frames, chunkFrames ?? chunkFramesFor(frames, width, height));
    let done = 0;
    const detected = Promise.all(
      chunks.map(async ({ chunk, firstFrame, frames: many }): Promise<DetectChunkOutput> => {
        const input = { stackDir: workDir, model, modelKey: workDir, recipe, firstFrame, frames: many };
        const result = await pool.run('detectChunk', input, { key: workDir, onCpu });
        await writeFile(spotsPath(workDir, chunk), result.spots);
        result.spots = NONE;
        onProgress((done += many) / frames);
        return result;
      }),
    );
    detectionAsked();
    return detected;
  });
  const tracksPath = join(workDir, 'tracks.bin');
  const chunkPaths = found.map((_, chunk) => spotsPath(workDir, chunk));
  await clock.time('link-tracks', (options) =>
    pool.run(
      'linkTracks',
      { chunkPaths, tracksPath, image, recipe },
      { ...options, timeoutMs: LONG_TIMEOUT_MS },
    ),
  );
  const measures = await clock.time('measure-flow', (options) =>
    measureFlowIn(pool, { tracks: { path: tracksPath }, image, conditions, recipe }, options),
  );
  const sum = (pick: (chunk: DetectChunkOutput) => number) =>
    found.reduce((total, chunk) => total + pick(chunk), 0);
  return {
    recipe,
    facts,
    spots: sum(({ spotCount }) => spotCount),
    spotsPerFrame: found.flatMap(({ spotsPerFrame }) => spotsPerFrame),
    tracks: await readTrackFile(tracksPath),
    measures,
    readingShare: sum(({ readingMs }) => readingMs) / sum(({ tookMs }) => tookMs),
  };
}
