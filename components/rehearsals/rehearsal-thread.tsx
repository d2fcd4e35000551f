import { ProgressThread } from '@/components/ui/progress-thread';
import { filledBeads } from '@/components/ui/thread-beads';
import type { RehearsalView } from '@/lib/views/rehearsal-view';

/** Beads of each stage: frames made, stack checked, analysis, comparison. */
const STAGES = [
  { until: 0.35, beads: 6 },
  { until: 0.45, beads: 2 },
  { until: 0.95, beads: 10 },
  { until: 1, beads: 2 },
] as const;

const STAGE_WORDS: Record<RehearsalView['stage'], string> = {
  simulate: 'making the frames',
  check: 'checking the stack',
  analyse: 'analysing',
  assess: 'comparing with the truth',
  done: 'done',
};

/** Where a rehearsal is, in a few words. */
export function rehearsalWords({ state, stage }: Pick<RehearsalView, 'state' | 'stage'>): string {
  if (state === 'waiting') return 'waits for a worker';
  return state === 'running' ? STAGE_WORDS[stage] : state;
}

/** What it was doing when it ended. */
export const stageWords = (stage: RehearsalView['stage']): string => STAGE_WORDS[stage];

/** How far a rehearsal is, as beads along its stages. */
export function RehearsalThread({ rehearsal }: { rehearsal: RehearsalView }) {
  const { state, progress } = rehearsal;
  const stages = STAGES.map(({ until, beads }, i) => {
    const from = i === 0 ? 0 : STAGES[i - 1].until;
    return { beads, filled: filledBeads((progress - from) / (until - from), beads) };
  });
  const tone = state === 'failed' ? 'red' : state === 'stopped' ? 'amber' : 'ink';
  return <ProgressThread stages={stages} tone={tone} label={rehearsalWords(rehearsal)} />;
}
