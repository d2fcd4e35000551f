import { spotFigures, sumSpotErrors, type FoundSpots, type SpotFigures } from '@/tracking/assess/spot-errors';
import type { ComparedTracks } from '@/tracking/assess/track-overlap';
import { scoreTracks, type TrackScores } from '@/tracking/assess/track-scores';
import type { TrueSpots } from '@/tracking/assess/true-spots';
import { MIXED_SNR_LEAST } from '@/tracking/studies/mixed-recording';
import type { BenchRecording } from './recording';

/** CPU seconds of one pass over the recording by one process. */
export interface StageSeconds {
  reading: number;
  /** Measuring the model of the image, once per recording; the script on SciPy is told what it needs. */
  measuring: number;
  /** Filter and maxima, a part of detection. */
  search: number;
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
  /** Measured points in tracks. */
  points: ComparedTracks & FoundSpots;
}

export type Accuracy = SpotFigures & TrackScores;

/** Accuracy of the points that stand in tracks, by the same measure for every pipeline. */
export function accuracyOf({ points }: PipelineRun, { scene }: BenchRecording, truth: TrueSpots): Accuracy {
  return {
    ...spotFigures(sumSpotErrors(scene, truth, points, MIXED_SNR_LEAST)),
    ...scoreTracks(scene, points, scene.frames),
  };
}

/** Every stage at its middle time, so that one disturbed round counts for nothing. */
export function medianRun(runs: readonly PipelineRun[]): PipelineRun {
  const median = (stage: keyof StageSeconds) => {
    const sorted = runs.map(({ seconds }) => seconds[stage]).sort((a, b) => a - b);
    return sorted[Math.floor(sorted.length / 2)];
  };
  return {
    ...runs[0],
    peakMB: Math.max(...runs.map(({ peakMB }) => peakMB)),
    seconds: {
      reading: median('reading'),
      measuring: median('measuring'),
      search: median('search'),
      detection: median('detection'),
      linking: median('linking'),
      whole: median('whole'),
    },
  };
}
