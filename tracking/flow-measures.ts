import type { MarkedFrame } from './corrections/marked-frames';
import type { Acceleration } from './details/accelerations';
import type { ChannelProfiles } from './details/channel-profiles';
import type { Comparison } from './details/compare-with-expected';
import type { FeaturePoints } from './details/feature-points';
import type { TangleShape } from './details/tangle-shape';
import type { OverTime } from './details/tracers-over-time';
import type { Dispersion } from './dispersion/dispersion';
import type { Estimate } from './estimates/estimate';
import type { ReconnectionCandidate } from './pairs/candidate';
import type { StateChange } from './populations/changes-of-state';
import type { TrackSegment } from './populations/pieces';
import type { VelocityTail } from './tails/velocity-tails';
import type { VelocityPdf } from './velocity-pdf-shape';

/** What is measured of each track; entry i of every array belongs to track i. */
export interface TrackMeasures {
  /** Codes of `POPULATIONS`. */
  population: Uint8Array;
  /** Probability of being trapped; NaN where it was not computed. */
  pTrapped: Float32Array;
  /** Measured positions, bridged ones not counted. */
  positions: Uint32Array;
  /** Displacement between first and last measured position over time, m/s; NaN below 2 positions. */
  meanVxMS: Float32Array;
  meanVyMS: Float32Array;
  /** Mean speed at the first lag, m/s, noise included; NaN where the track is too short. */
  meanSpeedMS: Float32Array;
  /** Number of the group of tracers that move as one line, -1 for tracks that are not trapped. */
  line: Int32Array;
}

export type GroupName = 'trapped' | 'free' | 'unnamed';

/** One group of the mixture. */
export interface PopulationGroup {
  name: GroupName;
  /** Share of the tracks that could be judged. */
  weight: number;
  /** Mean velocity along the flow (along x where no flow is known), m/s. */
  meanAlongMS: number;
  /** Typical transverse r.m.s. velocity, noise subtracted, m/s. */
  transverseRmsMS: number;
}

export interface PopulationSummary {
  counts: { trapped: number; free: number; undecided: number };
  /** Tracks with enough positions to be judged. */
  judged: number;
  groups: PopulationGroup[];
  /** Bayesian information criterion for 1, 2, 3 groups; null where none was fitted. */
  bic: (number | null)[];
  /** Distance of two groups in units of their widths (Ashman, Bird & Zepf 1994), the larger of two features. */
  ashmanD: number | null;
  /** Trapped share of the tracks called trapped or free, with a Wilson interval; null for one population. */
  trappedFraction: { value: number; low: number; high: number; level: number } | null;
  /** What was decided and why, in a plain sentence. */
  note: string;
}

/** How velocities are made up beyond their distribution: spreading, memory, tails. */
export interface MotionMeasures extends Dispersion {
  tails: VelocityTail[];
}

/** What else is measured: over time, across the channel, beside what is expected, per track. Plain JSON. */
export interface FlowDetails {
  accelerations: Acceleration[];
  comparisons: Comparison[];
  overTime: OverTime;
  /** Null where the direction of the flow is not given. */
  profiles: ChannelProfiles | null;
  /** Null where tracers can't be told to share a line. */
  shape: TangleShape | null;
  features: FeaturePoints;
  /** Captures and releases, and the stretches that they cut tracks into. */
  changes: StateChange[];
  segments: TrackSegment[];
}

export interface PairSummary {
  /** Pairs that came within the closest approach, with enough points and a parting: those that were tested. */
  tested: number;
  accepted: number;
  /** Meetings of independent tracks expected from their number and speed alone; null without trapped tracks. */
  expectedByChance: number | null;
  /** Independent pairs laid over each other to learn what chance gives. */
  surrogates: number;
  note: string;
}

/** Everything that is measured from tracks. All but `tracks` is plain JSON. */
export interface FlowMeasures {
  tracks: TrackMeasures;
  populations: PopulationSummary;
  pdfs: VelocityPdf[];
  motion: MotionMeasures;
  pairs: PairSummary;
  /** In order of their meeting, then y, then x. */
  candidates: ReconnectionCandidate[];
  estimates: Estimate[];
  details: FlowDetails;
}

export interface ImageSize {
  width: number;
  height: number;
  frames: number;
}

/** What is known of some tracks beforehand; entry i of each belongs to track i. */
export interface KnownPopulations {
  /** 1 where population and probability stand, 2 where a person gave the population; 0 where they are to be found. */
  known: Uint8Array;
  /** Codes of `POPULATIONS`. */
  population: Uint8Array;
  /** NaN where there is none, as where a person decided. */
  pTrapped: Float32Array;
}

export interface MeasureFlowOptions {
  /** Populations of tracks that stand, as of tracks that a correction left alone. */
  known?: KnownPopulations;
  /** Lines that people marked. */
  marks?: readonly MarkedFrame[];
  /** Told the share done, 0 to 1, and what is being done. */
  onProgress?: (
    share: number,
    part: 'populations' | 'densities' | 'spreading' | 'tails' | 'pairs' | 'estimates',
  ) => void;
}
