import type { ReconnectionCandidate } from '@/tracking/pairs/candidate';

/** States of an analysis and of each piece of its work. */
export type WorkState = 'waiting' | 'running' | 'done' | 'failed' | 'stopped';

export const FINAL_STATES: readonly WorkState[] = ['done', 'failed', 'stopped'];

/** Stages of an analysis in their order. */
export const ANALYSIS_STAGES = [
  'measure-image',
  'detect-spots',
  'link-tracks',
  'measure-flow',
  'done',
] as const;
export type AnalysisStage = (typeof ANALYSIS_STAGES)[number];

/** What was measured of the camera and the tracers' images. */
export interface ImageFacts {
  gainCountsPerE: number;
  offsetCounts: number;
  readNoiseE: number;
  spotSigmaPx: number;
  /** How much tracers differ in it, standard deviation, px: where fits choose the size of each; else left out. */
  spotSigmaSpreadPx?: number;
  badPixels: number;
}

/** Counts of a finished analysis. */
export interface AnalysisSummary {
  spots: number;
  tracks: number;
  trackPoints: number;
  bridgedPoints: number;
  trapped: number;
  free: number;
  undecided: number;
  candidates: number;
  acceptedCandidates: number;
}

/** A candidate as stored: its series as plain lists. */
export type CandidateFacts = Omit<ReconnectionCandidate, 'series'> & {
  series: {
    frame: number[];
    tS: number[];
    separationM: number[];
    errorM: number[];
    lawM: number[];
    flyByM: number[];
  };
};
