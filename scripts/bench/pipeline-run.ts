import { assessPoints } from '@/tracking/assess';
import type { ComparedTracks } from '@/tracking/assess/track-overlap';
import { scoreTracks } from '@/tracking/assess/track-scores';
import type { BenchRecording } from './recording';

/** CPU seconds of one pass over the recording by one process, warm. */
export interface StageSeconds {
  reading: number;
  /** Measuring the model of the image, once per recording; the script on SciPy is told what it needs. */
  measuring: number;
  /** Filter alone, a part of detection. */
  filter: number;
  /** All of detection without reading. */
  detection: number;
  linking: number;
  /** What tracks cost: reading, measuring the image, detection, linking. */
  whole: number;
}

export interface PipelineRun {
  name: string;
  seconds: StageSeconds;
  spots: number;
  links: number;
  peakMB: number;
  points: ComparedTracks & { sxPx: ArrayLike<number>; syPx: ArrayLike<number> };
}

/** Accuracy of the points that stand in tracks, by the same measure for every pipeline. */
export function accuracyOf({ points }: PipelineRun, { scene, camera, frames }: BenchRecording) {
  const { foundShare, isolatedFoundShare, falseShare, rmsOverBound } = assessPoints(scene, camera, points);
  const { alpha, jaccard } = scoreTracks(scene, points, frames);
  return { foundShare, isolatedFoundShare, falseShare, rmsOverBound, alpha, jaccard };
}

/** The run in the middle by time, so that one disturbed round counts for nothing. */
export function medianRun(runs: readonly PipelineRun[]): PipelineRun {
  const median = (pick: (seconds: StageSeconds) => number) => {
    const sorted = runs.map(({ seconds }) => pick(seconds)).sort((a, b) => a - b);
    return sorted[Math.floor(sorted.length / 2)];
  };
  return {
    ...runs[0],
    peakMB: Math.max(...runs.map(({ peakMB }) => peakMB)),
    seconds: {
      reading: median((s) => s.reading),
      measuring: median((s) => s.measuring),
      filter: median((s) => s.filter),
      detection: median((s) => s.detection),
      linking: median((s) => s.linking),
      whole: median((s) => s.whole),
    },
  };
}
