import type { ImageFacts } from '@/lib/analysis-facts';
import type { ReadyStack, StackSource } from '@/stacks/stack-report';
import type { FlowMeasures } from '@/tracking/flow-measures';
import type { Conditions, Recipe, RecipeRequest, Tracks } from '@/tracking/types';
import { chunkFramesFor, chunksOf } from '../chunk-plan';
import type { ComputePool } from '../compute/pool';
import type { DetectChunkOutput } from '../compute/tasks';
import { LONG_TIMEOUT_MS } from '../job-timeouts';
import { InputError } from './local-stack';

export type LocalStage = 'check' | 'measure-image' | 'detect-spots' | 'link-tracks' | 'measure-flow';

export interface LocalRequest {
  source: StackSource;
  /** Empty folder for the frame index. */
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
  /** Wall-clock time of each stage, s. */
  timingsS: Record<LocalStage, number>;
  /** Share of the time of detection that went into reading frames. */
  readingShare: number;
}

/**
 * A stack from bytes to numbers without server or database, through the same computations as the
 * jobs; detection is spread over the children of the pool.
 * @throws InputError for a stack that can't be used, ComputeError for a recipe that can't be run.
 */
export async function analyseStack(request: LocalRequest, pool: ComputePool): Promise<LocalAnalysis> {
  const { source, workDir, conditions } = request;
  const timingsS = {} as Record<LocalStage, number>;
  const stage = async <T>(
    name: LocalStage,
    work: (onProgress: (share: number) => void) => Promise<T>,
  ): Promise<T> => {
    const began = performance.now();
    request.onProgress?.(name, 0);
    const result = await work((share) => request.onProgress?.(name, share));
    timingsS[name] = (performance.now() - began) / 1000;
    request.onProgress?.(name, 1);
    return result;
  };

  const stack = await stage('check', async (onProgress) => {
    const report = await pool.run(
      'inspectStack',
      { source, outDir: workDir, expectedSha256: [], previews: false },
      { onProgress, timeoutMs: LONG_TIMEOUT_MS },
    );
    if (report.state === 'refused') throw new InputError(report.refusal.detail);
    return report;
  });
  const image = { frames: stack.frames, width: stack.width, height: stack.height };
  const measured = await stage('measure-image', (onProgress) =>
    pool.run(
      'measureImage',
      { stackDir: workDir, request: request.recipe, pixelSizeM: conditions.pixelSize_m },
      { onProgress },
    ),
  );
  const { model, recipe, facts } = measured;

  const chunkFrames = request.chunkFrames ?? chunkFramesFor(image.frames, image.width, image.height);
  const found = await stage('detect-spots', (onProgress) => {
    const chunks = chunksOf(image.frames, chunkFrames);
    let done = 0;
    return Promise.all(
      chunks.map(async ({ firstFrame, frames }): Promise<DetectChunkOutput> => {
        const input = { stackDir: workDir, model, modelKey: workDir, recipe, firstFrame, frames };
        const result = await pool.run('detectChunk', input, { key: workDir });
        onProgress((done += frames) / image.frames);
        return result;
      }),
    );
  });

  const tracks = await stage('link-tracks', (onProgress) =>
    pool.run(
      'linkTracks',
      { chunks: found.map(({ spots }) => spots), image, recipe },
      { onProgress, timeoutMs: LONG_TIMEOUT_MS },
    ),
  );
  const measures = await stage('measure-flow', (onProgress) =>
    pool.run(
      'measureFlow',
      { tracks, image, conditions, recipe },
      { onProgress, timeoutMs: LONG_TIMEOUT_MS },
    ),
  );
  const sum = (pick: (chunk: DetectChunkOutput) => number) =>
    found.reduce((total, chunk) => total + pick(chunk), 0);
  return {
    stack,
    recipe,
    facts,
    spots: sum(({ spotCount }) => spotCount),
    spotsPerFrame: found.flatMap(({ spotsPerFrame }) => spotsPerFrame),
    tracks,
    measures,
    timingsS,
    readingShare: sum(({ readingMs }) => readingMs) / sum(({ tookMs }) => tookMs),
  };
}
