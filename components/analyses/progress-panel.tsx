'use client';

import { useState } from 'react';
import { useStopAnalysis } from '@/components/data/use-analysis';
import { Button } from '@/components/ui/button';
import { ConfirmDialog } from '@/components/ui/dialog';
import { ErrorState } from '@/components/ui/page-states';
import { FINAL_STATES } from '@/lib/analysis-facts';
import { progressWords, STAGE_WORDS } from '@/lib/analysis-words';
import { formatCount } from '@/lib/format/count';
import type { AnalysisView } from '@/lib/views/analysis-view';
import { AnalysisThread } from './analysis-thread';

interface ProgressPanelProps {
  analysis: AnalysisView;
  /** Why this person can't stop it; null when they can. */
  stopReason: string | null;
}

/** How far an analysis is, with the way to stop it; nothing once it is done. */
export function ProgressPanel({ analysis, stopReason }: ProgressPanelProps) {
  const [asking, setAsking] = useState(false);
  const stop = useStopAnalysis(analysis.id);
  const { state, stage, chunks } = analysis;
  if (state === 'done') return null;
  return (
    <div className="border-b border-line pb-3">
      <div className="flex flex-wrap items-center gap-x-5 gap-y-2">
        <AnalysisThread analysis={analysis} />
        <p aria-live="polite" className="text-note tabular-nums text-ink-2">
          {sentence(analysis)}
        </p>
        {FINAL_STATES.includes(state) || stopReason ? null : (
          <Button className="ml-auto" onClick={() => setAsking(true)}>
            Stop
          </Button>
        )}
      </div>
      {state === 'failed' ? (
        <div className="pt-2">
          <ErrorState what={`It failed while ${STAGE_WORDS[stage]}.`}>
            {analysis.error?.detail} Finished frames are kept; start another analysis from the recording.
          </ErrorState>
        </div>
      ) : null}
      <ConfirmDialog
        open={asking}
        onClose={() => setAsking(false)}
        question="Stop this analysis?"
        keep="Keep running"
        act="Stop it"
        onAct={async () => {
          await stop.mutateAsync();
        }}
      >
        {chunks.done > 0
          ? `Spots of ${formatCount(chunks.done)} of ${formatCount(chunks.total)} pieces of the stack are kept, but tracks and numbers will be missing.`
          : 'Nothing has been measured yet. The recording stays as it is.'}
      </ConfirmDialog>
    </div>
  );
}

function sentence(analysis: AnalysisView): string {
  const { state, stage, progress } = analysis;
  if (state === 'stopped') return `Stopped while ${STAGE_WORDS[stage]}. What was finished is kept.`;
  if (state === 'failed') return `Failed at ${Math.floor(progress * 100)} %.`;
  if (state === 'waiting') return 'Waits for a worker. You can leave this page; it goes on.';
  return `${progressWords(analysis)}, ${Math.floor(progress * 100)} % of all. You can leave this page; it goes on.`;
}
