import type { AnalysisSummary, ImageFacts } from '@/lib/analysis-facts';
import type { ReconnectionRow, VerdictText } from '@/lib/tables/reconnections-csv';
import type { Estimate } from '@/tracking/estimates/estimate';
import type { FlowDetails, MotionMeasures, PopulationSummary } from '@/tracking/flow-measures';
import type { RehearsalKind } from '@/tracking/rehearsal/plan';
import type { Conditions, Recipe } from '@/tracking/types';
import type { VelocityPdf } from '@/tracking/velocity-pdf-shape';
import type { ExportFormat } from './export-facts';

export interface Contributor {
  name: string;
  orcid: string | null;
  affiliation: string | null;
}

/** One step of one reader, or of the one who settled. */
export interface JudgementStep {
  event: number;
  kind: 'reading' | 'settlement';
  step: number;
  verdict: string;
  reason: string | null;
  note: string | null;
  by: string;
  at: string;
}

/** One appended change of the tracks. */
export interface CorrectionStep {
  revision: number;
  kind: string;
  /** What was changed and how, as it was sent. */
  detail: Record<string, unknown>;
  by: string;
  at: string;
}

/** A candidate whose frames around closest approach are in the package as a picture. */
export interface PlannedStrip {
  candidateId: string;
  event: number;
}

/** All of an analysis that a package holds but tracks and velocities, which are read as they are written. */
export interface PlannedAnalysis {
  id: string;
  /** Folder in the package. */
  folder: string;
  tracksRevision: number;
  campaign: { id: string; name: string };
  /** What it rehearses, where no camera took the recording. */
  rehearsal: { id: string; name: string; kind: RehearsalKind } | null;
  run: { id: string; name: string; startedAt: string | null };
  recording: { id: string; name: string; sha256: string | null; bytes: number; frames: number; width: number; height: number }; // prettier-ignore
  conditions: Conditions;
  recipe: Recipe;
  recipeName: string | null;
  imageFacts: ImageFacts | null;
  summary: AnalysisSummary | null;
  codeVersion: string;
  createdBy: string | null;
  startedAt: string | null;
  finishedAt: string | null;
  /** The hash is the SHA-256 of all that was signed off, hex. */
  signedOff: { at: string; by: string | null; contentHash: string } | null;
  measures: {
    populations: PopulationSummary;
    pdfs: VelocityPdf[];
    estimates: Estimate[];
    motion: MotionMeasures | null;
    /** Over time, across the channel, captures; null in analyses older than these. */
    details: FlowDetails | null;
  };
  candidates: ReconnectionRow[];
  /** By event; empty where nobody decided. */
  verdicts: VerdictText[];
  judgements: JudgementStep[];
  corrections: CorrectionStep[];
  /** Left out where no figures are wanted. */
  strips?: PlannedStrip[];
}

/** What a package is made of, fixed when its building begins. */
export interface ExportPlan {
  title: string;
  description: string;
  laboratory: string;
  licence: string;
  contributors: Contributor[];
  formats: ExportFormat[];
  figures: boolean;
  /** Version of the code that writes the package. */
  codeVersion: string;
  /** Day of the newest result or sign-off in it: the same data make the same package on any day. */
  date: string;
  analyses: PlannedAnalysis[];
}

/** Newest moment of the analyses in it, as a day. */
export function dateOf(analyses: readonly Pick<PlannedAnalysis, 'signedOff' | 'finishedAt'>[]): string {
  const moments = analyses.map(({ signedOff, finishedAt }) => signedOff?.at ?? finishedAt ?? '');
  return moments.reduce((latest, one) => (one > latest ? one : latest), '1970-01-01').slice(0, 10);
}
