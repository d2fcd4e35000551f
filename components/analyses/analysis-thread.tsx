import { ProgressThread } from '@/components/ui/progress-thread';
import { analysisStages, type AnalysisStage } from '@/components/ui/thread-beads';
import { progressWords } from '@/lib/analysis-words';
import type { AnalysisView } from '@/lib/views/analysis-view';

type Progress = Pick<AnalysisView, 'state' | 'stage' | 'progress' | 'chunks' | 'frames'>;

/** Populations and estimates are one stage of work; the thread shows its begin. */
const BEADS_OF_STAGE: Record<Exclude<AnalysisView['stage'], 'done'>, AnalysisStage> = {
  'measure-image': 'frames',
  'detect-spots': 'detection',
  'link-tracks': 'tracks',
  'measure-flow': 'populations',
};

/** How far an analysis is, as beads along its stages. */
export function AnalysisThread({ analysis }: { analysis: Progress }) {
  const { state, stage, chunks } = analysis;
  const tone = state === 'failed' ? 'red' : state === 'stopped' ? 'amber' : 'ink';
  const at =
    state === 'done' || stage === 'done'
      ? ('done' as const)
      : state === 'waiting'
        ? ('waiting' as const)
        : {
            stage: BEADS_OF_STAGE[stage],
            share: stage === 'detect-spots' && chunks.total > 0 ? chunks.done / chunks.total : 0.05,
          };
  return <ProgressThread stages={analysisStages(at)} tone={tone} label={progressWords(analysis)} />;
}
