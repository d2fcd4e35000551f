import { trackSlice, type TrackSlice } from '../track-slice';
import type { Conditions, Tracks } from '../types';
import { placeAcross, type Standardised } from './feature-table';
import type { Component } from './component';
import { densityMeter, marginal } from './gaussian-mixture';
import { PIECE_FEATURES, PieceFeatures } from './piece-features';
import { FEATURE_POSITIONS_MIN, FEATURES } from './track-features';

/** A free tracer that was caught by a line, or a trapped one that came off. Plain JSON. */
export interface StateChange {
  track: number;
  kind: 'capture' | 'release';
  /** First frame of the new state. */
  frame: number;
  /** ln odds that the weaker of the two pieces is in the state that it is given. */
  lnOdds: number;
}

/** Both groups in the units of the standardised features. */
export interface StateModel {
  scaled: Standardised;
  trapped: Component;
  free: Component;
}

/** Shorter tracks are not looked at: both states need enough positions to be told (common practice, no source). */
export const CHANGE_POSITIONS_MIN = 30;
/** Positions of each piece at least. */
export const PIECE_POSITIONS_MIN = Math.max(10, FEATURE_POSITIONS_MIN);
/**
 * Each piece must be told by these odds on its own. Many places are tried in every track, so they lie well
 * beyond those of a track as a whole; fewer than 1 in 200 tracks without a change are split then.
 */
const LN_ODDS_MIN = 6;
/** Places that are looked at first; then every place around the best of them. */
const COARSE_PLACES = 24;
/** Splits of a track at most on either side of its first one. */
const DEPTH_MOST = 2;

/**
 * Where tracks change their state. A track is cut at the place at which its two pieces are told best as
 * one free and one trapped by the groups that were found among whole tracks; a cut counts where each piece
 * is clear by itself. Short pieces have large measurement errors, which the odds allow for.
 *
 * @returns changes by track, then frame.
 */
export function changesOfState(
  tracks: Tracks,
  image: { width: number; height: number },
  conditions: Pick<Conditions, 'pixelSize_m' | 'frameInterval_s'>,
  flow: readonly [number, number],
  model: StateModel,
): StateChange[] {
  const place = placeAcross(image, flow);
  const { centre, scale } = model.scaled;
  const trapped = marginal(model.trapped, FEATURES, PIECE_FEATURES);
  const free = marginal(model.free, FEATURES, PIECE_FEATURES);
  const lnDensity = densityMeter(PIECE_FEATURES);
  const row = {
    n: 1,
    dims: PIECE_FEATURES,
    value: new Float64Array(PIECE_FEATURES),
    variance: new Float64Array(PIECE_FEATURES),
    coordinate: new Float64Array(1),
  };
  const oddsOf =
    (pieces: PieceFeatures) =>
    (from: number, to: number): number => {
      if (!pieces.read(from, to)) return Number.NaN;
      for (let d = 0; d < PIECE_FEATURES; d++) {
        row.value[d] = (pieces.value[d] - centre[d]) / scale[d];
        row.variance[d] = pieces.variance[d] / scale[d] ** 2;
      }
      row.coordinate[0] = place(pieces.acrossPx);
      return lnDensity(row, 0, trapped) - lnDensity(row, 0, free);
    };
  const changes: StateChange[] = [];
  for (let i = 0; i < tracks.count; i++) {
    if (tracks.start[i + 1] - tracks.start[i] < CHANGE_POSITIONS_MIN) continue;
    const slice = trackSlice(tracks, i);
    const found: StateChange[] = [];
    const odds = oddsOf(new PieceFeatures(slice, conditions, flow));
    search(slice, 0, slice.frame.length, 0, odds, found);
    found.sort((a, b) => a.frame - b.frame);
    // A state must end before it can begin again: of two like changes in a row the first stands.
    changes.push(...found.filter((change, k) => k === 0 || change.kind !== found[k - 1].kind));
  }
  return changes;
}

function search(
  slice: TrackSlice,
  from: number,
  to: number,
  depth: number,
  odds: (from: number, to: number) => number,
  found: StateChange[],
): void {
  if (to - from < CHANGE_POSITIONS_MIN || depth > DEPTH_MOST) return;
  let best = { at: -1, lnOdds: 0, sum: 0, kind: 'capture' as StateChange['kind'] };
  const look = (at: number) => {
    const a = odds(from, at);
    const b = odds(at, to);
    // Odds are those of trapped over free: a capture has a free piece first.
    const lnOdds = Math.min(-a, b) > Math.min(a, -b) ? Math.min(-a, b) : Math.min(a, -b);
    const sum = Math.abs(a) + Math.abs(b);
    if (!(lnOdds > 0) || !(sum > best.sum)) return;
    best = { at, lnOdds, sum, kind: b > a ? 'capture' : 'release' };
  };
  const low = from + PIECE_POSITIONS_MIN;
  const high = to - PIECE_POSITIONS_MIN;
  const step = Math.max(1, Math.ceil((high - low) / COARSE_PLACES));
  for (let at = low; at <= high; at += step) look(at);
  if (best.at < 0) return;
  const middle = best.at;
  for (let at = Math.max(low, middle - step + 1); at < Math.min(high + 1, middle + step); at++) look(at);
  if (best.lnOdds < LN_ODDS_MIN) return;
  found.push({ track: slice.track, kind: best.kind, frame: slice.frame[best.at], lnOdds: best.lnOdds });
  search(slice, from, best.at, depth + 1, odds, found);
  search(slice, best.at, to, depth + 1, odds, found);
}
