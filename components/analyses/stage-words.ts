import { filledBeads, type ThreadStage } from '@/components/ui/thread-beads';
import type { AnalysisStage } from '@/lib/analysis-facts';
import { formatCount } from '@/lib/format/count';
import type { AnalysisView } from '@/lib/views/analysis-view';

type Progress = Pick<AnalysisView, 'state' | 'stage' | 'progress' | 'chunks' | 'frames'>;

const STAGES: readonly Exclude<AnalysisStage, 'done'>[] = [
  'measure-image',
  'detect-spots',
  'link-tracks',
  'measure-flow',
];

/** Beads of each stage: measuring the image, finding spots, linking, measuring the flow. */
const BEADS: Record<(typeof STAGES)[number], number> = {
  'measure-image': 3,
  'detect-spots': 14,
  'link-tracks': 6,
  'measure-flow': 6,
};

const AT_WORK: Record<(typeof STAGES)[number], string> = {
  'measure-image': 'measuring the image',
  'detect-spots': 'finding spots',
  'link-tracks': 'linking tracks',
  'measure-flow': 'measuring the flow',
};

/** An analysis as beads along its stages. Only finding spots has a share of its own: that of its chunks. */
export function progressStages(analysis: Progress): ThreadStage[] {
  const at = analysis.stage === 'done' ? STAGES.length : STAGES.indexOf(analysis.stage);
  return STAGES.map((stage, index) => {
    const beads = BEADS[stage];
    if (analysis.state === 'done' || index < at) return { beads, filled: beads };
    if (index > at || analysis.state === 'waiting') return { beads, filled: 0 };
    if (stage !== 'detect-spots') return { beads, filled: 0.5 };
    const { done, total } = analysis.chunks;
    return { beads, filled: total > 0 ? Math.max(0.5, filledBeads(done / total, beads)) : 0.5 };
  });
}

/** How far it is, in words. */
export function progressWords(analysis: Progress): string {
  const { state, stage, chunks, frames } = analysis;
  const percent = `${Math.floor(analysis.progress * 100)} %`;
  if (state === 'waiting') return 'waiting for a worker';
  if (state === 'done') return 'done';
  const where = stage === 'done' ? '' : AT_WORK[stage];
  if (state === 'stopped') return `stopped while ${where}, at ${percent}`;
  if (state === 'failed') return `failed while ${where}, at ${percent}`;
  if (stage === 'detect-spots' && chunks.total > 0) {
    const about = Math.min(frames, Math.round((frames * chunks.done) / chunks.total));
    return `${where}, ${formatCount(about)} of ${formatCount(frames)} frames, ${percent} of all`;
  }
  return `${where}, ${percent} of all`;
}
