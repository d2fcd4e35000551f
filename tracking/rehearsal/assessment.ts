import type { RehearsalKind } from './plan';

// What is stored of the comparison with the truth, plain JSON: null stands for what can't be known.

export interface Share {
  value: number;
  /** 95 % interval. */
  low: number;
  high: number;
}

/** Tracers of about the same brightness. */
export interface BrightnessClass {
  /** Photoelectrons, ends and mean. */
  lowE: number;
  highE: number;
  meanE: number;
  /** Mean peak over the noise at the peak. */
  snr: number;
  truePoints: number;
  /** Share of its points that were found; the interval treats a tracer as one, not its points. */
  found: Share;
  /** Isolated points in the next three, which are root mean squares per axis, px. */
  isolated: number;
  errorPx: number | null;
  boundPx: number | null;
  statedPx: number | null;
}

export interface DetectionAssessment {
  truePoints: number;
  spots: number;
  found: Share;
  /** Spots that are no tracer; null where not all tracers are known. */
  falseSpots: number | null;
  falsePerFrame: number | null;
  falseAskedPerFrame: number;
  classes: BrightnessClass[];
  isolated: number;
  errorPx: number | null;
  boundPx: number | null;
  statedPx: number | null;
  /** Root mean square of error over stated error, 1 where errors are honest. */
  errorOverStated: number | null;
  /** Of the points that were missed: with another tracer so near that their images touch. */
  missedCrowded: number;
}

export interface TrackAssessment {
  trueTracks: number;
  tracks: number;
  /** Chenouard et al., Nat. Methods 11, 281 (2014), gate 5 px; the last four need all tracers to be known. */
  alpha: number;
  rmsePx: number | null;
  beta: number | null;
  jaccard: number | null;
  jaccardTracks: number | null;
  /** Of pairs of neighbouring points of tracks. */
  wrongLinkShare: number | null;
  /** Tracks over tracers, of tracers that were followed at all. */
  tracksPerTracer: number | null;
}

/** Tracks by what they follow (rows) and what they are called (columns). */
export interface PopulationAssessment {
  trapped: { trapped: number; free: number; undecided: number };
  free: { trapped: number; free: number; undecided: number };
  /** Tracks that follow no known tracer. */
  nothing: { trapped: number; free: number; undecided: number };
  /** Mean of the right shares of the decided tracks of both kinds; null where a kind is missing. */
  balancedAccuracy: number | null;
  undecidedShare: number | null;
}

export interface EventOutcome {
  t0S: number;
  xPx: number;
  yPx: number;
  /** Points of both tracers before and after, the smaller of the two. */
  pointsBefore: number;
  pointsAfter: number;
  outcome: 'found' | 'not accepted' | 'no candidate';
  /** Number of the candidate; null where there is none. */
  candidate: number | null;
  /** What the candidate fails. */
  failed: string[];
}

export interface EventAssessment {
  events: EventOutcome[];
  accepted: number;
  /** Accepted candidates that are events. */
  acceptedTrue: number;
  efficiency: Share | null;
  /** Null where it is not known of every candidate whether it is one. */
  purity: Share | null;
  /** By number of the candidate: an event, none, or null for what nobody can know. */
  truth: (boolean | null)[];
}

export interface EstimateAssessment {
  method: string;
  value: number | null;
  low: number | null;
  high: number | null;
  /** Value, low and high over the truth. */
  ratio: number | null;
  ratioLow: number | null;
  ratioHigh: number | null;
  coversTruth: boolean | null;
  note: string;
}

export type AdviceAbout =
  | 'frame rate'
  | 'seeding'
  | 'exposure'
  | 'light'
  | 'light sheet'
  | 'recipe'
  | 'populations'
  | 'events'
  | 'estimates'
  | 'errors';

export interface Advice {
  about: AdviceAbout;
  /** `change`: something in the way; `know`: to be kept in mind. */
  weight: 'change' | 'know';
  sentence: string;
}

export interface RehearsalAssessment {
  kind: RehearsalKind;
  detection: DetectionAssessment;
  tracks: TrackAssessment;
  populations: PopulationAssessment;
  events: EventAssessment;
  /** m^-2; null where the lines of the recording are not known. */
  trueLineDensityM2: number | null;
  estimates: EstimateAssessment[];
  advice: Advice[];
}
