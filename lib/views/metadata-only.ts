import type { AnalysisView } from './analysis-view';
import type { RecordingView } from './recording-view';
import type { RehearsalView } from './rehearsal-view';
import type { RunView } from './run-view';

/** A run as those see it who may know that it exists, but not what was measured. */
export function runMetadata(run: RunView): RunView {
  const {
    id,
    createdAt,
    updatedAt,
    revision,
    campaignId,
    name,
    startedAt,
    tags,
    createdBy,
    deletedAt,
    recordings,
  } = run;
  const derived = Object.fromEntries(Object.keys(run.derived).map((key) => [key, null]));
  return {
    ...{
      id,
      createdAt,
      updatedAt,
      revision,
      campaignId,
      name,
      startedAt,
      tags,
      createdBy,
      deletedAt,
      recordings,
    },
    notes: null,
    derived: derived as RunView['derived'],
    warnings: [],
    headline: null,
  };
}

/** A recording with its size and state, without anything that was seen in its frames. */
export function recordingMetadata(recording: RecordingView): RecordingView {
  const metadata = { pixelSize_m: null, frameInterval_s: null };
  return { ...recording, imageQuality: null, metadata, warnings: [] };
}

/** An analysis with its state, without results. */
export function analysisMetadata(analysis: AnalysisView): AnalysisView {
  return { ...analysis, recipe: {}, conditions: {}, imageFacts: null, summary: null };
}

/** A rehearsal with its state, without what was planned and found. */
export function rehearsalMetadata(rehearsal: RehearsalView): RehearsalView {
  return { ...rehearsal, plan: {}, recipe: {}, headline: null };
}
