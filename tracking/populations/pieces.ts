import { POPULATIONS, type Population, type Tracks } from '../types';
import type { StateChange } from './changes-of-state';
import { FREE, TRAPPED } from './codes';

/** A stretch of a track in one state. Plain JSON. */
export interface TrackSegment {
  track: number;
  fromFrame: number;
  /** Last frame of the stretch. */
  toFrame: number;
  population: Population;
  /** Probability of being trapped. */
  pTrapped: number;
}

/** Tracks cut where they change their state: each piece is a track of its own. */
export interface Pieces {
  tracks: Tracks;
  /** The track that a piece belongs to. */
  track: Uint32Array;
  /** Codes of `POPULATIONS`, by piece. */
  population: Uint8Array;
  /** ln odds of the state of a piece that a change ends or begins; NaN for whole tracks. */
  lnOdds: Float64Array;
}

/**
 * Cuts tracks at their changes of state, so that every velocity belongs to the state it was measured in.
 * Points are shared with the given tracks; pieces follow each other in the order of tracks.
 */
export function piecesOf(tracks: Tracks, population: Uint8Array, changes: readonly StateChange[]): Pieces {
  if (changes.length === 0) {
    const lnOdds = new Float64Array(tracks.count).fill(Number.NaN);
    return { tracks, track: Uint32Array.from({ length: tracks.count }, (_, i) => i), population, lnOdds };
  }
  const byTrack = new Map<number, StateChange[]>();
  for (const change of changes) byTrack.set(change.track, [...(byTrack.get(change.track) ?? []), change]);
  const start: number[] = [0];
  const track: number[] = [];
  const codes: number[] = [];
  const lnOdds: number[] = [];
  for (let i = 0; i < tracks.count; i++) {
    const from = tracks.start[i];
    const own = byTrack.get(i) ?? [];
    own.forEach((change, k) => {
      start.push(from + change.frame - tracks.frame[from]);
      track.push(i);
      // The first piece is in the state that the first change ends.
      codes.push(k === 0 ? stateBefore(change) : stateAfter(own[k - 1]));
      lnOdds.push(change.lnOdds);
    });
    start.push(tracks.start[i + 1]);
    track.push(i);
    codes.push(own.length > 0 ? stateAfter(own[own.length - 1]) : population[i]);
    lnOdds.push(own.length > 0 ? own[own.length - 1].lnOdds : Number.NaN);
  }
  return {
    tracks: { ...tracks, count: track.length, start: Uint32Array.from(start) },
    track: Uint32Array.from(track),
    population: Uint8Array.from(codes),
    lnOdds: Float64Array.from(lnOdds),
  };
}

const stateBefore = ({ kind }: StateChange) => (kind === 'capture' ? FREE : TRAPPED);
const stateAfter = ({ kind }: StateChange) => (kind === 'capture' ? TRAPPED : FREE);

/** Stretches of the tracks that change their state; other tracks have none. */
export function segmentsOf({ tracks, track, population, lnOdds }: Pieces): TrackSegment[] {
  const segments: TrackSegment[] = [];
  for (let k = 0; k < tracks.count; k++) {
    if (track[k] !== track[k - 1] && track[k] !== track[k + 1]) continue;
    segments.push({
      track: track[k],
      fromFrame: tracks.frame[tracks.start[k]],
      toFrame: tracks.frame[tracks.start[k + 1] - 1],
      population: POPULATIONS[population[k]],
      pTrapped: Number((1 / (1 + Math.exp(population[k] === TRAPPED ? -lnOdds[k] : lnOdds[k]))).toFixed(6)),
    });
  }
  return segments;
}
