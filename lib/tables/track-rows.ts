import { NOT_GIVEN, withGiven } from '@/tracking/corrections/edited-track';
import { piecesOf } from '@/tracking/corrections/pieces';
import type { TrackSegment } from '@/tracking/populations/pieces';
import { trackSlice, type TrackSlice } from '@/tracking/track-slice';
import { POPULATIONS, type Conditions, type Tracks } from '@/tracking/types';

/** Scale of a table in metres and seconds. */
export type TableScale = Pick<Conditions, 'pixelSize_m' | 'frameInterval_s'>;

/** One track as tables write it. */
export interface TableTrack extends TrackSlice {
  /** Code of `POPULATIONS`, null where populations were not computed. */
  population: number | null;
  /** Probability of being trapped, NaN where unknown. */
  pTrapped: number;
  /** Stretches in different states, where the tracer was caught or came off within the track. */
  segments?: readonly TrackSegment[];
  /** Populations that a person gave: first frame, last frame, code. Left out where there are none. */
  given?: readonly GivenStretch[];
}

/** Population and probability of a track in one frame, as tables write them. */
export function stateAt(track: TableTrack, frame: number): { population: string; pTrapped: number } {
  // What a person says goes before what was found, and is no probability.
  const given = givenAt(track, frame);
  if (given !== null) return { population: populationText(given), pTrapped: Number.NaN };
  const segment = track.segments?.find(({ fromFrame, toFrame }) => frame >= fromFrame && frame <= toFrame);
  return segment ?? { population: populationText(track.population), pTrapped: track.pTrapped };
}

/** Stretches by track number. */
export function segmentsByTrack(segments: readonly TrackSegment[]): Map<number, TrackSegment[]> {
  const byTrack = new Map<number, TrackSegment[]>();
  for (const segment of segments)
    byTrack.set(segment.track, [...(byTrack.get(segment.track) ?? []), segment]);
  return byTrack;
}

/** A stretch of a track whose population a person gave: first frame, last frame, code of `POPULATIONS`. */
export type GivenStretch = readonly [number, number, number];

/** The code that a person gave to a frame of a track; null where none. */
export function givenAt(track: Pick<TableTrack, 'given'>, frame: number): number | null {
  const stretch = track.given?.find(([from, to]) => from <= frame && frame <= to);
  return stretch ? stretch[2] : null;
}

/** A track cut where a population given by a person begins or ends, as it is measured. */
export function tablePieces(track: TableTrack): TableTrack[] {
  if (!track.given || track.given.length === 0) return [track];
  return piecesOf(withGiven(track, track.given)).map(({ population, ...slice }) =>
    population === NOT_GIVEN
      ? { ...slice, population: track.population, pTrapped: track.pTrapped, segments: track.segments }
      : { ...slice, population, pTrapped: Number.NaN },
  );
}

/** Goes through tracks in order of their numbers; nothing is copied. */
export function* tableTracks(
  tracks: Tracks,
  populations: { population: Uint8Array; pTrapped: Float32Array } | null,
  segments: readonly TrackSegment[] = [],
): Generator<TableTrack> {
  const byTrack = segmentsByTrack(segments);
  for (let i = 0; i < tracks.count; i++) {
    yield {
      ...trackSlice(tracks, i),
      population: populations ? populations.population[i] : null,
      pTrapped: populations ? populations.pTrapped[i] : Number.NaN,
      ...(byTrack.has(i) ? { segments: byTrack.get(i) } : {}),
    };
  }
}

/** Name of a population for a table; empty where unknown. */
export function populationText(code: number | null): string {
  return code === null ? '' : (POPULATIONS[code] ?? '');
}
