import type { Population } from '../types';

/** A point that a person set, with what the detector's fit says of it where it was asked. */
export interface GivenPoint {
  frame: number;
  x_px: number;
  y_px: number;
  /** Standard errors of the position, px; left out for a point set by eye. */
  sx_px?: number;
  sy_px?: number;
  /** Photoelectrons. */
  brightness?: number;
}

/** A place in the image, px: x, then y. */
export type PlacePx = [xPx: number, yPx: number];

/**
 * Marks of lines, which leave the tracks as they are.
 *
 * - `mark-line`: a person drew a vortex line along the tracers on it, as it is in one frame, through `points`.
 * - `complete-frame`: a person looked the frame through, and all lines that can be seen in it are marked.
 */
export type Mark =
  { kind: 'mark-line'; frame: number; points: PlacePx[] } | { kind: 'complete-frame'; frame: number };

/**
 * One change of the tracks, or a mark beside them. Frames count from 0; positions are px, as in `Tracks`.
 *
 * - `split`: frames before `frame` stay the track, those from `frame` on become a new one.
 * - `join`: both become one track with the number of the one that begins first.
 * - `trim`: keeps the points of frames `from` to `to`, both included.
 * - `add-point`: in a frame in which the track was missed, or beyond its ends; with `track: null` it begins
 *   a new track.
 * - `reclass`: a person's population for the track, or for its frames `from` to `to`.
 * - `undo`: takes a correction back, with all of its gesture; of an undo, puts back what that took.
 */
export type Correction =
  | { kind: 'split'; track: number; frame: number }
  | { kind: 'join'; track: number; with: number }
  | { kind: 'trim'; track: number; from: number; to: number }
  | { kind: 'remove'; track: number }
  | ({ kind: 'add-point'; track: number | null } & GivenPoint)
  | ({ kind: 'move-point'; track: number } & GivenPoint)
  | { kind: 'reclass'; track: number; population: Population; from?: number; to?: number }
  | Mark
  | { kind: 'undo'; of: string };

export type CorrectionKind = Correction['kind'];

export const CORRECTION_KINDS = [
  'split',
  'join',
  'trim',
  'remove',
  'add-point',
  'move-point',
  'reclass',
  'mark-line',
  'complete-frame',
  'undo',
] as const satisfies readonly CorrectionKind[];

/** A correction with its place in a log: corrections of one gesture are taken back together. */
export type LoggedCorrection = Correction & { id: string; gesture?: string | null };

/** Whether a correction is a mark of lines: no track is another one after it. */
export const isMark = <T extends { kind: string }>(correction: T): correction is Extract<T, Mark> =>
  correction.kind === 'mark-line' || correction.kind === 'complete-frame';

/** Whether a correction makes a track, and so takes the next free number. */
export const makesTrack = (correction: Correction): boolean =>
  correction.kind === 'split' || (correction.kind === 'add-point' && correction.track === null);

/** A correction that can't be made: one sentence, and the field or the later corrections that forbid it. */
export class CorrectionRefusal extends Error {
  constructor(
    message: string,
    /** Field of the correction that is wrong; '' for the whole. */
    readonly path: string = '',
    /** Places in the log of later corrections that build on the one to be taken back. */
    readonly dependents: readonly number[] = [],
  ) {
    super(message);
    this.name = 'CorrectionRefusal';
  }
}
