import type { RehearsalAssessment } from '@/tracking/rehearsal/assessment';

/** What a rehearsal goes through, in order. */
export const REHEARSAL_STAGES = ['simulate', 'check', 'analyse', 'assess', 'done'] as const;
export type RehearsalStage = (typeof REHEARSAL_STAGES)[number];

/** An assessment as stored and shown: which candidate is an event stays out of sight of its readers. */
export type StoredAssessment = Omit<RehearsalAssessment, 'events'> & {
  events: Omit<RehearsalAssessment['events'], 'truth'>;
};
