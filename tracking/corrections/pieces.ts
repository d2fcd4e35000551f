import { trackSlice, type TrackSlice } from '../track-slice';
import type { Tracks } from '../types';
import { cut, firstFrame, NOT_GIVEN, type EditedTrack } from './edited-track';

/** A stretch of a track over which a person's word on its population does not change. */
export interface TrackPiece extends TrackSlice {
  /** Code of `POPULATIONS`, or `NOT_GIVEN`. */
  population: number;
}

/**
 * A track as it is measured: cut where a person's population begins or ends, so that no velocity
 * reaches from one population into another. Mostly the whole track as one piece.
 */
export function piecesOf(track: EditedTrack): TrackPiece[] {
  const pieces: TrackPiece[] = [];
  let from = 0;
  for (let i = 1; i <= track.given.length; i++) {
    if (i < track.given.length && track.given[i] === track.given[from]) continue;
    const whole = from === 0 && i === track.given.length;
    const piece = whole ? track : cut(track, firstFrame(track) + from, firstFrame(track) + i - 1);
    if (piece) {
      const { given, ...slice } = piece;
      pieces.push({ ...slice, population: given[0] });
    }
    from = i;
  }
  return pieces;
}

/** Stretches of points with a population given by a person: `[first frame, last frame, code]`. */
export function givenStretches(track: EditedTrack): [number, number, number][] {
  const stretches: [number, number, number][] = [];
  let from = 0;
  for (let i = 1; i <= track.given.length; i++) {
    if (i < track.given.length && track.given[i] === track.given[from]) continue;
    if (track.given[from] !== NOT_GIVEN) {
      stretches.push([track.frame[from], track.frame[i - 1], track.given[from]]);
    }
    from = i;
  }
  return stretches;
}

/** Tracks in one set of arrays, and the number of each. */
export interface NumberedTracks {
  tracks: Tracks;
  number: Uint32Array;
}

/** Packs tracks one behind the other, in the order given. */
export function packTracks(slices: readonly TrackSlice[]): NumberedTracks {
  const total = slices.reduce((sum, { frame }) => sum + frame.length, 0);
  const tracks: Tracks = {
    count: slices.length,
    start: new Uint32Array(slices.length + 1),
    frame: new Uint32Array(total),
    xPx: new Float32Array(total),
    yPx: new Float32Array(total),
    sxPx: new Float32Array(total),
    syPx: new Float32Array(total),
    brightness: new Float32Array(total),
    flags: new Uint8Array(total),
  };
  let at = 0;
  slices.forEach((slice, i) => {
    tracks.start[i] = at;
    for (const name of ['frame', 'xPx', 'yPx', 'sxPx', 'syPx', 'brightness', 'flags'] as const) {
      tracks[name].set(slice[name], at);
    }
    at += slice.frame.length;
  });
  tracks.start[slices.length] = total;
  return { tracks, number: Uint32Array.from(slices, ({ track }) => track) };
}

/** All tracks after corrections, by number. */
export function correctedTracks(
  raw: Tracks,
  changed: ReadonlyMap<number, EditedTrack | null>,
): NumberedTracks {
  const slices: TrackSlice[] = [];
  for (let number = 0; number < raw.count; number++) {
    const track = changed.get(number);
    if (track === undefined) slices.push(trackSlice(raw, number));
    else if (track) slices.push(track);
  }
  const made = [...changed].filter(([number, track]) => number >= raw.count && track !== null);
  for (const [, track] of made.sort(([a], [b]) => a - b)) slices.push(track!);
  return packTracks(slices);
}
