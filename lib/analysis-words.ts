import type { AnalysisView } from './views/analysis-view';
import type { WorkState } from './analysis-facts';

/** Stages in the words of the screen. */
export const STAGE_WORDS: Record<AnalysisView['stage'], string> = {
  'measure-image': 'measuring the image',
  'detect-spots': 'finding spots',
  'link-tracks': 'linking tracks',
  'measure-flow': 'measuring the flow',
  done: 'done',
};

export const STATE_WORDS: Record<WorkState, string> = {
  waiting: 'waiting',
  running: 'running',
  done: 'done',
  failed: 'failed',
  stopped: 'stopped',
};

type Progress = Pick<AnalysisView, 'state' | 'stage' | 'progress' | 'chunks' | 'frames'>;

/** Where an analysis is, in a few words: "finding spots, 1 200 of 2 000 frames". */
export function progressWords({ state, stage, chunks, frames }: Progress): string {
  if (state === 'waiting') return 'waits for a worker';
  if (state !== 'running') return STATE_WORDS[state];
  if (stage !== 'detect-spots' || chunks.total === 0) return STAGE_WORDS[stage];
  const done = Math.min(frames, Math.floor((chunks.done / chunks.total) * frames));
  return `${STAGE_WORDS[stage]}, ${done} of ${frames} frames`;
}
