/** What is known of a recording, as stored and as answered. */

export type RecordingState = 'arriving' | 'checking' | 'ready' | 'refused';

export interface StackWarning {
  code: string;
  detail: string;
}

/** Why a stack can't be used, and what could still be done with it. */
export interface StackRefusal {
  code: string;
  detail: string;
  /** Number of intact frames that can be used instead. */
  usePages?: number;
  /** Channels of a colour stack, any of which or their mean can be used. */
  channels?: number;
}

/** Values found inside the file: proposals that a person confirms. */
export interface RecordingMetadata {
  pixelSizeM?: number;
  frameIntervalS?: number;
}

/** How good the pictures are. Counts are camera counts. */
export interface ImageQuality {
  /** Median temporal noise, counts r.m.s. */
  noiseCounts: number;
  /** Share of pixels at the top of the range, 0..1. */
  saturatedShare: number;
  /** Drift of the picture from the first frames to the last, px. */
  driftPx: { x: number; y: number } | null;
  /** Mean counts at these frames, thinned to at most 200. */
  brightness: { frame: number[]; meanCounts: number[] };
  /** Counts that a display should map to black and white. */
  low: number;
  high: number;
}
